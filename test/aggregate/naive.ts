import type { WindowStatistic } from "../../src/aggregate/options.ts";
import type { Series } from "../../src/data/series.ts";

type Side = (value: number) => boolean;

/** Quantile of type 7 from its definition: the value at rank 1 + (n − 1)p, between neighbours in proportion. */
function quantile(values: readonly number[], p: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  const rank = 1 + (sorted.length - 1) * p;
  const below = sorted[Math.floor(rank) - 1];
  const above = sorted[Math.ceil(rank) - 1];
  return below * (1 - (rank - Math.floor(rank))) + above * (rank - Math.floor(rank));
}

/** Largest mean of `count` disjoint stretches chosen greedily, on an array with one cell per day. */
function largest(days: readonly number[], length: number, count: number): number {
  const free = days.map(() => true);
  const chosen: number[] = [];
  for (let k = 0; k < count; k++) {
    let best = Number.NEGATIVE_INFINITY;
    let at = -1;
    for (let i = 0; i + length <= days.length; i++) {
      if (!free.slice(i, i + length).every(Boolean)) continue;
      const sum = days.slice(i, i + length).reduce((a, b) => a + b, 0);
      if (sum > best) [best, at] = [sum, i];
    }
    if (at < 0) return Number.NaN;
    chosen.push(best);
    free.fill(false, at, at + length);
  }
  return chosen.reduce((a, b) => a + b, 0) / count;
}

/**
 * The statistics a second time, slowly: every day of the window looks up the observation that covers it. Shares
 * nothing with src but the type of the question. Daily statistics suppose observations of one day.
 */
export function naive(
  series: Series,
  period: { readonly start: number; readonly end: number },
  statistic: WindowStatistic,
): number {
  const days: number[] = [];
  const rows: number[] = [];
  for (let day = period.start; day < period.end; day++) {
    const i = series.starts.findIndex((start, k) => start <= day && day < series.ends[k]);
    days.push(i < 0 ? Number.NaN : series.values[i]);
    if (i >= 0 && !rows.includes(i) && !Number.isNaN(series.values[i])) rows.push(i);
  }
  const known = days.filter((value) => !Number.isNaN(value));
  const each = rows.map((i) => series.values[i]);
  if (known.length === 0) return Number.NaN;
  const add = (list: readonly number[]) => list.reduce((a, b) => a + b, 0);
  const average = (list: readonly number[]) => add(list) / list.length;
  const side: Side = (value) => {
    if (!("threshold" in statistic)) return false;
    if (value === statistic.threshold) return statistic.orEqual;
    return statistic.type.endsWith("below") ? value < statistic.threshold : value > statistic.threshold;
  };
  const hits = days.map((value, k) => (side(value) ? k + 1 : 0)).filter((k) => k > 0);
  switch (statistic.type) {
    case "mean":
      return average(known);
    case "sum":
      return add(
        days.map((value, k) => {
          const day = period.start + k;
          const i = series.starts.findIndex((start, j) => start <= day && day < series.ends[j]);
          return Number.isNaN(value) ? 0 : value / (series.ends[i] - series.starts[i]);
        }),
      );
    case "minimum":
      return Math.min(...known);
    case "maximum":
      return Math.max(...known);
    case "range":
      return Math.max(...known) - Math.min(...known);
    case "sd":
      return Math.sqrt((add(each.map((x) => x * x)) - each.length * average(each) ** 2) / (each.length - 1));
    case "median":
      return quantile(each, 0.5);
    case "quantile":
      return quantile(each, statistic.probability);
    case "trend": {
      const time = rows.map((i) => (series.starts[i] + series.ends[i]) / 2 - 10_000);
      const top = each.length * add(time.map((x, k) => x * each[k])) - add(time) * add(each);
      const bottom = each.length * add(time.map((x) => x * x)) - add(time) ** 2;
      return each.length < 2 ? Number.NaN : top / bottom;
    }
    case "days below":
    case "days above":
      return hits.length;
    case "share below":
    case "share above":
      return hits.length / known.length;
    case "longest run below":
    case "longest run above": {
      // Runs as the longest word of x in a string of x and o.
      const word = days.map((value) => (side(value) ? "x" : "o")).join("");
      return Math.max(...word.split("o").map((run) => run.length));
    }
    case "degree-days":
      return add(known.map((x) => Math.max(0, Math.min(x, statistic.cap) - statistic.base)));
    case "degree-days below":
      return add(known.map((x) => Math.max(0, statistic.base - x)));
    case "sum above":
      return add(known.filter(side));
    case "mean above":
      return average(known.filter(side));
    case "first day below":
    case "first day above":
      return hits.length === 0 ? Number.NaN : Math.min(...hits);
    case "last day below":
    case "last day above":
      return hits.length === 0 ? Number.NaN : Math.max(...hits);
    case "largest sums":
      return largest(days, statistic.days, statistic.count);
    case "largest means":
      return largest(days, statistic.days, statistic.count) / statistic.days;
    case "growing season":
      throw new Error("checked by its worked cases");
  }
}
