import type { IntervalCovariate } from "../../src/aggregate/result.ts";
import type { PrepareOptions } from "../../src/covariates/options.ts";
import { dayOf } from "../../src/data/day.ts";
import type { Interval } from "../../src/data/occasion.ts";

/** Calendar years as intervals. */
export function calendarYears(first: number, count: number): Interval[] {
  return Array.from({ length: count }, (_, k) => ({
    index: k,
    name: `${first + k} to ${first + k + 1}`,
    start: dayOf(first + k, 1, 1),
    end: dayOf(first + k + 1, 1, 1),
    length: 1,
  }));
}

/** A covariate of bare values; NaN is missing for a reason. */
export function made(name: string, values: readonly number[], unit = "mm"): IntervalCovariate {
  return {
    name,
    theme: "rain",
    unit,
    definition: `sum of ${name}`,
    files: ["made.csv"],
    values: values.map((value) => ({
      value,
      period: { start: 0, end: 1 },
      daysDue: 1,
      daysCovered: Number.isNaN(value) ? 0 : 1,
      longestGap: 0,
      failed: Number.isNaN(value) ? "none of 1 day covered" : undefined,
      scaled: false,
      stations: ["Ash"],
    })),
  };
}

export const PLAIN: PrepareOptions = {
  derive: [],
  transform: {},
  detrend: "none",
  incomplete: "leave out",
  standardise: { type: "sample" },
};
