import type { Table } from "../tables/table.ts";
import { checkedCell, numberText, requireRectangle } from "./cell.ts";

/**
 * A table as a JSON array of one object per row, a row per line, keys in the order of the columns (RFC 8259). Missing
 * is null; an infinity, which JSON has no number for, is the text INF or -INF.
 */
export function tableJsonBytes(table: Table): Uint8Array {
  requireRectangle(table.name, table.columns, table.rows);
  // Joined by hand: an object would move keys that look like numbers to the front and lose one named __proto__.
  const keys = table.columns.map((column) => JSON.stringify(column.name));
  const rows = table.rows.map(
    (row) =>
      `{${row.map((cell, j) => `${keys[j]}:${cellJson(checkedCell(table.columns[j], cell))}`).join(",")}}`,
  );
  return new TextEncoder().encode(rows.length === 0 ? "[]\n" : `[\n${rows.join(",\n")}\n]\n`);
}

function cellJson(value: string | number | boolean | undefined): string {
  if (value === undefined) return "null";
  if (typeof value !== "number") return JSON.stringify(value);
  // Written as a fraction: readers that take -0 for a whole number lose its sign.
  if (Object.is(value, -0)) return "-0.0";
  return Number.isFinite(value) ? numberText(value, false) : JSON.stringify(numberText(value, false));
}

/** A value as indented JSON with a final line feed; keys stand in the order in which the value was built. */
export function jsonBytes(value: unknown): Uint8Array {
  return new TextEncoder().encode(`${JSON.stringify(value, null, 2)}\n`);
}
