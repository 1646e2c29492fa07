import { compilePattern, type DatePattern } from "../data/date-pattern.ts";
import { civil, type Day, dayOf, daysInMonth } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import { InputError } from "../errors.ts";
import type { Cover } from "./block.ts";

/**
 * A reader of civil dates by a Unicode pattern (see `compilePattern`; a time of day is read over), NaN for a text that is none.
 * Throws `stations.date-format` for letters that mean nothing here, or a pattern without a year.
 */
export function compileDateFormat(format: string): (text: string) => Day {
  const { read } = compileStamp(format);
  return (text) => read(text)?.day ?? Number.NaN;
}

/** The same with the time of day. */
export function compileStamp(format: string): DatePattern {
  const pattern = compilePattern(format, false);
  if (!("wrong" in pattern)) return pattern;
  throw new InputError({
    name: "stations.date-format",
    expected: "a date pattern of yyyy, MM, dd, D (day of the year), HH, mm, ss and separators",
    found: `${JSON.stringify(format)} (${pattern.wrong})`,
    remedy: "write it like yyyy-MM-dd, dd.MM.yyyy, yyyyMMdd, yyyy-MM or yyyy D; letters are case-sensitive",
  });
}

/** The half-open period that a row stands for, from any day within it (dekads: days 1–10, 11–20, 21–end). */
export function coveredPeriod(day: Day, covers: Cover): Period {
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
export function periodsBetween(start: Day, end: Day, covers: Cover): number {
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
  "dd-MMM-yyyy",
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
