import type { Slice } from "./slice.ts";

/**
 * sums[k] over the `days` days that end with observation lo + days − 1 + k; NaN where one is missing, or where a
 * day has no row. All lie wholly in the window.
 */
function stretches(slice: Slice, days: number): Float64Array {
  const { starts, values } = slice.series;
  const sums = new Float64Array(Math.max(0, slice.hi - slice.lo - days + 1)).fill(Number.NaN);
  for (let k = 0; k < sums.length; k++) {
    const first = slice.lo + k;
    if (starts[first + days - 1] - starts[first] !== days - 1) continue;
    // Summed afresh each time: a rolling sum would carry rounding, and NaN, along.
    let sum = 0;
    for (let i = first; i < first + days; i++) sum += values[i];
    sums[k] = sum;
  }
  return sums;
}

/**
 * Mean of the `count` largest sums over `days` days in a row that share no day, taken greedily: the largest first
 * (the earliest in a tie), then the largest that does not overlap it. With 5 days and a count of 1, ETCCDI Rx5day,
 * dated by its last day. NaN if the window holds fewer than `count`.
 */
export function largestSums(
  slice: Slice,
  days: number,
  count: number,
): { readonly value: number; readonly lastDay: number } {
  const sums = stretches(slice, days);
  let total = 0;
  let lastDay = Number.NaN;
  for (let taken = 0; taken < count; taken++) {
    let best = -1;
    // Comparisons with NaN are false: missing stretches, and those struck out below, are never the largest.
    for (let k = 0; k < sums.length; k++)
      if (sums[k] > (best < 0 ? Number.NEGATIVE_INFINITY : sums[best])) best = k;
    if (best < 0) return { value: Number.NaN, lastDay: Number.NaN };
    total += sums[best];
    if (taken === 0) lastDay = slice.series.starts[slice.lo + best + days - 1];
    // Stretches that share a day with this one begin less than `days` days from it; observations are daily here.
    sums.fill(Number.NaN, Math.max(0, best - days + 1), best + days);
  }
  return { value: total / count, lastDay };
}
