import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { compileStamp } from "./dates.ts";
import { checkColumn, type Dialect, joinedHeader } from "./dialect.ts";
import type { TableOptions } from "./options.ts";
import { checkZipSize } from "./unpacked-size.ts";

/**
 * The cells of one sheet of an Excel file as texts, every row as wide as the widest. A formula stands for the result saved with
 * it. Real dates are written in the form `format` (ISO without one), so that they are read whatever it says; a merged cell
 * holds its text in its first column only. Throws `stations.broken-sheet`,
 * `stations.no-sheet` and `stations.unpacks-too-large`.
 */
export async function readSheet(
  files: Files,
  file: string,
  sheet: string | number | undefined,
  format: string | undefined,
): Promise<readonly (readonly string[])[]> {
  // The package is loaded here: most runs read no sheet.
  const { default: readAll } = await import("read-excel-file/node");
  const bytes = Buffer.from(await files.readBytes(file));
  checkZipSize(bytes, file);
  const sheets = await readAll(bytes, { trim: true }).catch((error: unknown) => {
    throw new InputError(
      {
        name: "stations.broken-sheet",
        expected: "an Excel workbook (.xlsx)",
        found: error instanceof Error ? error.message.split("\n")[0] : String(error),
        where: { file },
        remedy: "save it again as .xlsx, or as CSV",
      },
      error,
    );
  });
  const names = sheets.map((one) => one.sheet);
  const wanted = sheet ?? 1;
  const found = sheets.find((one, i) =>
    typeof wanted === "number" ? i + 1 === wanted : one.sheet === wanted,
  );
  if (found === undefined)
    throw new InputError({
      name: "stations.no-sheet",
      expected: typeof wanted === "number" ? `sheet ${wanted}` : `a sheet named ${JSON.stringify(wanted)}`,
      found: `the sheets ${names.map((one) => JSON.stringify(one)).join(", ")}`,
      where: { file },
      remedy: "write the name of one of them, or its number from 1, as `table: { sheet: … }`",
    });
  const write = compileStamp(format ?? "yyyy-MM-dd").write;
  const writeTime = compileStamp("yyyy-MM-dd HH:mm").write;
  const text = (cell: unknown): string => {
    if (cell === null || cell === undefined) return "";
    if (!(cell instanceof Date)) return String(cell);
    // Serial days have no zone: the package gives them as UTC. Rounded to the minute, since they are fractions of a day.
    const minutes = Math.round(cell.getTime() / 60_000);
    const stamp = { day: Math.floor(minutes / 1440), minutes: ((minutes % 1440) + 1440) % 1440 };
    return format === undefined && stamp.minutes > 0 ? writeTime(stamp) : write(stamp);
  };
  const rows: readonly (readonly unknown[])[] = found.data;
  const width = Math.max(0, ...rows.map((row) => row.length));
  return rows.map((row) => Array.from({ length: width }, (_, i) => text(row[i])));
}

/** Rows of a header that are tried where `table` does not say how many there are. */
const MOST_DEEP = 3;

/**
 * The row that `table` says, or the first (of one row, else of two or three joined) that holds all wanted columns; where none is
 * wanted, the words above the first row of figures, two rows of them where the lower one has holes.
 */
function placeOfHeader(
  rows: readonly (readonly string[])[],
  wanted: readonly string[],
  { headerRow, headerRows }: TableOptions,
): { readonly at: number; readonly deep: number } {
  if (headerRow !== undefined) return { at: headerRow - 1, deep: headerRows ?? 1 };
  const depths = headerRows === undefined ? Array.from({ length: MOST_DEEP }, (_, i) => i + 1) : [headerRows];
  if (wanted.length > 0)
    for (const deep of depths) {
      const holds = (at: number) => {
        const header = joinedHeader(rows.slice(at, at + deep));
        return wanted.every((name) => header.includes(name));
      };
      const at = rows.slice(0, 500).findIndex((_, i) => holds(i));
      if (at >= 0) return { at, deep };
    }
  const filled = (row: readonly string[]) => row.filter((cell) => cell !== "");
  const figures = rows.findIndex((row) => {
    const cells = filled(row);
    return cells.length > 1 && 2 * cells.filter((cell) => /^[-+]?\d/.test(cell)).length >= cells.length;
  });
  const last = Math.max(0, figures - 1);
  const holed = last > 0 && rows[last].includes("") && filled(rows[last - 1]).length > 1;
  const deep = headerRows ?? (holed ? 2 : 1);
  return { at: Math.max(0, last - deep + 1), deep };
}

/** How a sheet is laid out. Throws `stations.empty-file` and those of `checkColumn`. */
export function sheetDialect(
  rows: readonly (readonly string[])[],
  file: string,
  wanted: readonly string[],
  dateColumn: string | undefined,
  table: TableOptions = {},
): Dialect {
  const { at, deep } = placeOfHeader(rows, wanted, table);
  const headerAt = (row: number) => joinedHeader(rows.slice(row, row + deep));
  if (at >= rows.length)
    throw new InputError({
      name: "stations.empty-file",
      expected: `a header in row ${at + 1}`,
      found: `${rows.length} rows`,
      where: { file },
      remedy: "check `header row` and `sheet`",
    });
  const header = headerAt(at);
  const last = at + deep - 1;
  for (const name of wanted) checkColumn(header, name, file, last + 1);
  const next = rows[last + 1] ?? [];
  const dated = header.indexOf(dateColumn ?? "");
  const wordsOnly = next.some((cell) => cell !== "") && next.every((cell) => !/^[-+]?\d/.test(cell));
  const units = table.unitsRow ?? (wordsOnly && (dated < 0 || !/\d/.test(next[dated])));
  return {
    encoding: "utf-8",
    bom: false,
    delimiter: "",
    decimal: ".",
    headerLine: last + 1,
    header,
    skip: last + (units ? 2 : 1),
    units: units ? next : undefined,
    comment: undefined,
  };
}
