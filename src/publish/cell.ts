import type { Cell, TableColumn } from "../tables/table.ts";

/** A cell that fits its column, missing values (undefined, NaN) made one. */
export type CheckedCell = string | number | boolean | undefined;

/** Throws a plain Error (a bug, not a user's mistake) if a cell's value is not of its column's type. */
export function checkedCell(column: TableColumn, cell: Cell): CheckedCell {
  if (cell === undefined || (typeof cell === "number" && Number.isNaN(cell))) return undefined;
  const fits =
    column.type === "text"
      ? typeof cell === "string"
      : column.type === "truth"
        ? typeof cell === "boolean"
        : column.type === "integer"
          ? Number.isInteger(cell)
          : typeof cell === "number";
  if (fits) return cell;
  throw new Error(`column ${column.name} is of type ${column.type}, its cell is ${JSON.stringify(cell)}`);
}

/** Throws if a row is not as long as the header or two columns share a name. */
export function requireRectangle(
  name: string,
  columns: readonly TableColumn[],
  rows: readonly (readonly Cell[])[],
): void {
  if (new Set(columns.map((one) => one.name)).size !== columns.length)
    throw new Error(`table ${name} repeats a column name`);
  const short = rows.findIndex((row) => row.length !== columns.length);
  if (short >= 0)
    throw new Error(`row ${short} of table ${name} has ${rows[short].length} of ${columns.length} cells`);
}

/**
 * The shortest decimal text that reads back as the same 64-bit number (ECMAScript Number::toString), with −0 kept and
 * infinities spelled as Table Schema does. `integer` forbids an exponent.
 */
export function numberText(value: number, integer: boolean): string {
  if (value === Number.POSITIVE_INFINITY) return "INF";
  if (value === Number.NEGATIVE_INFINITY) return "-INF";
  if (Object.is(value, -0)) return integer ? "0" : "-0";
  return integer && Math.abs(value) >= 1e21 ? BigInt(value).toString() : String(value);
}
