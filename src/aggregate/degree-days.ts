import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";
import type { Slice } from "./slice.ts";

/** Σ max(0, min(x, cap) − base) over the days of the window: method 1 of McMaster & Wilhelm (1997) on means. */
export function degreeDaysAbove(slice: Slice, base: number, cap: number): number {
  let sum = 0;
  for (let i = slice.lo; i < slice.hi; i++) {
    const value = slice.series.values[i];
    const above = Math.min(value, cap) - base;
    if (above > 0) sum += above;
  }
  return sum;
}

/** Σ max(0, base − x) over the days of the window. */
export function degreeDaysBelow(slice: Slice, base: number): number {
  let sum = 0;
  for (let i = slice.lo; i < slice.hi; i++) {
    const below = base - slice.series.values[i];
    if (below > 0) sum += below;
  }
  return sum;
}

/**
 * The daily temperature whose degree-days are asked for, from maxima and minima of one site (McMaster & Wilhelm
 * 1997): method 1 is (max + min)/2, clipped later; method 2 clips each to [base, cap] before the mean. A day that
 * lacks either value is missing. Throws `aggregate.periods-differ` where the two do not cover the same periods.
 */
export function dailyFromExtremes(
  max: Series,
  min: Series,
  base: number,
  cap: number,
  method: 1 | 2,
): Series {
  const clip = (x: number) => Math.min(Math.max(x, base), cap);
  const values = new Float64Array(max.values.length).fill(Number.NaN);
  let j = 0;
  for (let i = 0; i < values.length; i++) {
    while (j < min.starts.length && min.starts[j] < max.starts[i]) j++;
    if (j >= min.starts.length || min.starts[j] !== max.starts[i]) continue;
    if (min.ends[j] !== max.ends[i])
      throw new InputError({
        name: "aggregate.periods-differ",
        expected: "maxima and minima that cover the same periods",
        found: `${max.ends[i] - max.starts[i]} and ${min.ends[j] - min.starts[j]} days from one date on at ${max.site}`,
        where: { cell: `${max.variable} and ${min.variable}` },
        remedy: "take both from records of the same kind",
      });
    // Math.min and Math.max keep NaN, so a missing value stays missing.
    const [high, low] = [max.values[i], min.values[j]];
    values[i] = method === 1 ? (high + low) / 2 : (clip(high) + clip(low)) / 2;
  }
  return { ...max, variable: `${max.variable} and ${min.variable}`, kind: "mean", values };
}
