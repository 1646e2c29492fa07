import { dayOf } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import type { YearRange } from "./options.ts";
import { cut, type Slice } from "./slice.ts";

/** The part of a series that lies in the calendar years `from` to `to`, both included. */
export function cutYears(series: Series, { from, to }: YearRange): Slice {
  return cut(series, { start: dayOf(from, 1, 1), end: dayOf(to + 1, 1, 1) });
}
