import type { DuckDBConnection, DuckDBVector } from "@duckdb/node-api";
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

export interface NumberColumn {
  /** NaN where empty, declared missing, or no number. */
  readonly values: Float64Array;
  readonly odd: readonly OddText[];
}

export interface ReadColumns {
  readonly texts: readonly CodedColumn[];
  readonly numbers: readonly NumberColumn[];
}

/**
 * The text columns (each one column, or several joined by blanks) coded, and the numbers as they were loaded, row by row as
 * in the file. Texts become codes in the database: a station or date is written thousands of times, but parsed once.
 */
export async function readColumns(
  database: DuckDBConnection,
  table: LoadedTable,
  texts: readonly (readonly string[])[],
  numbers: number,
  missing: readonly string[],
): Promise<ReadColumns> {
  const column = (name: string) => `coalesce(c${table.dialect.header.indexOf(name)}, '')`;
  const joined = (names: readonly string[]) => names.map(column).join(" || ' ' || ");
  const distinct: string[][] = [];
  for (const [i, names] of texts.entries()) {
    await database.run(`DROP TYPE IF EXISTS text${i}`);
    const told = await database.runAndReadAll(`SELECT DISTINCT ${joined(names)} AS x FROM raw ORDER BY x`);
    distinct.push(told.getRowsJson().map(([text]) => String(text)));
    if (distinct[i].length > 0)
      await database.run(`CREATE TYPE text${i} AS ENUM (${distinct[i].map(literal).join(", ")})`);
  }
  const codes = texts.map(() => new Int32Array(table.rows));
  const values = Array.from({ length: numbers }, () => new Float64Array(table.rows));
  if (table.rows > 0) {
    const result = await database.stream(
      `SELECT ${[
        ...texts.map((names, i) => `enum_code(CAST(${joined(names)} AS text${i}))::INTEGER`),
        ...values.map((_, j) => `coalesce(n${j}, 'nan'::DOUBLE)`),
      ].join(", ")} FROM raw`,
    );
    let at = 0;
    for (;;) {
      const chunk = await result.fetchChunk();
      if (chunk === null || chunk.rowCount === 0) break;
      const n = chunk.rowCount;
      for (const [j, into] of [...codes, ...values].entries()) {
        copyInto(into, at, chunk.getColumnVector(j), n);
      }
      at += n;
    }
  }
  const declared = declaredMissing(missing);
  const odd: (readonly OddText[])[] = [];
  for (const [j, one] of values.entries())
    odd.push(blankOut(one, declared) ? await oddTexts(database, `o${j}`, missing) : []);
  return {
    texts: codes.map((one, i) => ({ codes: one, texts: distinct[i] })),
    numbers: values.map((one, j) => ({ values: one, odd: odd[j] })),
  };
}

/**
 * The first n items of a vector without missing ones, from `at` on. A vector's own array is copied at once (item by item
 * takes most of the reading's time); where this version of the package keeps none, its items are asked for.
 */
function copyInto(into: Int32Array | Float64Array, at: number, vector: DuckDBVector, n: number): void {
  const items = itemsOf(vector);
  if (items instanceof Float64Array || items instanceof Int32Array) into.set(items.subarray(0, n), at);
  else for (let i = 0; i < n; i++) into[at + i] = Number(vector.getItem(i));
}

/** A vector's own array, where this version of the package keeps one. */
export function itemsOf(vector: DuckDBVector): unknown {
  return "items" in vector ? vector.items : undefined;
}

/** The numbers among the texts that mean missing. */
export function declaredMissing(missing: readonly string[]): readonly number[] {
  return missing
    .filter((text) => text.trim() !== "")
    .map((text) => Number(text.replace(",", ".")))
    .filter((one) => !Number.isNaN(one));
}

/**
 * Declared missing numbers become NaN (−9999 also where it is written −9999.0), so do `nan` and `inf`, which the cast
 * takes; true if any value is NaN then.
 */
function blankOut(values: Float64Array, marks: readonly number[]): boolean {
  let holes = false;
  for (let i = 0; i < values.length; i++) {
    const value = values[i];
    // The difference of a finite number and itself is 0, of any other NaN.
    if (value - value === 0 && !(marks.length > 0 && marks.includes(value))) continue;
    values[i] = Number.NaN;
    holes = true;
  }
  return holes;
}

async function oddTexts(
  database: DuckDBConnection,
  text: string,
  missing: readonly string[],
): Promise<readonly OddText[]> {
  const known = ["", ...missing.map((one) => one.trim())].map(literal).join(", ");
  const told = await database.runAndReadAll(
    `SELECT ${text} AS t, count(*)::INTEGER, min(rowid)::INTEGER AS first FROM raw
     WHERE ${text} NOT IN (${known}) GROUP BY t ORDER BY first`,
  );
  return told
    .getRowsJson()
    .map(([odd, count, first]) => ({ text: String(odd), count: Number(count), firstRow: Number(first) }));
}
