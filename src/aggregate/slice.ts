import type { Day } from "../data/day.ts";
import type { Period } from "../data/period.ts";
import type { Series } from "../data/series.ts";

/** The observations [lo, hi) of a series that overlap a period, and how well they cover it. */
export interface Slice {
  readonly series: Series;
  readonly period: Period;
  readonly lo: number;
  readonly hi: number;
  /** Days of the period, days of it with a value, and the longest run of days without one. */
  readonly due: number;
  readonly covered: number;
  readonly longestGap: number;
  /** Observations with a value. */
  readonly observed: number;
  /** True if every row in the slice, missing or not, covers one day. */
  readonly daily: boolean;
}

/** The first index with sorted[i] > day, by bisection. */
function firstAbove(sorted: Int32Array, day: Day): number {
  let lo = 0;
  let hi = sorted.length;
  while (lo < hi) {
    const mid = (lo + hi) >>> 1;
    if (sorted[mid] > day) hi = mid;
    else lo = mid + 1;
  }
  return lo;
}

/** Cuts a series to the observations that share a day with the period. O(log n + observations in the period). */
export function cut(series: Series, period: Period): Slice {
  const { starts, ends, values } = series;
  const lo = firstAbove(ends, period.start);
  let hi = lo;
  let covered = 0;
  let observed = 0;
  let longestGap = 0;
  let daily = true;
  let cursor = period.start;
  for (; hi < starts.length && starts[hi] < period.end; hi++) {
    if (ends[hi] - starts[hi] !== 1) daily = false;
    // A missing value is a gap, whether its row is there or not.
    if (Number.isNaN(values[hi])) continue;
    const from = Math.max(starts[hi], period.start);
    const to = Math.min(ends[hi], period.end);
    if (from - cursor > longestGap) longestGap = from - cursor;
    covered += to - from;
    observed++;
    cursor = to;
  }
  if (period.end - cursor > longestGap) longestGap = period.end - cursor;
  return { series, period, lo, hi, due: period.end - period.start, covered, longestGap, observed, daily };
}

/** Days of observation i inside the slice's period. */
export function daysInside(slice: Slice, i: number): number {
  const { series, period } = slice;
  return Math.min(series.ends[i], period.end) - Math.max(series.starts[i], period.start);
}

/** The values of a slice that are not missing, in order of time. */
export function present(slice: Slice): Float64Array {
  const out = new Float64Array(slice.observed);
  let n = 0;
  for (let i = slice.lo; i < slice.hi; i++) {
    const value = slice.series.values[i];
    if (!Number.isNaN(value)) out[n++] = value;
  }
  return out;
}
