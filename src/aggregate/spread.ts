import { quantile7, sampleSd } from "../math/quantile.ts";
import { daysInside, present, type Slice } from "./slice.ts";

/** Σ d_i x_i / Σ d_i, d_i the days of observation i that fall in the window. */
export function windowMean(slice: Slice): number {
  let sum = 0;
  let days = 0;
  for (let i = slice.lo; i < slice.hi; i++) {
    const value = slice.series.values[i];
    if (Number.isNaN(value)) continue;
    const inside = daysInside(slice, i);
    sum += inside * value;
    days += inside;
  }
  return days === 0 ? Number.NaN : sum / days;
}

/** Σ x_i d_i / length_i: each observation prorated by the share of its period inside. NaN if none has a value. */
export function windowSum(slice: Slice): number {
  const { starts, ends, values } = slice.series;
  let sum = 0;
  for (let i = slice.lo; i < slice.hi; i++) {
    if (Number.isNaN(values[i])) continue;
    const inside = daysInside(slice, i);
    const length = ends[i] - starts[i];
    sum += inside === length ? values[i] : (values[i] * inside) / length;
  }
  return slice.observed === 0 ? Number.NaN : sum;
}

/** Smallest and largest value of the observations that overlap the window. */
export function windowExtremes(slice: Slice): { readonly least: number; readonly most: number } {
  if (slice.observed === 0) return { least: Number.NaN, most: Number.NaN };
  let least = Number.POSITIVE_INFINITY;
  let most = Number.NEGATIVE_INFINITY;
  for (let i = slice.lo; i < slice.hi; i++) {
    const value = slice.series.values[i];
    // Comparisons with NaN are false, so missing values change nothing.
    if (value < least) least = value;
    if (value > most) most = value;
  }
  return { least, most };
}

/** Quantile of type 7 of the observations that overlap the window, each counted once. */
export function windowQuantile(slice: Slice, probability: number): number {
  return quantile7(present(slice), probability);
}

/** Sample standard deviation (n − 1) of the observations that overlap the window; NaN for fewer than two. */
export function windowSd(slice: Slice): number {
  return slice.observed < 2 ? Number.NaN : sampleSd(present(slice));
}

/** Least-squares slope of the values on the mid-days of their periods, per day; NaN for fewer than two. */
export function windowTrend(slice: Slice): number {
  if (slice.observed < 2) return Number.NaN;
  const { starts, ends, values } = slice.series;
  const middle = (i: number) => (starts[i] + ends[i]) / 2 - slice.period.start;
  let [time, value] = [0, 0];
  for (let i = slice.lo; i < slice.hi; i++)
    if (!Number.isNaN(values[i])) {
      time += middle(i) / slice.observed;
      value += values[i] / slice.observed;
    }
  let [sxy, sxx] = [0, 0];
  for (let i = slice.lo; i < slice.hi; i++)
    if (!Number.isNaN(values[i])) {
      sxy += (middle(i) - time) * (values[i] - value);
      sxx += (middle(i) - time) ** 2;
    }
  return sxy / sxx;
}
