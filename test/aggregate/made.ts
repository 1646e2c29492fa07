import { parseIsoDay } from "../../src/data/day.ts";
import type { Interval } from "../../src/data/occasion.ts";
import type { Series, ValueKind } from "../../src/data/series.ts";

/** The day of an ISO date; a test's own typing error is a failure. */
export function on(iso: string): number {
  const day = parseIsoDay(iso);
  if (Number.isNaN(day)) throw new Error(`no date: ${iso}`);
  return day;
}

/** A daily series from a first day on; null is a row without a value. */
export function daily(
  first: string,
  values: readonly (number | null)[],
  more: { readonly site?: string; readonly kind?: ValueKind; readonly variable?: string } = {},
): Series {
  const start = on(first);
  return {
    site: more.site ?? "Ash",
    variable: more.variable ?? "x",
    unit: "1",
    kind: more.kind ?? "mean",
    starts: Int32Array.from(values, (_, i) => start + i),
    ends: Int32Array.from(values, (_, i) => start + i + 1),
    values: Float64Array.from(values, (value) => value ?? Number.NaN),
    files: ["made.csv"],
  };
}

/** An interval between two dates, its length given in years. */
export function interval(start: string, end: string, length = 1, index = 0): Interval {
  return {
    index,
    name: `${start.slice(0, 4)} to ${end.slice(0, 4)}`,
    start: on(start),
    end: on(end),
    length,
  };
}

/** Yearly intervals from the same date of one year to that of the next. */
export function yearly(monthDay: string, firstYear: number, count: number): Interval[] {
  return Array.from({ length: count }, (_, k) =>
    interval(`${firstYear + k}-${monthDay}`, `${firstYear + k + 1}-${monthDay}`, 1, k),
  );
}
