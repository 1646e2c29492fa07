import { addMonths, civil, type Day, dayOf } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import { countText } from "../data/words.ts";
import type { Completeness } from "./options.ts";
import { cut, type Slice } from "./slice.ts";
import type { Family } from "./statistic.ts";
import { monthName } from "./window.ts";

/** The verdict on one station's days in one window. */
export interface Verdict {
  /** Which rule failed, in words; undefined if the value stands. */
  readonly failed: string | undefined;
  /** What a sum is multiplied by: due/covered under a share rule, else 1. */
  readonly scale: number;
}

/**
 * The share of days that a span which is no whole months needs where the pipeline names none. Common practice,
 * no source: the WMO rule speaks of calendar months only.
 */
const SPAN_SHARE = 0.9;

interface MonthRule {
  readonly missing: number;
  readonly inARow: number;
}

/** Missing days, and missing days in a row, from which on a month is missing. */
const MONTH_RULES: Readonly<Record<"wmo" | "five-three", MonthRule>> = {
  // WMO-No. 1203 (2017): 11 or more missing, or 5 or more in a row.
  wmo: { missing: 11, inARow: 5 },
  // The older rule: more than 5 missing, or more than 3 in a row.
  "five-three": { missing: 6, inARow: 4 },
};

const pass = (scale = 1): Verdict => ({ failed: undefined, scale });
const fail = (failed: string): Verdict => ({ failed, scale: 1 });

/** A share as it stands on paper, rounded so that a failing share never shows as the one asked for. */
function shareText(covered: number, due: number): string {
  return String(Math.floor((covered / due) * 1000) / 1000);
}

function isMonthStart(day: Day): boolean {
  return civil(day).day === 1;
}

/** True if the period is made of whole calendar months. */
export function isWholeMonths(period: Period): boolean {
  return isMonthStart(period.start) && isMonthStart(period.end);
}

/** The calendar months of a period, the first and last cut to it. */
function months(period: Period): Period[] {
  const parts: Period[] = [];
  const { year, month } = civil(period.start);
  let next = addMonths(dayOf(year, month, 1), 1);
  for (let start = period.start; start < period.end; start = next, next = addMonths(next, 1))
    parts.push({ start, end: Math.min(next, period.end) });
  return parts;
}

/** The first month that the rule refuses; a month with none of its due days is refused whatever its length. */
function badMonth(slice: Slice, rule: MonthRule): string | undefined {
  for (const part of months(slice.period)) {
    const { due, covered, longestGap } = cut(slice.series, part);
    const missing = due - covered;
    const { year, month } = civil(part.start);
    const name = `${monthName(month)} ${year}`;
    if (covered === 0) return `${name}: none of ${countText(due, "day")} covered`;
    if (missing >= rule.missing)
      return `${name}: ${missing} of ${due} days missing (${rule.missing} or more)`;
    if (longestGap >= rule.inARow)
      return `${name}: ${longestGap} days missing in a row (${rule.inARow} or more)`;
  }
  return undefined;
}

function judgeShare(slice: Slice, share: number, scaled: boolean): Verdict {
  const { covered, due } = slice;
  // Cross-multiplied, with a slack far below one day, so that 0.95 of 120 days is 114 days and not 115.
  if (covered < share * due - 1e-9)
    return fail(
      `${shareText(covered, due)} of ${countText(due, "day")} covered (a share of ${share} needed)`,
    );
  return pass(scaled ? due / covered : 1);
}

/**
 * Whether the days of a slice suffice (methods §2).
 *
 * - `daily` statistics (counts, runs, dates, degree-days): daily values, at most `allowed` days missing; where
 *   `allowed` is not said, none, or what a share rule leaves.
 * - `sum`: all days; under a share rule the share, and the sum is scaled by due/covered.
 * - `mean` (also extremes, quantiles): by calendar months, a month cut by the window being judged on its due days;
 *   values longer than a day must cover all of it; a span that is no whole months needs `SPAN_SHARE` and no gap
 *   that would refuse a month.
 *
 * `byMonths` is true for seasons and calendar years, whose edges the user set on the calendar.
 */
export function judge(
  slice: Slice,
  family: Family,
  rule: Completeness,
  byMonths: boolean,
  allowed: number | undefined,
): Verdict {
  const { due, covered, longestGap } = slice;
  const missing = due - covered;
  if (slice.observed === 0) return fail(`none of ${countText(due, "day")} covered`);
  if (family === "daily") {
    if (!slice.daily) return fail("needs daily values, found longer ones");
    if (rule.type === "share" && allowed === undefined) return judgeShare(slice, rule.share, false);
    if (missing > (allowed ?? 0))
      return fail(
        `${missing} of ${countText(due, "day")} missing (${allowed === undefined ? "none" : allowed} allowed)`,
      );
    return pass();
  }
  if (missing === 0) return pass();
  if (rule.type === "share") return judgeShare(slice, rule.share, family === "sum");
  if (family === "sum") return fail(`${missing} of ${countText(due, "day")} missing (a sum needs all days)`);
  if (!slice.daily)
    return fail(
      `${missing} of ${countText(due, "day")} missing (values longer than a day must cover the window)`,
    );
  const month = MONTH_RULES[rule.type];
  if (byMonths || isWholeMonths(slice.period)) {
    const bad = badMonth(slice, month);
    return bad === undefined ? pass() : fail(bad);
  }
  if (longestGap >= month.inARow)
    return fail(`${longestGap} days missing in a row (${month.inARow} or more)`);
  return judgeShare(slice, SPAN_SHARE, false);
}
