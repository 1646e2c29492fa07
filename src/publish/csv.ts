import type { Table } from "../tables/table.ts";
import { checkedCell, numberText, requireRectangle } from "./cell.ts";

export interface CsvFile {
  readonly bytes: Uint8Array;
  /** How many text cells (the header's included) were given an apostrophe. */
  readonly neutralised: number;
}

/** A text that a spreadsheet would run, or that already looks as if it had been given an apostrophe. */
const RUNNABLE = /^'*[=+\-@\t\r]/;

/**
 * A table as comma-separated text: UTF-8 without a mark, quoting by RFC 4180 §2, rows ended by a line feed. Numbers
 * have all digits needed to read them back exactly; missing is an empty cell. Text that a spreadsheet would run (it
 * begins with = + - @, a tab or a carriage return) gets a leading apostrophe; `plainText` takes it off again.
 */
export function csvBytes(table: Table): CsvFile {
  requireRectangle(table.name, table.columns, table.rows);
  let neutralised = 0;
  const text = (value: string) => {
    if (!RUNNABLE.test(value)) return quoted(value);
    neutralised++;
    return quoted(`'${value}`);
  };
  const line = (cells: readonly string[]) => {
    const joined = cells.join(",");
    // A row that is an empty line would be skipped by readers.
    return joined === "" ? '""\n' : `${joined}\n`;
  };
  let out = line(table.columns.map((column) => text(column.name)));
  for (const row of table.rows)
    out += line(
      row.map((cell, j) => {
        const column = table.columns[j];
        const value = checkedCell(column, cell);
        if (value === undefined) return "";
        if (typeof value === "number") return numberText(value, column.type === "integer");
        return typeof value === "boolean" ? String(value) : text(value);
      }),
    );
  return { bytes: new TextEncoder().encode(out), neutralised };
}

/** The text that a text cell stood for before it was neutralised. */
export function plainText(cell: string): string {
  return /^'+[=+\-@\t\r]/.test(cell) ? cell.slice(1) : cell;
}

/** Quotes a cell that holds a separator, quote or line break, or has blanks at its ends that a reader might trim. */
function quoted(value: string): string {
  return /[",\r\n]|^\s|\s$/.test(value) ? `"${value.replaceAll('"', '""')}"` : value;
}
