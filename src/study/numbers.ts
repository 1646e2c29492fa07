import type { TextTable } from "../data/csv.ts";
import { InputError } from "../errors.ts";

const DECIMAL = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/;

/**
 * A decimal number with a point, NaN for an empty cell. Throws `study.not-a-number`: never a hexadecimal number,
 * `Infinity` or a decimal comma read as something else.
 */
export function numberCell(table: TextTable, row: number, column: number): number {
  const text = table.rows[row].cells[column];
  if (text === "") return Number.NaN;
  const value = DECIMAL.test(text) ? Number(text) : Number.NaN;
  if (Number.isFinite(value)) return value;
  throw cellError(table, row, column, {
    name: "study.not-a-number",
    expected: "a number, or an empty cell where it is not known",
    remedy: /^[+-]?\d+,\d+$/.test(text)
      ? "write decimals with a point"
      : "mend the cell, or leave it empty if the value is not known",
  });
}

/** A whole number of at least 0. Throws `study.not-a-count`, for an empty cell too. */
export function countCell(table: TextTable, row: number, column: number): number {
  const text = table.rows[row].cells[column];
  const value = /^\d+$/.test(text) ? Number(text) : Number.NaN;
  if (Number.isSafeInteger(value)) return value;
  throw cellError(table, row, column, {
    name: "study.not-a-count",
    expected: "a whole number of animals, 0 or more",
    remedy: "mend the cell; where there are none, write 0",
  });
}

/** An error about one cell: its file, line, column and the text that stands there. */
export function cellError(
  table: TextTable,
  row: number,
  column: number,
  facts: { readonly name: string; readonly expected: string; readonly remedy: string },
): InputError {
  const { line, cells } = table.rows[row];
  return new InputError({
    ...facts,
    found: cells[column] === "" ? "an empty cell" : JSON.stringify(cells[column]),
    where: { file: table.file, line, column: column + 1, cell: table.header[column] },
  });
}
