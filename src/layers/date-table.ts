import { columnIndex, readCsv } from "../data/csv.ts";
import { type Day, isoDay, parseIsoDay } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { coveredPeriod } from "./cover.ts";
import type { DateTable, ImageCover, ImageDates, LayerOptions } from "./options.ts";

/**
 * Options whose dates in a table have been read, so that what follows looks them up by the file's name. Throws
 * `layers.bad-date`, `layers.date-repeated` and the errors of tables.
 */
export async function settleDates(
  options: LayerOptions,
  files: Pick<Files, "readText">,
): Promise<LayerOptions> {
  const settle = async (date: ImageDates) =>
    "table" in date && !("periods" in date) ? await readDateTable(date, options.covers, files) : date;
  const { quality } = options;
  return {
    ...options,
    date: await settle(options.date),
    ...(quality?.date === undefined ? {} : { quality: { ...quality, date: await settle(quality.date) } }),
  };
}

/**
 * A row for each file: its name, the first day it stands for and, where there is such a column, the last (included).
 * Without last days `covers` says how long each counts.
 */
async function readDateTable(
  date: DateTable,
  covers: ImageCover,
  files: Pick<Files, "readText">,
): Promise<ImageDates> {
  const table = readCsv(await files.readText(date.table), date.table);
  const column = (name: string) => columnIndex(table, name, "layers date");
  const [file, first] = [column(date.file), column(date.first)];
  const last = date.last === undefined ? undefined : column(date.last);
  const periods = new Map<string, Period>();
  for (const { line, cells } of table.rows) {
    const day = (at: number): Day => {
      const read = parseIsoDay(cells[at]);
      if (!Number.isNaN(read)) return read;
      throw tableError("bad-date", "a date as yyyy-MM-dd", JSON.stringify(cells[at]), date.table, line, at);
    };
    const start = day(first);
    const period = last === undefined ? coveredPeriod(start, covers) : { start, end: day(last) + 1 };
    if (period.end <= start)
      throw tableError(
        "bad-date",
        `a last day on or after ${isoDay(start)}`,
        JSON.stringify(cells[last ?? first]),
        date.table,
        line,
        last ?? first,
      );
    if (periods.has(cells[file]))
      throw tableError(
        "date-repeated",
        "each file once",
        JSON.stringify(cells[file]),
        date.table,
        line,
        file,
      );
    periods.set(cells[file], period);
  }
  return { table: date.table, periods };
}

function tableError(what: string, expected: string, found: string, file: string, line: number, at: number) {
  const remedy = "mend the row: the file's name, the first day and, if there is such a column, the last day";
  return new InputError({
    name: `layers.${what}`,
    expected,
    found,
    where: { file, line, column: at + 1 },
    remedy,
  });
}

/** The period of a file: by its whole path, its name, or its name without ending. */
export function periodInTable(
  path: string,
  { table, periods }: { readonly table: string; readonly periods: ReadonlyMap<string, Period> },
): Period {
  const name = path.slice(path.lastIndexOf("/") + 1);
  const found = [path, name, name.replace(/\.[^.]*$/, "")].find((one) => periods.has(one));
  const period = found === undefined ? undefined : periods.get(found);
  if (period !== undefined) return period;
  throw new InputError({
    name: "layers.date-not-found",
    expected: `a row for the file in ${table}`,
    found: `${periods.size} row${periods.size === 1 ? "" : "s"}, none for ${JSON.stringify(name)}`,
    where: { file: path },
    remedy: "add the file to the table, or narrow the pattern of files",
  });
}
