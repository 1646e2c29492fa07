import { addMonths } from "../data/day.ts";
import { degreeDaysAbove, degreeDaysBelow } from "./degree-days.ts";
import { largestSums } from "./largest.ts";
import type { WindowStatistic } from "./options.ts";
import { countPast, dayPast, growingSeason, longestRun, type Past, sumPast } from "./past.ts";
import type { Slice } from "./slice.ts";
import { windowExtremes, windowMean, windowQuantile, windowSd, windowSum, windowTrend } from "./spread.ts";

/**
 * What a statistic asks of the days: `mean` stands some missing days, `sum` none (or is scaled), `daily` wants
 * daily values and none missing unless allowed.
 */
export type Family = "mean" | "sum" | "daily";

export function familyOf(statistic: WindowStatistic): Family {
  switch (statistic.type) {
    case "sum":
      return "sum";
    case "mean":
    case "minimum":
    case "maximum":
    case "range":
    case "sd":
    case "median":
    case "quantile":
    case "trend":
      return "mean";
    default:
      return "daily";
  }
}

/** True of statistics that grow with the window: over an interval of several years they become per-year values. */
export function growsWithDays(statistic: WindowStatistic): boolean {
  switch (statistic.type) {
    case "sum":
    case "days below":
    case "days above":
    case "degree-days":
    case "degree-days below":
    case "sum above":
      return true;
    default:
      return false;
  }
}

function pastOf(statistic: Extract<WindowStatistic, { threshold: number }>): Past {
  const side = statistic.type.endsWith("below") ? "below" : "above";
  return { side, threshold: statistic.threshold, orEqual: statistic.orEqual };
}

/**
 * One statistic of the observations in one window (methods §2), completeness aside: means weight by days inside,
 * sums prorate, all others take the observations that overlap. NaN where there is nothing to take it of. Counts,
 * runs, dates and degree-days mean days only on daily values; the completeness rule sees to that.
 */
export function windowStatistic(slice: Slice, statistic: WindowStatistic): number {
  if (slice.observed === 0) return Number.NaN;
  switch (statistic.type) {
    case "mean":
      return windowMean(slice);
    case "sum":
      return windowSum(slice);
    case "minimum":
      return windowExtremes(slice).least;
    case "maximum":
      return windowExtremes(slice).most;
    case "range": {
      const { least, most } = windowExtremes(slice);
      return most - least;
    }
    case "sd":
      return windowSd(slice);
    case "median":
      return windowQuantile(slice, 0.5);
    case "quantile":
      return windowQuantile(slice, statistic.probability);
    case "days below":
    case "days above":
      return countPast(slice, pastOf(statistic));
    case "share below":
    case "share above":
      return countPast(slice, pastOf(statistic)) / slice.observed;
    case "longest run below":
    case "longest run above":
      return longestRun(slice, pastOf(statistic)).days;
    case "degree-days":
      return degreeDaysAbove(slice, statistic.base, statistic.cap);
    case "degree-days below":
      return degreeDaysBelow(slice, statistic.base);
    case "sum above":
      return sumPast(slice, pastOf(statistic));
    case "mean above":
      // 0 / 0 is NaN: the mean of no days is missing.
      return sumPast(slice, pastOf(statistic)) / countPast(slice, pastOf(statistic));
    case "first day below":
    case "first day above":
      return dayPast(slice, pastOf(statistic), "first");
    case "last day below":
    case "last day above":
      return dayPast(slice, pastOf(statistic), "last");
    case "trend":
      return windowTrend(slice);
    case "largest sums":
      return largestSums(slice, statistic.days, statistic.count).value;
    case "largest means":
      return largestSums(slice, statistic.days, statistic.count).value / statistic.days;
    case "growing season":
      return growingSeason(slice, addMonths(slice.period.start, 6));
  }
}
