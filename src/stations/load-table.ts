import type { DuckDBConnection } from "@duckdb/node-api";
import { CsvError, parse } from "csv-parse/sync";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { literal, pathLiteral } from "./database.ts";
import { BLANKS, type Dialect, decodeText, sniffDialect, splitLine } from "./dialect.ts";
import { lineOfByte, physicalLines } from "./lines.ts";
import { loadParquet } from "./load-parquet.ts";
import { readSheet, sheetDialect } from "./load-sheet.ts";
import { type LoadedTable, type RefusedRow, readOrExplain } from "./loaded-table.ts";
import type { TableOptions } from "./options.ts";
import { checkPacked, readHead, readWhole } from "./packed.ts";
import { type NumberSource, type RawColumns, rawColumns, rawSelection } from "./raw-columns.ts";

/** What is wanted of a table, and what is known of how it is written. */
export interface TableWish {
  /** Columns taken as text; every column, if no text and no number is named. */
  readonly texts: readonly string[];
  readonly numbers: readonly NumberSource[];
  readonly date?: { readonly column: string; readonly format: string };
  readonly table?: TableOptions;
}

/**
 * Loads the named columns of a table, some as text and some as numbers (all as text, if none is named), into `raw` as
 * `rawSelection` lays it out. UTF-8 files go through the database's reader,
 * others are decoded first; Parquet and Excel are known by their endings. Rows of unequal width are refused, not guessed at.
 * Throws `stations.unreadable`, `stations.broken-gzip`, and those of `sniffDialect` and `readSheet`.
 */
export async function loadTable(
  database: DuckDBConnection,
  files: Files,
  file: string,
  wish: TableWish,
): Promise<LoadedTable> {
  const { texts, numbers, table } = wish;
  await database.run("DROP TABLE IF EXISTS raw");
  if (file.endsWith(".parquet")) return loadParquet(database, files, file, texts, numbers);
  if (isSheet(file)) {
    const rows = await readSheet(files, file, table?.sheet, wish.date?.format);
    const dialect = sheetDialect(rows, file, wantedOf(wish), wish.date?.column, table);
    const records = rows.slice(dialect.skip).map((cells, i) => ({ cells, line: dialect.skip + i + 1 }));
    return loadRecords(database, file, dialect, rawColumns(dialect.header, texts, numbers), records);
  }
  await checkPacked(files, file);
  return loadText(database, files, file, wish, dialectOf(files, file, wish));
}

export function isSheet(file: string): boolean {
  return file.toLowerCase().endsWith(".xlsx");
}

function wantedOf({ texts, numbers }: TableWish): readonly string[] {
  return [...texts, ...numbers.map((one) => one.column)];
}

/** The dialect of a text file, told from its head. */
export function dialectOf(files: Files, file: string, wish: TableWish): Dialect {
  const head = readHead(files, file);
  return sniffDialect(head.bytes, head.cut, file, wantedOf(wish), wish.date?.column, wish.table);
}

/** Loads a text file whose dialect is known into `raw`. */
export async function loadText(
  database: DuckDBConnection,
  files: Files,
  file: string,
  { texts, numbers }: TableWish,
  dialect: Dialect,
): Promise<LoadedTable> {
  await database.run("DROP TABLE IF EXISTS raw");
  const columns = rawColumns(dialect.header, texts, numbers);
  return dialect.encoding === "utf-8" && dialect.delimiter !== BLANKS
    ? loadUtf8(database, files, file, dialect, columns)
    : loadDecoded(database, files, file, dialect, columns);
}

/** The database's reader of a delimited text. `types` by column; those that do not fit are refused, row by row. */
export function csvSource(
  files: Files,
  file: string,
  dialect: Dialect,
  typeOf: (i: number) => "VARCHAR" | "DOUBLE",
  more = "",
): string {
  const types = dialect.header.map((_, i) => `'c${i}': '${typeOf(i)}'`).join(", ");
  return `read_csv(${pathLiteral(files.absolute(file))}, auto_detect = false, header = false,
       skip = ${dialect.skip}, delim = ${literal(dialect.delimiter)}, quote = '"', escape = '"',
       compression = '${file.endsWith(".gz") ? "gzip" : "none"}', columns = {${types}},
       store_rejects = true, rejects_limit = 0${more})`;
}

async function loadUtf8(
  database: DuckDBConnection,
  files: Files,
  file: string,
  dialect: Dialect,
  columns: RawColumns,
): Promise<LoadedTable> {
  const { comment } = dialect;
  const source = csvSource(files, file, dialect, () => "VARCHAR");
  const remark = (text: string) => comment !== undefined && text.trimStart().startsWith(comment);
  await database.run("DROP TABLE IF EXISTS reject_errors; DROP TABLE IF EXISTS reject_scans;");
  await readOrExplain(
    database,
    file,
    `CREATE TEMP TABLE raw AS ${rawSelection(columns, dialect.decimal, commentless(source, comment), (i) => `c${i}`)}`,
  );
  const rows = await countRows(database);
  const told = await database.runAndReadAll(
    `SELECT line_byte_position, any_value(csv_line), any_value(error_message),
       bool_or(error_type = 'INVALID ENCODING')
     FROM reject_errors GROUP BY line_byte_position ORDER BY line_byte_position`,
  );
  const refusedRows = told.getRowsJson();
  // The head was UTF-8, a later row is not: then the whole file is in the older encoding.
  if (refusedRows.some(([, , , encoding]) => encoding === true)) {
    await database.run("DROP TABLE raw");
    return loadDecoded(database, files, file, { ...dialect, encoding: "windows-1252" }, columns);
  }
  const bytes = refusedRows.length > 0 ? await readWhole(files, file) : new Uint8Array();
  const refusals = refusedRows.map(([byte, text, why]) => ({
    byte: recordStart(bytes, Number(byte) - 1),
    text: String(text ?? "").trim(),
    why: whyText(String(why ?? ""), dialect),
  }));
  const rejected = new Set(refusals.map((one) => one.byte));
  return {
    file,
    dialect,
    rows,
    refused: refusals.flatMap(({ byte, text, why }) =>
      remark(text) ? [] : [{ line: lineOfByte(bytes, byte), text, why }],
    ),
    lines: async (wanted) =>
      wanted.length === 0
        ? []
        : physicalLines(await readWhole(files, file), dialect.skip, wanted, rejected, comment),
  };
}

/** The rows of a source but those whose first cell begins with the comment mark. */
function commentless(source: string, comment: string | undefined): string {
  return comment === undefined
    ? source
    : `(SELECT * FROM ${source} WHERE NOT starts_with(ltrim(coalesce(c0, '')), ${literal(comment)}))`;
}

/** The reader counts bytes from 1 and begins a refused record at the end of the line before, blank lines included. */
function recordStart(bytes: Uint8Array, told: number): number {
  let at = Math.max(0, told);
  while (bytes[at] === 0x0a || bytes[at] === 0x0d) at++;
  return at;
}

function whyText(message: string, dialect: Dialect): string {
  const found = /Found: (\d+)/.exec(message);
  if (found !== null) return widthText(Number(found[1]), dialect);
  return message.split("\n")[0];
}

function widthText(cells: number, dialect: Dialect): string {
  const width = dialect.header.length;
  return `${cells > width ? "more" : "fewer"} cells than the ${width} columns of the header`;
}

async function loadDecoded(
  database: DuckDBConnection,
  files: Files,
  file: string,
  dialect: Dialect,
  columns: RawColumns,
): Promise<LoadedTable> {
  const text = decodeText(await readWhole(files, file), dialect.encoding).replace(/^\uFEFF/, "");
  return loadRecords(database, file, dialect, columns, recordsOf(text, file, dialect));
}

interface TextRecord {
  readonly cells: readonly string[];
  readonly line: number;
}

function recordsOf(text: string, file: string, dialect: Dialect): readonly TextRecord[] {
  const { delimiter, skip, comment } = dialect;
  const remark = (first: string) => comment !== undefined && first.trimStart().startsWith(comment);
  if (delimiter === BLANKS)
    return text.split(/\r\n|\n|\r/).flatMap((line, i) => {
      if (i < skip || line.trim() === "" || remark(line)) return [];
      return [{ cells: splitLine(line, delimiter), line: i + 1 }];
    });
  const records: TextRecord[] = [];
  try {
    parse(text, {
      delimiter,
      from_line: skip + 1,
      skip_empty_lines: true,
      relax_column_count: true,
      // a mark within a cell is a letter, as the database's reader has it
      relax_quotes: true,
      on_record: (cells: string[], context) => {
        // `context.lines` counts to the record's last line, so a quoted line break is taken off again.
        const breaks = cells.reduce((sum, cell) => sum + cell.split(/\r\n|\n|\r/).length - 1, 0);
        if (!remark(cells[0])) records.push({ cells, line: context.lines - breaks });
        return null;
      },
    });
  } catch (error) {
    if (!(error instanceof CsvError)) throw error;
    throw new InputError(
      {
        name: "table.malformed",
        expected: "quotation marks in pairs",
        found:
          error.code === "CSV_QUOTE_NOT_CLOSED"
            ? "a quotation mark that is never closed, here or below"
            : `a slip: ${error.message}`,
        where: { file, line: (records.at(-1)?.line ?? skip) + 1 },
        remedy: "close it, or take it away",
      },
      error,
    );
  }
  return records;
}

/** Loads records that were split already. */
async function loadRecords(
  database: DuckDBConnection,
  file: string,
  dialect: Dialect,
  columns: RawColumns,
  records: readonly TextRecord[],
): Promise<LoadedTable> {
  const lines: number[] = [];
  const refused: RefusedRow[] = [];
  const width = dialect.header.length;
  const taken = [...new Set([...columns.texts, ...columns.numbers.map((one) => one.at)])];
  await database.run(
    `CREATE OR REPLACE TEMP TABLE decoded (${taken.map((i) => `c${i} VARCHAR`).join(", ")})`,
  );
  const appender = await database.createAppender("decoded");
  for (const { cells, line } of records) {
    if (cells.length !== width) {
      refused.push({ line, text: cells.join(dialect.delimiter), why: widthText(cells.length, dialect) });
      continue;
    }
    for (const i of taken) appender.appendVarchar(cells[i].trim());
    appender.endRow();
    lines.push(line);
  }
  appender.closeSync();
  await database.run(
    `CREATE TEMP TABLE raw AS ${rawSelection(columns, dialect.decimal, "decoded", (i) => `c${i}`)}`,
  );
  await database.run("DROP TABLE decoded");
  return {
    file,
    dialect,
    rows: lines.length,
    refused,
    lines: async (wanted) => wanted.map((row) => lines[row]),
  };
}

async function countRows(database: DuckDBConnection): Promise<number> {
  const told = await database.runAndReadAll("SELECT count(*)::INTEGER FROM raw");
  return Number(told.getRowsJson()[0][0]);
}
