import { civil, type Day, dayOf, daysInMonth, isCivilDate } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import { InputError } from "../errors.ts";
import type { DateColumn } from "./options.ts";

/** One piece of a date pattern: a field of so many digits, or a character that must stand there. */
type Piece =
  | {
      readonly field: "year" | "month" | "day" | "yearday" | "time";
      readonly least: number;
      readonly most: number;
    }
  | { readonly literal: string };

const FIELDS: Readonly<Record<string, "year" | "month" | "day" | "yearday" | "time">> = {
  y: "year",
  M: "month",
  d: "day",
  D: "yearday",
  H: "time",
  m: "time",
  s: "time",
};

/**
 * Compiles a Unicode date pattern: `yyyy` the year (four digits), `M`/`MM` month, `d`/`dd` day of the month, `D`/`DDD` day of
 * the year (`DDD` three digits), `HH mm ss` a time of day that is read over (the civil date as written counts), `'…'` literal text.
 * Numbers may lack their leading zero unless the next field follows without a separator.
 * Throws `stations.date-format` for other letters, or a pattern without a year.
 */
export function compileDateFormat(format: string): (text: string) => Day {
  const pieces = piecesOf(format);
  return (text) => readDate(text, pieces);
}

function piecesOf(format: string): readonly Piece[] {
  const pieces: Piece[] = [];
  const runs = format.match(/'[^']*'|([A-Za-z])\1*|./gs) ?? [];
  for (const [at, run] of runs.entries()) {
    if (run.startsWith("'")) for (const literal of run.slice(1, -1) || "'") pieces.push({ literal });
    else if (/^[A-Za-z]/.test(run)) {
      const field = FIELDS[run[0]];
      const width = run.length;
      // No other letter is allowed: `YYYY` and `mm` for months are the usual slips, and they would read other dates.
      if (field === undefined || (field === "year" && width !== 4) || (field !== "yearday" && width > 4))
        throw badFormat(format, run);
      const most = field === "year" ? 4 : field === "yearday" ? 3 : 2;
      const tight = at + 1 < runs.length && /^[A-Za-z]/.test(runs[at + 1]);
      pieces.push({ field, least: field === "year" || tight || width === 3 ? most : 1, most });
    } else pieces.push({ literal: run });
  }
  if (!pieces.some((piece) => "field" in piece && piece.field === "year")) throw badFormat(format, "no year");
  return pieces;
}

function badFormat(format: string, found: string): InputError {
  return new InputError({
    name: "stations.date-format",
    expected: "a date pattern of yyyy, MM, dd, D (day of the year), HH, mm, ss and separators",
    found: `${JSON.stringify(format)} (${found})`,
    remedy: "write it like yyyy-MM-dd, dd.MM.yyyy, yyyyMMdd, yyyy-MM or yyyy D; letters are case-sensitive",
  });
}

function readDate(text: string, pieces: readonly Piece[]): Day {
  let [year, month, day, yearday, at] = [Number.NaN, 1, 1, 0, 0];
  for (const piece of pieces) {
    if ("literal" in piece) {
      if (text[at] !== piece.literal) return Number.NaN;
      at++;
      continue;
    }
    let [value, digits] = [0, 0];
    while (digits < piece.most && at < text.length) {
      const code = text.charCodeAt(at) - 48;
      if (code < 0 || code > 9) break;
      value = value * 10 + code;
      digits++;
      at++;
    }
    if (digits < piece.least) return Number.NaN;
    if (piece.field === "year") year = value;
    else if (piece.field === "month") month = value;
    else if (piece.field === "day") day = value;
    else if (piece.field === "yearday") yearday = value;
    else if (value > 59) return Number.NaN;
  }
  if (at !== text.length) return Number.NaN;
  if (pieces.some((piece) => "field" in piece && piece.field === "yearday")) {
    const length = dayOf(year + 1, 1, 1) - dayOf(year, 1, 1);
    return yearday >= 1 && yearday <= length ? dayOf(year, 1, yearday) : Number.NaN;
  }
  return isCivilDate(year, month, day) ? dayOf(year, month, day) : Number.NaN;
}

/** The half-open period that a row stands for, from any day within it (dekads: days 1–10, 11–20, 21–end). */
export function coveredPeriod(day: Day, covers: DateColumn["covers"]): Period {
  if (covers === "day") return { start: day, end: day + 1 };
  const { year, month, day: dom } = civil(day);
  if (covers === "year") return { start: dayOf(year, 1, 1), end: dayOf(year + 1, 1, 1) };
  const first = dayOf(year, month, 1);
  if (covers === "month") return { start: first, end: first + daysInMonth(year, month) };
  if (dom <= 10) return { start: first, end: first + 10 };
  if (dom <= 20) return { start: first + 10, end: first + 20 };
  return { start: first + 20, end: first + daysInMonth(year, month) };
}

/** How many whole periods of a kind fill [start, end), both being bounds of such periods. */
export function periodsBetween(start: Day, end: Day, covers: DateColumn["covers"]): number {
  if (covers === "day") return end - start;
  const [a, b] = [civil(start), civil(end)];
  if (covers === "year") return b.year - a.year;
  const months = (b.year - a.year) * 12 + b.month - a.month;
  if (covers === "month") return months;
  const third = (dom: number) => (dom <= 10 ? 0 : dom <= 20 ? 1 : 2);
  return months * 3 + third(b.day) - third(a.day);
}

/** Patterns that are tried on a column whose format is not known, the unambiguous ones first. */
export const COMMON_FORMATS = [
  "yyyy-MM-dd",
  "yyyyMMdd",
  "dd.MM.yyyy",
  "yyyy/MM/dd",
  "dd/MM/yyyy",
  "MM/dd/yyyy",
  "dd-MM-yyyy",
  "yyyy-MM-dd HH:mm",
  "yyyy-MM-dd HH:mm:ss",
  "yyyy-MM-dd'T'HH:mm:ss",
  "yyyy-MM-dd'T'HH:mm:ss'Z'",
  "dd.MM.yyyy HH:mm",
  "yyyy-MM",
  "yyyyMM",
  "MM/yyyy",
  "yyyy D",
  "yyyy-DDD",
  "yyyyDDD",
  "yyyy",
] as const;

/**
 * The common formats by which every one of the texts is a real date between 1700 and 2200; several if they cannot be told
 * apart (dd/MM against MM/dd).
 */
export function recogniseFormats(texts: readonly string[]): readonly string[] {
  if (texts.length === 0) return [];
  const [least, greatest] = [dayOf(1700, 1, 1), dayOf(2200, 1, 1)];
  return COMMON_FORMATS.filter((format) => {
    const read = compileDateFormat(format);
    return texts.every((text) => {
      const day = read(text);
      return day >= least && day < greatest;
    });
  });
}
