import { type CsvError, parse } from "csv-parse/sync";
import { InputError } from "../errors.ts";
import { countText } from "./words.ts";

/** A small table of text cells with the true line of every row. For large station files see the stations room. */
export interface TextTable {
  readonly file: string;
  readonly header: readonly string[];
  readonly rows: readonly TextRow[];
}

export interface TextRow {
  /** The physical line the row begins on, 1-based. */
  readonly line: number;
  readonly cells: readonly string[];
}

/**
 * Reads comma-, semicolon- or tab-separated text with a header row (RFC 4180 quoting, BOM allowed, empty lines
 * skipped, cells trimmed). The delimiter is the one of the three that the header line holds most often.
 * Throws `table.malformed` for unequal rows or broken quotes and `table.repeated-column`.
 */
export function readCsv(text: string, file: string): TextTable {
  const firstLine = text.slice(0, Math.max(0, text.search(/\r?\n|$/)));
  const count = (mark: string) => firstLine.split(mark).length - 1;
  const delimiter = [",", ";", "\t"].reduce((best, mark) => (count(mark) > count(best) ? mark : best));
  const rows: TextRow[] = [];
  let line = 1;
  try {
    parse(text, {
      bom: true,
      delimiter,
      skip_empty_lines: true,
      trim: true,
      on_record: (cells: string[], context) => {
        // `context.lines` counts to the record's last line, so a quoted line break is taken off again.
        const breaks = cells.reduce((sum, cell) => sum + cell.split(/\r\n|\n|\r/).length - 1, 0);
        line = context.lines - breaks;
        rows.push({ line, cells });
        return null;
      },
    });
  } catch (error) {
    const { code, lines: told, record, message } = error as CsvError;
    // The library finds an open quote at the file's end; it stands in the record after the last good one.
    const at = code === "CSV_QUOTE_NOT_CLOSED" || typeof told !== "number" ? line + 1 : told;
    const found =
      code === "CSV_QUOTE_NOT_CLOSED"
        ? "a quotation mark that is never closed, here or below"
        : code === "CSV_RECORD_INCONSISTENT_FIELDS_LENGTH" && Array.isArray(record)
          ? `${countText(record.length, "cell")} where the header has ${rows[0].cells.length}`
          : `a slip: ${message}`;
    throw new InputError(
      {
        name: "table.malformed",
        expected: `rows of equal length, separated by ${JSON.stringify(delimiter)}`,
        found,
        where: { file, line: at },
        remedy: "mend the row, or quote cells that hold the separator",
      },
      error,
    );
  }
  const header = rows.length === 0 ? [] : rows[0].cells;
  const repeated = header.find((name, i) => header.indexOf(name) !== i);
  if (repeated !== undefined)
    throw new InputError({
      name: "table.repeated-column",
      expected: "each column name once",
      found: `${JSON.stringify(repeated)} twice`,
      where: { file, line: 1, column: header.lastIndexOf(repeated) + 1 },
      remedy: "rename one of the columns",
    });
  return { file, header, rows: rows.slice(1) };
}

/** The position of a column. Throws `table.column-missing`, naming the columns that are there. */
export function columnIndex(table: TextTable, name: string, cell: string): number {
  const index = table.header.indexOf(name);
  if (index >= 0) return index;
  throw new InputError({
    name: "table.column-missing",
    expected: `a column named ${JSON.stringify(name)}`,
    found:
      table.header.length === 0
        ? "an empty file"
        : `the columns ${table.header.map((one) => JSON.stringify(one)).join(", ")}`,
    where: { file: table.file, line: 1, cell },
    remedy: "name one of the columns that are there",
  });
}
