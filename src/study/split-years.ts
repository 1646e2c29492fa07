import { addMonths, type Day } from "../data/day.ts";
import type { Interval } from "../data/occasion.ts";

/** A length within 18 days of a whole number of years is cut at anniversaries. */
const WHOLE_YEAR_SLACK = 18 / 365.25;

export interface SplitIntervals {
  /** The years, in order of time; an interval of about one year stays as it is. */
  readonly years: readonly Interval[];
  /** The interval that each year is of. */
  readonly yearsOf: Int32Array;
}

/**
 * Cuts intervals of 1.5 years and more into years (methods §1, `split: years`): at anniversaries where the length is a
 * whole number of years to 18 days, else into equal parts. The parts share the length equally and are named
 * `2003 to 2005, year 1 of 2`. Intervals without dates are cut by their length alone.
 */
export function splitIntervals(intervals: readonly Interval[]): SplitIntervals {
  const years: Interval[] = [];
  const yearsOf: number[] = [];
  for (const one of intervals) {
    const count = Math.max(1, Math.round(one.length));
    for (let k = 0; k < count; k++) {
      yearsOf.push(one.index);
      years.push({
        index: years.length,
        name: count === 1 ? one.name : `${one.name}, year ${k + 1} of ${count}`,
        start: cut(one, k, count),
        end: cut(one, k + 1, count),
        length: one.length / count,
      });
    }
  }
  return { years, yearsOf: Int32Array.from(yearsOf) };
}

function cut({ start, end, length }: Interval, k: number, count: number): Day {
  if (k === 0) return start;
  if (k === count) return end;
  if (!Number.isFinite(start)) return Number.NaN;
  if (Math.abs(length - count) <= WHOLE_YEAR_SLACK) return addMonths(start, 12 * k);
  return start + Math.round((k * (end - start)) / count);
}
