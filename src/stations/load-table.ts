import { gunzipSync, constants as zlib } from "node:zlib";
import type { DuckDBConnection } from "@duckdb/node-api";
import { parse } from "csv-parse/sync";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { literal, pathLiteral } from "./database.ts";
import { type Dialect, decodeText, sniffDialect } from "./dialect.ts";
import { lineOfByte, physicalLines } from "./lines.ts";

const HEAD_BYTES = 1 << 18;

/** A row that the reader refused because it has too many or too few cells or a broken quote. */
export interface RefusedRow {
  readonly line: number;
  readonly text: string;
  readonly why: string;
}

/** A file's wanted columns as text without blanks around it in the table `raw` (columns c0, c1, … by position; rowid is the row's index). */
export interface LoadedTable {
  readonly file: string;
  readonly dialect: Dialect;
  readonly rows: number;
  readonly refused: readonly RefusedRow[];
  /** True physical lines of rows, given as ascending 0-based indices. Reads the file again: only for findings. */
  readonly lines: (rows: readonly number[]) => Promise<readonly number[]>;
}

/** The first bytes of a file, unpacked if its name ends in .gz. */
export async function readHead(files: Files, path: string): Promise<{ bytes: Uint8Array; cut: boolean }> {
  const access = files.open(path);
  try {
    const size = Math.min(access.size, HEAD_BYTES);
    const bytes = access.read(0, size);
    const cut = size < access.size;
    if (!path.endsWith(".gz")) return { bytes, cut };
    // Sync flush: give what can be unpacked of a stream that ends early.
    const whole = gunzipSync(bytes, { finishFlush: zlib.Z_SYNC_FLUSH });
    return { bytes: whole, cut };
  } catch (error) {
    if (error instanceof Error && "code" in error && String(error.code).startsWith("Z_"))
      throw new InputError(
        {
          name: "stations.broken-gzip",
          expected: "a gzip file, as its name says",
          found: error.message,
          where: { file: path },
          remedy: "pack it again, or take the .gz off its name",
        },
        error,
      );
    throw error;
  } finally {
    access.close();
  }
}

/** All bytes, unpacked if the name ends in .gz. */
export async function readWhole(files: Files, path: string): Promise<Uint8Array> {
  const bytes = await files.readBytes(path);
  return path.endsWith(".gz") ? gunzipSync(bytes) : bytes;
}

/**
 * Loads the wanted columns (all, if none is named) of a text table into `raw`. UTF-8 files go through the database's reader; others are decoded
 * first. Rows of unequal width are refused, not guessed at.
 */
export async function loadTable(
  database: DuckDBConnection,
  files: Files,
  file: string,
  wanted: readonly string[],
  dateColumn: string | undefined,
): Promise<LoadedTable> {
  const head = await readHead(files, file);
  const dialect = sniffDialect(head.bytes, head.cut, file, wanted, dateColumn);
  const positions =
    wanted.length === 0 ? dialect.header.keys() : wanted.map((name) => dialect.header.indexOf(name));
  const columns = [...new Set(positions)].sort((a, b) => a - b);
  await database.run("DROP TABLE IF EXISTS raw");
  return dialect.encoding === "utf-8"
    ? loadUtf8(database, files, file, dialect, columns)
    : loadDecoded(database, files, file, dialect, columns);
}

async function loadUtf8(
  database: DuckDBConnection,
  files: Files,
  file: string,
  dialect: Dialect,
  columns: readonly number[],
): Promise<LoadedTable> {
  const types = dialect.header.map((_, i) => `'c${i}': 'VARCHAR'`).join(", ");
  await database.run("DROP TABLE IF EXISTS reject_errors; DROP TABLE IF EXISTS reject_scans;");
  await database.run(
    `CREATE TEMP TABLE raw AS SELECT ${columns.map((i) => `trim(c${i}) AS c${i}`).join(", ")}
     FROM read_csv(${pathLiteral(files.absolute(file))}, auto_detect = false, header = false,
       skip = ${dialect.skip}, delim = ${literal(dialect.delimiter)}, quote = '"', escape = '"',
       compression = '${file.endsWith(".gz") ? "gzip" : "none"}', columns = {${types}},
       store_rejects = true, rejects_limit = 0)`,
  );
  const rows = await countRows(database);
  const told = await database.runAndReadAll(
    `SELECT line_byte_position, any_value(csv_line), any_value(error_message)
     FROM reject_errors GROUP BY line_byte_position ORDER BY line_byte_position`,
  );
  const refusedRows = told.getRowsJson();
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
  columns: readonly number[],
): Promise<LoadedTable> {
  const text = decodeText(await readWhole(files, file), dialect.encoding).replace(/^\uFEFF/, "");
  const lines: number[] = [];
  const refused: RefusedRow[] = [];
  await database.run(`CREATE TEMP TABLE raw (${columns.map((i) => `c${i} VARCHAR`).join(", ")})`);
  const appender = await database.createAppender("raw");
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
        for (const i of columns) appender.appendVarchar(cells[i].trim());
        appender.endRow();
        lines.push(line);
      }
      return null;
    },
  });
  appender.closeSync();
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
