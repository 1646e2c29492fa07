import { civil } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import type { YearRange } from "./options.ts";
import { cutYears } from "./years.ts";

/** The calendar month (0–11), or month and day (one number), of an observation's first day. */
function calendarKey(day: number, by: "month" | "day"): number {
  const { month, day: dom } = civil(day);
  return by === "month" ? month - 1 : (month - 1) * 31 + dom - 1;
}

/**
 * Mean over the base years for each calendar month, or each calendar day; an observation belongs to the month or
 * day it begins in, each counts once. NaN where the base has none (29 February, say, in a short base).
 */
export function climatology(series: Series, by: "month" | "day", base: YearRange): Float64Array {
  const slots = by === "month" ? 12 : 372;
  const sums = new Float64Array(slots);
  const counts = new Float64Array(slots);
  const { lo, hi } = cutYears(series, base);
  for (let i = lo; i < hi; i++) {
    if (Number.isNaN(series.values[i])) continue;
    const key = calendarKey(series.starts[i], by);
    sums[key] += series.values[i];
    counts[key]++;
  }
  return sums.map((sum, key) => sum / counts[key]);
}

/** Departures of a series from its own base means; missing where the base has no mean. */
export function departures(series: Series, by: "month" | "day", base: YearRange): Series {
  const normal = climatology(series, by, base);
  const values = series.values.map((value, i) => value - normal[calendarKey(series.starts[i], by)]);
  return { ...series, values };
}
