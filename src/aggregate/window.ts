import { addMonths, civil, type Day, dayOf, daysInMonth } from "../data/day.ts";
import type { Interval } from "../data/occasion.ts";
import type { Period } from "../data/period.ts";
import type { MonthDay, SpanEnd, Window } from "./options.ts";

/** The period, or yearly periods, that a window gives for one interval. */
export interface WindowPeriods {
  /** One as a rule; several where the interval holds several seasons or years; none where it holds none. */
  readonly periods: readonly Period[];
  /** First start to last end of `periods`. */
  readonly period?: Period;
  /** What yearly sums are multiplied by to be per year: 1 unless a whole interval is no whole number of years. */
  readonly perYear: number;
  /** `window-empty`: there is no such period; `window-leak`: it reaches past the end occasion. */
  readonly problem?: "window-empty" | "window-leak";
  /** The problem in words, e.g. `holds no whole Nov to Feb`. */
  readonly words?: string;
}

const MONTHS = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"] as const;
/** `lengths: whole years` counts a length within 18 days of a whole number as that number (methods §1). */
const WHOLE_YEAR_SLACK = 18 / 365.25;

export function monthName(month: number): string {
  return MONTHS[month - 1];
}

/** A date of a year; day 0 is the month's last, and a day the month does not have (29 Feb) becomes its last. */
function dateIn(year: number, date: MonthDay): Day {
  const last = daysInMonth(year, date.month);
  return dayOf(year, date.month, date.day === 0 ? last : Math.min(date.day, last));
}

/** The season that begins in `year`. It crosses the new year where its last date stands before its first. */
function seasonBeginning(year: number, from: MonthDay, to: MonthDay): Period {
  const order = (date: MonthDay) => date.month * 40 + (date.day === 0 ? 31 : date.day);
  const crosses = order(to) < order(from);
  return { start: dateIn(year, from), end: dateIn(crosses ? year + 1 : year, to) + 1 };
}

const YEAR_FROM: MonthDay = { month: 1, day: 1 };
const YEAR_TO: MonthDay = { month: 12, day: 31 };

/** The season or calendar year of a window whose last day lies in `year`; undefined for other windows. */
export function seasonEnding(window: Window, year: number): Period | undefined {
  if (window.type === "year") return seasonBeginning(year, YEAR_FROM, YEAR_TO);
  if (window.type !== "season") return undefined;
  const same = seasonBeginning(year, window.from, window.to);
  return civil(same.end - 1).year === year ? same : seasonBeginning(year - 1, window.from, window.to);
}

/** Every season the interval wholly holds, each moved `lag` years back. */
function seasons(from: MonthDay, to: MonthDay, lag: number, interval: Interval): Period[] {
  const found: Period[] = [];
  for (let year = civil(interval.start).year; year <= civil(interval.end).year; year++) {
    const season = seasonBeginning(year, from, to);
    if (season.start >= interval.start && season.end <= interval.end)
      found.push(seasonBeginning(year - lag, from, to));
  }
  return found;
}

function spanEnd(end: SpanEnd, lag: number, interval: Interval): Day {
  return addMonths(end.of === "start" ? interval.start : interval.end, -12 * lag) + end.days;
}

/**
 * The whole interval; from 1.5 years on it is cut into years, at anniversaries where its length is a whole number
 * of years (to 18 days) and into equal parts where it is not.
 */
function years(interval: Interval, lag: number): Period[] {
  const whole = { start: addMonths(interval.start, -12 * lag), end: addMonths(interval.end, -12 * lag) };
  const count = Math.max(1, Math.round(interval.length));
  const regular = Math.abs(interval.length - count) <= WHOLE_YEAR_SLACK;
  const cut = (k: number): Day => {
    if (k === 0) return whole.start;
    if (k === count) return whole.end;
    if (regular) return addMonths(whole.start, 12 * k);
    return whole.start + Math.round((k * (whole.end - whole.start)) / count);
  };
  return Array.from({ length: count }, (_, k) => ({ start: cut(k), end: cut(k + 1) }));
}

function periodsOf(window: Window, interval: Interval): Period[] {
  if (window.type === "season") return seasons(window.from, window.to, window.lag, interval);
  if (window.type === "year") return seasons(YEAR_FROM, YEAR_TO, window.lag, interval);
  if (window.type === "interval") return years(interval, window.lag);
  return [
    { start: spanEnd(window.from, window.lag, interval), end: spanEnd(window.to, window.lag, interval) },
  ].filter((period) => period.start < period.end);
}

/**
 * The period a window gives for an interval (methods §1). A season or calendar year belongs to the interval that
 * wholly holds it, and lag n then goes n years back; an interval that holds several gives them all, to be averaged.
 * A span is counted from the mid-dates of the occasions. Nothing is ever shifted to fit: an interval without such
 * a period, or one without dates, gives none (`window-empty`). A period that ends after the closing occasion is
 * given but marked (`window-leak`): it would explain survival by what came after it.
 */
export function windowPeriod(window: Window, interval: Interval): WindowPeriods {
  const none = (words: string): WindowPeriods => ({
    periods: [],
    perYear: 1,
    problem: "window-empty",
    words,
  });
  if (!Number.isFinite(interval.start) || !Number.isFinite(interval.end)) return none("has no dates");
  const periods = periodsOf(window, interval);
  if (periods.length === 0)
    return none(
      window.type === "span" ? `is no period: ${windowText(window)}` : `holds no whole ${windowText(window)}`,
    );
  const period = { start: periods[0].start, end: periods[periods.length - 1].end };
  const perYear = window.type === "interval" && periods.length > 1 ? periods.length / interval.length : 1;
  if (period.end <= interval.end) return { periods, period, perYear };
  const past = period.end - interval.end;
  const words = `reaches ${past} day${past === 1 ? "" : "s"} past the end occasion`;
  return { periods, period, perYear, problem: "window-leak", words };
}

function dateText(date: MonthDay, whole: boolean): string {
  if (whole) return monthName(date.month);
  return date.day === 0 ? `end of ${monthName(date.month)}` : `${date.day} ${monthName(date.month)}`;
}

function endText(end: SpanEnd): string {
  const count = Math.abs(end.days);
  return end.days === 0
    ? end.of
    : `${count} day${count === 1 ? "" : "s"} ${end.days < 0 ? "before" : "after"} ${end.of}`;
}

/** A window in the words of the pipeline file: `Nov to Feb`, `60 days before end to end`, `whole interval`. */
export function windowText(window: Window): string {
  const back = window.lag === 0 ? "" : `, ${window.lag} year${window.lag === 1 ? "" : "s"} before`;
  if (window.type === "interval") return `whole interval${back}`;
  if (window.type === "year") return `calendar year${back}`;
  if (window.type === "span") return `${endText(window.from)} to ${endText(window.to)}${back}`;
  const whole = window.from.day === 1 && window.to.day === 0;
  const [from, to] = [dateText(window.from, whole), dateText(window.to, whole)];
  return `${whole && from === to ? from : `${from} to ${to}`}${back}`;
}
