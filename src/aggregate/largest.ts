import type { Slice } from "./slice.ts";

/** Sum over `days` days in a row, by its last day (its index in the series). */
interface Stretch {
  readonly last: number;
  readonly sum: number;
}

/** All runs of `days` daily values without a break that lie wholly in the window. */
function stretches(slice: Slice, days: number): Stretch[] {
  const { starts, values } = slice.series;
  const found: Stretch[] = [];
  for (let last = slice.lo + days - 1; last < slice.hi; last++) {
    if (starts[last] - starts[last - days + 1] !== days - 1) continue;
    // Summed afresh each time: a rolling sum would carry rounding, and NaN, along.
    let sum = 0;
    for (let i = last - days + 1; i <= last; i++) sum += values[i];
    if (!Number.isNaN(sum)) found.push({ last, sum });
  }
  return found;
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
  const order = stretches(slice, days).sort((a, b) => b.sum - a.sum || a.last - b.last);
  const taken: Stretch[] = [];
  for (const one of order) {
    if (taken.length === count) break;
    if (taken.every((other) => Math.abs(other.last - one.last) >= days)) taken.push(one);
  }
  if (taken.length < count) return { value: Number.NaN, lastDay: Number.NaN };
  const total = taken.reduce((sum, one) => sum + one.sum, 0);
  return { value: total / count, lastDay: slice.series.starts[taken[0].last] };
}
