import type { DuckDBConnection } from "@duckdb/node-api";
import type { Files } from "../effects/effects.ts";
import { literal } from "./database.ts";
import { BLANKS, type Dialect } from "./dialect.ts";
import { physicalLines } from "./lines.ts";
import { csvSource, type TableWish } from "./load-table.ts";
import type { LoadedTable } from "./loaded-table.ts";
import { readWhole, seeBytes } from "./packed.ts";
import { type CodedColumn, declaredMissing, itemsOf, type ReadColumns } from "./read-columns.ts";
import { newCoder } from "./text-codes.ts";

/**
 * Reads a clean text file in one pass, chunk by chunk into typed arrays, without a table in between: the fast way for what most
 * large files are. Gives undefined as soon as anything in it asks for a closer look (a row of another width, a text among
 * numbers, `nan`, digits parted by `_`, which the database would take for a number): then the slow way finds out what it is.
 */
export async function quickRead(
  database: DuckDBConnection,
  files: Files,
  file: string,
  wish: TableWish,
  groups: readonly (readonly string[])[],
  missing: readonly string[],
  dialect: Dialect,
): Promise<{ readonly table: LoadedTable; readonly read: ReadColumns } | undefined> {
  const { numbers } = wish;
  const plain = dialect.encoding === "utf-8" && dialect.delimiter !== BLANKS && dialect.comment === undefined;
  if (!plain || numbers.some((one) => one.trace !== undefined)) return undefined;
  const at = numbers.map((one) => dialect.header.indexOf(one.column));
  const coded = new Set(groups.flat().map((name) => dialect.header.indexOf(name)));
  // A column that is wanted as a number and as a text too, or twice: rare, and not worth a second way.
  if (new Set(at).size < at.length || at.some((i) => coded.has(i))) return undefined;
  const seen = await seeBytes(files, file);
  if (seen.parted) return undefined;
  const marks = missing
    .map((text) => text.trim())
    .filter((text) => text !== "" && Number.isNaN(Number(text)));
  const nulls = marks.length === 0 ? "" : `, nullstr = [${["", ...marks].map(literal).join(", ")}]`;
  const decimal = dialect.decimal === "," ? ", decimal_separator = ','" : "";
  const typeOf = (i: number) => (at.includes(i) ? "DOUBLE" : "VARCHAR");
  const source = csvSource(files, file, dialect, typeOf, nulls + decimal);
  const joined = groups.map((names) =>
    names
      .map((name) => `coalesce(c${dialect.header.indexOf(name)}, '')`)
      .map((text) => (names.length > 1 ? `trim(${text})` : text))
      .join(" || ' ' || "),
  );
  await database.run("DROP TABLE IF EXISTS reject_errors; DROP TABLE IF EXISTS reject_scans;");
  const result = await database
    .stream(
      `SELECT ${[
        ...joined.flatMap((text) => [`hash(${text})`, text]),
        ...at.map((i) => `coalesce(c${i}, '-infinity'::DOUBLE)`),
        ...(marks.length === 0 ? [] : [`(${joined.map((text) => `${text} = ''`).join(" OR ")})`]),
      ].join(", ")} FROM ${source}`,
    )
    .catch(() => undefined);
  if (result === undefined) return undefined;
  const coders = groups.map(newCoder);
  // No row without a line of its own, so this is room enough but for lines that end with a carriage return alone.
  let room = Math.max(seen.lines - dialect.skip, 0);
  const codes = groups.map(() => new Int32Array(room));
  const values = numbers.map(() => new Float64Array(room));
  const declared = declaredMissing(missing);
  let rows = 0;
  for (;;) {
    const chunk = await result.fetchChunk().catch(() => undefined);
    // A file that cannot be read to its end: the slow way says why.
    if (chunk === undefined) return undefined;
    if (chunk === null || chunk.rowCount === 0) break;
    const n = chunk.rowCount;
    if (rows + n > room) {
      room = Math.max(2 * room, rows + n);
      for (const [j, list] of codes.entries()) codes[j] = widened(list, new Int32Array(room));
      for (const [j, list] of values.entries()) values[j] = widened(list, new Float64Array(room));
    }
    for (const [j, coder] of coders.entries()) {
      const hashes = itemsOf(chunk.getColumnVector(2 * j));
      if (!(hashes instanceof BigUint64Array)) return undefined;
      const texts = chunk.getColumnVector(2 * j + 1);
      coder.take(hashes, n, (i) => String(texts.getItem(i)), codes[j], rows);
    }
    for (const j of numbers.keys()) {
      const items = itemsOf(chunk.getColumnVector(2 * groups.length + j));
      if (!(items instanceof Float64Array)) return undefined;
      values[j].set(items.subarray(0, n), rows);
      if (!emptied(values[j], rows, rows + n, declared)) return undefined;
    }
    if (marks.length > 0) {
      // A mark for a missing value in a text column would be lost as text.
      const empty = chunk.getColumnVector(2 * groups.length + numbers.length);
      for (let i = 0; i < n; i++) if (empty.getItem(i) === true) return undefined;
    }
    rows += n;
  }
  const told = await database.runAndReadAll("SELECT count(*)::INTEGER FROM reject_errors");
  if (Number(told.getRowsJson()[0][0]) > 0) return undefined;
  const table: LoadedTable = {
    file,
    dialect,
    rows,
    refused: [],
    // As many lines as rows: there is no blank line and no quoted line break, so nothing needs to be looked up.
    lines: async (wanted) =>
      wanted.length === 0 || seen.lines === dialect.skip + rows
        ? wanted.map((row) => dialect.skip + row + 1)
        : physicalLines(await readWhole(files, file), dialect.skip, wanted, new Set()),
  };
  return {
    table,
    read: {
      texts: coders.map((coder, j): CodedColumn => coder.finish(codes[j].subarray(0, rows))),
      numbers: values.map((list) => ({ values: list.subarray(0, rows), odd: [] })),
    },
  };
}

/**
 * Turns −∞, which stands for an empty cell here, and declared missing numbers into NaN; false if there is a number that was not
 * finite in the file. The first mark is compared by itself, since there is seldom another.
 */
function emptied(values: Float64Array, from: number, to: number, marks: readonly number[]): boolean {
  const [mark = Number.NaN, ...others] = marks;
  for (let i = from; i < to; i++) {
    const value = values[i];
    if (value - value === 0) {
      if (value === mark || (others.length > 0 && others.includes(value))) values[i] = Number.NaN;
      continue;
    }
    if (value !== Number.NEGATIVE_INFINITY) return false;
    values[i] = Number.NaN;
  }
  return true;
}

function widened<A extends Int32Array | Float64Array>(list: A, wider: A): A {
  wider.set(list);
  return wider;
}
