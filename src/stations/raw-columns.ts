import { literal } from "./database.ts";

/** A column of numbers to be read; the trace text stands for its value. */
export interface NumberSource {
  readonly column: string;
  readonly trace?: { readonly text: string; readonly value: number };
}

/** Which columns of a table are taken: as text by position, as numbers in the order asked for. */
export interface RawColumns {
  readonly texts: readonly number[];
  readonly numbers: readonly (Pick<NumberSource, "trace"> & { readonly at: number })[];
}

/** The positions of named columns; every column as text if none is named at all. */
export function rawColumns(
  header: readonly string[],
  texts: readonly string[],
  numbers: readonly NumberSource[],
): RawColumns {
  const positions =
    texts.length + numbers.length === 0 ? header.keys() : texts.map((name) => header.indexOf(name));
  return {
    texts: [...new Set(positions)].sort((a, b) => a - b),
    numbers: numbers.map(({ column, trace }) => ({
      at: header.indexOf(column),
      ...(trace === undefined ? {} : { trace }),
    })),
  };
}

/**
 * The columns of the table `raw`: text i as `c{i}`, blanks around it taken off; number j as `n{j}` (NULL where it is none),
 * with its text in `o{j}` where it is not a finite number. Numbers are cast while the file is read, since to keep them as
 * text and cast them later costs as much as the reading itself. `text` names the text of column i in the source.
 */
export function rawSelection(
  { texts, numbers }: RawColumns,
  decimal: "." | ",",
  source: string,
  text: (i: number) => string,
): string {
  const inner = numbers.map(({ at, trace }, j) => {
    const number = numberSql(text(at), decimal);
    if (trace === undefined) return `${number} AS n${j}`;
    return `CASE WHEN trim(${text(at)}) = ${literal(trace.text)} THEN ${trace.value}::DOUBLE ELSE ${number} END AS n${j}`;
  });
  const columns = [
    ...texts.map((i) => `trim(${text(i)}) AS c${i}`),
    ...numbers.flatMap(({ at }, j) => [
      `n${j}`,
      `CASE WHEN n${j} IS NULL OR NOT isfinite(n${j}) THEN trim(${text(at)}) END AS o${j}`,
    ]),
  ];
  return `SELECT ${columns.join(", ")} FROM (SELECT ${["*", ...inner].join(", ")} FROM ${source})`;
}

/** A number (perhaps not a finite one), or NULL. The cast alone would take `1_000`. */
export function numberSql(text: string, decimal: "." | ","): string {
  // With decimal commas a point can only part thousands: such a text is no number here.
  const plain = decimal === "," ? `replace(replace(${text}, '.', '_'), ',', '.')` : text;
  return `CASE WHEN contains(${plain}, '_') THEN NULL ELSE TRY_CAST(${plain} AS DOUBLE) END`;
}
