import type { Series } from "../data/series.ts";

/** A neighbour of a station, with what the periods that both observed say of the two. */
export interface Neighbour {
  readonly series: Series;
  /** Neighbour's index of the same period, by index of the target; −1 where it has none or no value. */
  readonly match: Int32Array;
  /** Periods that both observed. */
  readonly n: number;
  readonly correlation: number;
  readonly meanTarget: number;
  readonly meanNeighbour: number;
  /** Σ (x − x̄)² of the neighbour over the common periods. */
  readonly spread: number;
  /** Least squares y = intercept + slope · x, y the target. */
  readonly slope: number;
  readonly intercept: number;
}

/** Where a neighbour's period equals the target's; both sorted by start. −1 where there is none or its value is missing. */
export function matchPeriods(starts: Int32Array, ends: Int32Array, other: Series): Int32Array {
  const match = new Int32Array(starts.length).fill(-1);
  for (let i = 0, j = 0; i < starts.length && j < other.starts.length; ) {
    if (starts[i] < other.starts[j]) i++;
    else if (starts[i] > other.starts[j]) j++;
    else {
      if (ends[i] === other.ends[j] && !Number.isNaN(other.values[j])) match[i] = j;
      i++;
      j++;
    }
  }
  return match;
}

/**
 * The other stations by falling Pearson correlation with the target over common periods (ties by id); those with fewer than
 * `overlap` common periods, a constant neighbour, or a correlation below `least` are left out.
 */
export function rankNeighbours(
  target: Series,
  others: readonly Series[],
  overlap: number,
  least: number,
): readonly Neighbour[] {
  return others
    .map((series) => compare(target, series))
    .filter(({ n, correlation, spread }) => n >= overlap && spread > 0 && correlation >= least)
    .sort((a, b) => b.correlation - a.correlation || (a.series.site < b.series.site ? -1 : 1));
}

function compare(target: Series, series: Series): Neighbour {
  const match = matchPeriods(target.starts, target.ends, series);
  let [n, sumY, sumX] = [0, 0, 0];
  const both = (use: (y: number, x: number) => void) => {
    for (let i = 0; i < match.length; i++)
      if (match[i] >= 0 && !Number.isNaN(target.values[i])) use(target.values[i], series.values[match[i]]);
  };
  both((y, x) => {
    n++;
    sumY += y;
    sumX += x;
  });
  const [meanTarget, meanNeighbour] = [sumY / n, sumX / n];
  // Sums about the means, in a second pass: the usual one-pass formula cancels for pressures or Kelvin.
  let [xx, xy, yy] = [0, 0, 0];
  both((y, x) => {
    xx += (x - meanNeighbour) ** 2;
    xy += (x - meanNeighbour) * (y - meanTarget);
    yy += (y - meanTarget) ** 2;
  });
  const slope = xy / xx;
  return {
    series,
    match,
    n,
    correlation: xy / Math.sqrt(xx * yy),
    meanTarget,
    meanNeighbour,
    spread: xx,
    slope,
    intercept: meanTarget - slope * meanNeighbour,
  };
}
