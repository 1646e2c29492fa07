import type { DuckDBConnection } from "@duckdb/node-api";
import { literal } from "./database.ts";
import type { LoadedTable } from "./loaded-table.ts";

/** A text column as codes into its sorted distinct texts (blanks around them taken off; an empty cell is ""). */
export interface CodedColumn {
  readonly codes: Int32Array;
  readonly texts: readonly string[];
}

/** A text of a number column that is neither a number nor declared missing. */
export interface OddText {
  readonly text: string;
  readonly count: number;
  readonly firstRow: number;
}

/** A column of numbers to be read; the trace text stands for its value. */
export interface NumberSource {
  readonly column: string;
  readonly trace?: { readonly text: string; readonly value: number };
}

export interface NumberColumn {
  /** NaN where empty, declared missing, or no number. */
  readonly values: Float64Array;
  readonly odd: readonly OddText[];
}

/**
 * The text columns (each one column, or several joined by blanks) coded and the number columns converted, row by row as in the file. Texts become codes in the database
 * (a station or date is written thousands of times, but parsed once per distinct text); numbers are converted there, too.
 */
export async function readColumns(
  database: DuckDBConnection,
  table: LoadedTable,
  texts: readonly (readonly string[])[],
  numbers: readonly NumberSource[],
  missing: readonly string[],
): Promise<{ readonly texts: readonly CodedColumn[]; readonly numbers: readonly NumberColumn[] }> {
  const plain = (name: string) => `c${table.dialect.header.indexOf(name)}`;
  const column = (name: string) => `coalesce(${plain(name)}, '')`;
  const joined = (names: readonly string[]) => names.map(column).join(" || ' ' || ");
  const distinct: string[][] = [];
  for (const [i, names] of texts.entries()) {
    await database.run(`DROP TYPE IF EXISTS text${i}`);
    const told = await database.runAndReadAll(`SELECT DISTINCT ${joined(names)} AS x FROM raw ORDER BY x`);
    distinct.push(told.getRowsJson().map(([text]) => String(text)));
    if (distinct[i].length > 0)
      await database.run(`CREATE TYPE text${i} AS ENUM (${distinct[i].map(literal).join(", ")})`);
  }
  const number = ({ column, trace }: NumberSource) => {
    const sql = numberSql(plain(column), table.dialect.decimal);
    if (trace === undefined) return sql;
    return `CASE WHEN ${plain(column)} = ${literal(trace.text)} THEN ${trace.value}::DOUBLE ELSE ${sql} END`;
  };
  const codes = texts.map(() => new Int32Array(table.rows));
  const values = numbers.map(() => new Float64Array(table.rows));
  if (table.rows > 0) {
    const result = await database.stream(
      `SELECT ${[
        ...texts.map((names, i) => `enum_code(CAST(${joined(names)} AS text${i}))::INTEGER`),
        ...numbers.map((one) => `coalesce(${number(one)}, 'nan'::DOUBLE)`),
      ].join(", ")} FROM raw`,
    );
    let at = 0;
    for (;;) {
      const chunk = await result.fetchChunk();
      if (chunk === null || chunk.rowCount === 0) break;
      const n = chunk.rowCount;
      for (const [j, into] of [...codes, ...values].entries()) {
        const vector = chunk.getColumnVector(j);
        for (let i = 0; i < n; i++) into[at + i] = Number(vector.getItem(i));
      }
      at += n;
    }
  }
  const declared = missing.filter((text) => text.trim() !== "").map((text) => Number(text.replace(",", ".")));
  const odd: (readonly OddText[])[] = [];
  for (const [j, one] of numbers.entries()) {
    const holes = blankOut(values[j], declared);
    odd.push(holes ? await oddTexts(database, plain(one.column), number(one), missing) : []);
  }
  return {
    texts: codes.map((one, i) => ({ codes: one, texts: distinct[i] })),
    numbers: values.map((one, j) => ({ values: one, odd: odd[j] })),
  };
}

/** A number (perhaps not a finite one), or NULL. The cast alone would take `1_000`. */
export function numberSql(text: string, decimal: "." | ","): string {
  // With decimal commas a point can only part thousands: such a text is no number here.
  const plain = decimal === "," ? `replace(replace(${text}, '.', '_'), ',', '.')` : text;
  return `CASE WHEN contains(${plain}, '_') THEN NULL ELSE TRY_CAST(${plain} AS DOUBLE) END`;
}

/**
 * Declared missing numbers become NaN (−9999 also where it is written −9999.0), so do `nan` and `inf`, which the cast
 * takes; true if any value is NaN then.
 */
function blankOut(values: Float64Array, declared: readonly number[]): boolean {
  const marks = declared.filter((one) => !Number.isNaN(one));
  let holes = false;
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i]) || marks.includes(values[i])) values[i] = Number.NaN;
    if (Number.isNaN(values[i])) holes = true;
  }
  return holes;
}

async function oddTexts(
  database: DuckDBConnection,
  text: string,
  number: string,
  missing: readonly string[],
): Promise<readonly OddText[]> {
  const known = ["", ...missing.map((one) => one.trim())].map(literal).join(", ");
  const told = await database.runAndReadAll(
    `SELECT ${text} AS t, count(*)::INTEGER, min(rowid)::INTEGER AS first FROM raw
     WHERE ${text} NOT IN (${known}) AND NOT coalesce(isfinite(${number}), false) GROUP BY t ORDER BY first`,
  );
  return told
    .getRowsJson()
    .map(([odd, count, first]) => ({ text: String(odd), count: Number(count), firstRow: Number(first) }));
}
