import type { DuckDBConnection } from "@duckdb/node-api";
import { parse } from "csv-parse/sync";
import type { Files } from "../effects/effects.ts";
import { literal, pathLiteral } from "./database.ts";
import { type Dialect, decodeText, sniffDialect } from "./dialect.ts";
import { lineOfByte, physicalLines } from "./lines.ts";
import { loadParquet } from "./load-parquet.ts";
import { type LoadedTable, type RefusedRow, readOrExplain } from "./loaded-table.ts";
import { checkPacked, readHead, readWhole } from "./packed.ts";
import { type NumberSource, type RawColumns, rawColumns, rawSelection } from "./raw-columns.ts";

/**
 * Loads the named columns of a table, some as text and some as numbers (all as text, if none is named), into `raw` as
 * `rawSelection` lays it out. UTF-8 files go through the database's reader,
 * others are decoded first; Parquet is known by its ending. Rows of unequal width are refused, not guessed at.
 * Throws `stations.unreadable`, `stations.broken-gzip`, and those of `sniffDialect`.
 */
export async function loadTable(
  database: DuckDBConnection,
  files: Files,
  file: string,
  texts: readonly string[],
  numbers: readonly NumberSource[],
  dateColumn: string | undefined,
): Promise<LoadedTable> {
  await database.run("DROP TABLE IF EXISTS raw");
  if (file.endsWith(".parquet")) return loadParquet(database, files, file, texts, numbers);
  const wanted = [...texts, ...numbers.map((one) => one.column)];
  await checkPacked(files, file);
  const head = readHead(files, file);
  const dialect = sniffDialect(head.bytes, head.cut, file, wanted, dateColumn);
  const columns = rawColumns(dialect.header, texts, numbers);
  return dialect.encoding === "utf-8"
    ? loadUtf8(database, files, file, dialect, columns)
    : loadDecoded(database, files, file, dialect, columns);
}

async function loadUtf8(
  database: DuckDBConnection,
  files: Files,
  file: string,
  dialect: Dialect,
  columns: RawColumns,
): Promise<LoadedTable> {
  const types = dialect.header.map((_, i) => `'c${i}': 'VARCHAR'`).join(", ");
  const source = `read_csv(${pathLiteral(files.absolute(file))}, auto_detect = false, header = false,
       skip = ${dialect.skip}, delim = ${literal(dialect.delimiter)}, quote = '"', escape = '"',
       compression = '${file.endsWith(".gz") ? "gzip" : "none"}', columns = {${types}},
       store_rejects = true, rejects_limit = 0)`;
  await database.run("DROP TABLE IF EXISTS reject_errors; DROP TABLE IF EXISTS reject_scans;");
  await readOrExplain(
    database,
    file,
    `CREATE TEMP TABLE raw AS ${rawSelection(columns, dialect.decimal, source, (i) => `c${i}`)}`,
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
    refused: refusals.map(({ byte, text, why }) => ({ line: lineOfByte(bytes, byte), text, why })),
    lines: async (wanted) =>
      wanted.length === 0 ? [] : physicalLines(await readWhole(files, file), dialect.skip, wanted, rejected),
  };
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
  const lines: number[] = [];
  const refused: RefusedRow[] = [];
  const taken = [...new Set([...columns.texts, ...columns.numbers.map((one) => one.at)])];
  await database.run(
    `CREATE OR REPLACE TEMP TABLE decoded (${taken.map((i) => `c${i} VARCHAR`).join(", ")})`,
  );
  const appender = await database.createAppender("decoded");
  parse(text, {
    delimiter: dialect.delimiter,
    from_line: dialect.skip + 1,
    skip_empty_lines: true,
    relax_column_count: true,
    on_record: (cells: string[], context) => {
      // `context.lines` counts to the record's last line, so a quoted line break is taken off again.
      const breaks = cells.reduce((sum, cell) => sum + cell.split(/\r\n|\n|\r/).length - 1, 0);
      const line = context.lines - breaks;
      if (cells.length !== dialect.header.length)
        refused.push({ line, text: cells.join(dialect.delimiter), why: widthText(cells.length, dialect) });
      else {
        for (const i of taken) appender.appendVarchar(cells[i].trim());
        appender.endRow();
        lines.push(line);
      }
      return null;
    },
  });
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
