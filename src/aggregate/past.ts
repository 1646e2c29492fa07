import type { Day } from "../data/day.ts";
import type { Slice } from "./slice.ts";

/** Which side of a threshold; `orEqual` lets the threshold itself count. Missing values are on neither side. */
export interface Past {
  readonly side: "below" | "above";
  readonly threshold: number;
  readonly orEqual: boolean;
}

function isPast(value: number, { side, threshold, orEqual }: Past): boolean {
  if (side === "below") return orEqual ? value <= threshold : value < threshold;
  return orEqual ? value >= threshold : value > threshold;
}

/** Number of observations past the threshold. */
export function countPast(slice: Slice, past: Past): number {
  let count = 0;
  for (let i = slice.lo; i < slice.hi; i++) if (isPast(slice.series.values[i], past)) count++;
  return count;
}

/** Sum of the observations past the threshold; 0 if none is. */
export function sumPast(slice: Slice, past: Past): number {
  let sum = 0;
  for (let i = slice.lo; i < slice.hi; i++) {
    const value = slice.series.values[i];
    if (isPast(value, past)) sum += value;
  }
  return sum;
}

/** The first run of at least `length` days past the threshold, or the longest (earliest in a tie). */
export interface Run {
  readonly days: number;
  /** Half-open; NaN for no run. */
  readonly start: Day;
  readonly end: Day;
}

const NO_RUN: Run = { days: 0, start: Number.NaN, end: Number.NaN };

/** Runs of days past the threshold, cut to the window. A missing value or a day without a row breaks a run. */
function* runs(slice: Slice, past: Past): Generator<Run> {
  const { starts, ends, values } = slice.series;
  let start = Number.NaN;
  let end = Number.NaN;
  for (let i = slice.lo; i < slice.hi; i++) {
    if (!isPast(values[i], past)) continue;
    const from = Math.max(starts[i], slice.period.start);
    if (from !== end) {
      if (end > start) yield { days: end - start, start, end };
      start = from;
    }
    end = Math.min(ends[i], slice.period.end);
  }
  if (end > start) yield { days: end - start, start, end };
}

export function longestRun(slice: Slice, past: Past): Run {
  let best = NO_RUN;
  for (const run of runs(slice, past)) if (run.days > best.days) best = run;
  return best;
}

/** The first run of at least `days` days, counting from `from` on. */
function firstRun(slice: Slice, past: Past, days: number, from: Day): Run {
  for (const run of runs(slice, past)) {
    const start = Math.max(run.start, from);
    if (run.end - start >= days) return { days: run.end - start, start, end: run.end };
  }
  return NO_RUN;
}

/** Day of the window (1 = its first day) of the first or last observation past the threshold; NaN if none is. */
export function dayPast(slice: Slice, past: Past, which: "first" | "last"): number {
  let found = Number.NaN;
  for (let i = slice.lo; i < slice.hi; i++) {
    if (!isPast(slice.series.values[i], past)) continue;
    found = Math.max(slice.series.starts[i], slice.period.start) - slice.period.start + 1;
    if (which === "first") break;
  }
  return found;
}

/**
 * ETCCDI growing-season length (GSL) of a year of daily mean temperature, degC: days from the first run of at
 * least 6 days above 5 to the first run of at least 6 days below 5 in the second half of the year, or to the
 * year's end. North of the equator the year is January to December, south July to June: the window says which,
 * and its second half begins six months after its start. NaN if it never grows warm.
 */
export function growingSeason(slice: Slice, half: Day): number {
  const warm = firstRun(slice, { side: "above", threshold: 5, orEqual: false }, 6, slice.period.start);
  if (warm.days === 0) return Number.NaN;
  const cold = { side: "below", threshold: 5, orEqual: false } as const;
  const end = firstRun(slice, cold, 6, Math.max(half, warm.start));
  return (end.days === 0 ? slice.period.end : end.start) - warm.start;
}
