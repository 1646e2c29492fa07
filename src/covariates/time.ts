import type { Interval } from "../data/occasion.ts";

/**
 * The time of each interval's middle in years: a decimal calendar year (1970 + days/365.2425) where it has dates;
 * for counts tables without dates, years since the first occasion. Linear trends are taken on it.
 */
export function yearIndex(intervals: readonly Interval[]): Float64Array {
  const years = new Float64Array(intervals.length);
  let passed = 0;
  intervals.forEach(({ start, end, length }, t) => {
    const middle = (start + end) / 2;
    years[t] = Number.isFinite(middle) ? 1970 + middle / 365.2425 : passed + length / 2;
    passed += length;
  });
  return years;
}

/** Intercept (at year 0) and slope per year. */
export type Line = readonly [number, number];

/** Least squares of the values that are not missing on their years; [mean, 0] where fewer than two years differ. */
export function fitLine(years: ArrayLike<number>, values: ArrayLike<number>): Line {
  let n = 0;
  let [meanYear, meanValue] = [0, 0];
  for (let t = 0; t < values.length; t++) {
    if (Number.isNaN(values[t])) continue;
    n++;
    // Running means, so that the sums below are taken about the centre and not about year 0.
    meanYear += (years[t] - meanYear) / n;
    meanValue += (values[t] - meanValue) / n;
  }
  let [sxy, sxx] = [0, 0];
  for (let t = 0; t < values.length; t++) {
    if (Number.isNaN(values[t])) continue;
    sxy += (years[t] - meanYear) * (values[t] - meanValue);
    sxx += (years[t] - meanYear) ** 2;
  }
  const slope = sxx > 0 ? sxy / sxx : 0;
  return [meanValue - slope * meanYear, slope];
}

/** What a line leaves of the values; missing stays missing. */
export function withoutLine(
  [intercept, slope]: Line,
  years: ArrayLike<number>,
  values: ArrayLike<number>,
): Float64Array {
  return Float64Array.from(values, (value, t) => value - (intercept + slope * years[t]));
}

/** x_t − x_{t−1}; `before` is the value before the first, NaN where there is none. */
export function differences(values: ArrayLike<number>, before: number): Float64Array {
  return Float64Array.from(values, (value, t) => value - (t === 0 ? before : values[t - 1]));
}
