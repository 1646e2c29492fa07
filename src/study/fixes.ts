import { columnIndex, readCsv } from "../data/csv.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Fix, MovingPlace } from "../data/place.ts";
import type { Files } from "../effects/effects.ts";
import { InputError, type Place } from "../errors.ts";
import { dayReader } from "./day-format.ts";
import type { MovingPlaceOptions } from "./options.ts";

const CLOCK = /^(\d{1,2}):(\d{2})(?::(\d{2}(?:\.\d*)?))?\s*(Z|UTC|[-+]\d{2}:?\d{2})?$/i;

/**
 * Reads a table of dated positions as a place that moves. Times of day are UTC unless they carry an offset. Rows without
 * a position (a receiver that found none) are left out and counted. Throws `study.fix-date`, `study.fix-position`,
 * `study.no-fixes` with file and line.
 */
export async function readFixes(
  name: string,
  options: MovingPlaceOptions,
  files: Pick<Files, "readText">,
): Promise<{ readonly place: MovingPlace; readonly findings: readonly RawFinding[] }> {
  const { fixes: file, weigh, least } = options;
  const table = readCsv(await files.readText(file), file);
  const at = (column: string, key: string) => columnIndex(table, column, `places.${name}.${key}`);
  const [date, longitude, latitude] = [
    at(options.date, "date"),
    at(options.longitude, "longitude"),
    at(options.latitude, "latitude"),
  ];
  const animal = options.animal === undefined ? undefined : at(options.animal, "animal");
  const wanted = Object.entries(options.where).map(
    ([key, value]) => [at(key, `where.${key}`), value] as const,
  );
  const dayOf = dayReader(options.format, `places.${name}.format`);
  const fixes: Fix[] = [];
  let empty = 0;
  for (const { line, cells } of table.rows) {
    if (wanted.some(([index, value]) => cells[index] !== value)) continue;
    const [east, north] = [cells[longitude], cells[latitude]];
    if (east === "" && north === "") {
      empty++;
      continue;
    }
    fixes.push({
      time: timeOf(cells[date], dayOf, options, { file, line }),
      position: [
        degrees(east, 180, options.longitude, { file, line }),
        degrees(north, 90, options.latitude, { file, line }),
      ],
      animal: animal === undefined ? "" : cells[animal],
    });
  }
  if (fixes.length === 0)
    throw new InputError({
      name: "study.no-fixes",
      expected: `rows with positions for the place ${name}`,
      found: `none among ${table.rows.length}`,
      where: { file },
      remedy: "check the columns, and `where` if it chooses rows",
    });
  // By time, then animal, then as they stand: the order must not depend on the sort.
  const ordered = fixes
    .map((fix, i) => ({ fix, i }))
    .sort(
      (p, q) =>
        p.fix.time - q.fix.time ||
        (p.fix.animal < q.fix.animal ? -1 : p.fix.animal > q.fix.animal ? 1 : p.i - q.i),
    )
    .map((one) => one.fix);
  return {
    place: { type: "moving", name, fixes: ordered, weigh, least },
    findings: empty === 0 ? [] : [emptyFinding(name, file, empty, table.rows.length)],
  };
}

function emptyFinding(name: string, file: string, empty: number, rows: number): RawFinding {
  return {
    kind: "few-fixes",
    subject: name,
    message: `${empty} of ${rows} rows have no position and were left out`,
    where: { file },
    count: empty,
    remedy: "accept it if the receiver found none; else check the columns",
  };
}

/** Days since 1970-01-01 UTC. */
function timeOf(
  text: string,
  dayOf: (text: string) => number,
  { date, format }: MovingPlaceOptions,
  where: Place,
): number {
  const [, dayText, clockText] = /^([^T\s]+)(?:[T\s]+(.+))?$/.exec(text) ?? [];
  const day = dayText === undefined ? Number.NaN : dayOf(dayText);
  const clock = clockText === undefined ? undefined : CLOCK.exec(clockText);
  const [hours, minutes, seconds] = [1, 2, 3].map((i) => Number(clock?.[i] ?? 0));
  if (Number.isNaN(day) || clock === null || hours > 24 || minutes > 59 || seconds >= 61)
    throw new InputError({
      name: "study.fix-date",
      expected: `a date by the pattern ${format}, with a time of day like 06:30 behind it or none`,
      found: JSON.stringify(text),
      where: { ...where, cell: date },
      remedy: "mend the cell, or write the format of the column",
    });
  const offset = /^([-+])(\d{2}):?(\d{2})$/.exec(clock?.[4] ?? "");
  const ahead =
    offset === null ? 0 : (offset[1] === "-" ? -1 : 1) * (Number(offset[2]) * 60 + Number(offset[3]));
  return day + (hours * 3600 + minutes * 60 + seconds - ahead * 60) / 86400;
}

function degrees(text: string, most: number, column: string, where: Place): number {
  const value = text.trim() === "" ? Number.NaN : Number(text);
  if (Math.abs(value) <= most) return value;
  throw new InputError({
    name: "study.fix-position",
    expected: `degrees between ${-most} and ${most}`,
    found: JSON.stringify(text),
    where: { ...where, cell: column },
    remedy: "write WGS 84 degrees with a decimal point, longitude and latitude in their own columns",
  });
}
