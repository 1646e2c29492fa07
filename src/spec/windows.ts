import type { MonthDay, SpanEnd } from "../aggregate/options.ts";
import { daysInMonth } from "../data/day.ts";

const MONTHS = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];
/** Source of a pattern: `Nov` or `15 Nov`. */
export const MONTH_DAY = `(?:[1-9]\\d? )?(?:${MONTHS.join("|")})`;

/** `15 Nov`, or `Nov` with day 0; the text fits MONTH_DAY. */
function monthDay(text: string): MonthDay {
  const parts = text.split(" ");
  const month = MONTHS.indexOf(parts[parts.length - 1]) + 1;
  return { month, day: parts.length === 2 ? Number(parts[0]) : 0 };
}

export interface Season {
  readonly from: MonthDay;
  readonly to: MonthDay;
}

/**
 * `Nov to Feb` runs from the first day of November to the last of February, `15 Nov to 10 Mar` from and to those
 * days, both included; `Jul` is all of July. Undefined if a month has no such day (29 Feb is allowed).
 */
export function readSeason(text: string): Season | undefined {
  const [first, last = first] = text.split(" to ");
  const [from, to] = [monthDay(first), monthDay(last)];
  // 2000 is a leap year, so that 29 Feb exists.
  if ([from, to].some((date) => date.day > daysInMonth(2000, date.month))) return undefined;
  return { from: from.day === 0 ? { ...from, day: 1 } : from, to };
}

/** `60 days before end`, `1 day after start`, `start`, `end`. */
export function readSpanEnd(text: string): SpanEnd {
  const parts = text.split(" ");
  const of = parts[parts.length - 1] === "start" ? "start" : "end";
  if (parts.length === 1) return { days: 0, of };
  const days = Number(parts[0]);
  return { days: parts[2] === "before" ? -days : days, of };
}

/** `1991 to 2020`. */
export function readYears(text: string): { readonly from: number; readonly to: number } {
  const [from, to] = text.split(" to ").map(Number);
  return { from, to };
}

/** `500 m` or `10 km` in metres. */
export function readMetres(text: string): number {
  const [value, unit] = text.split(" ");
  return Number(value) * (unit === "km" ? 1000 : 1);
}
