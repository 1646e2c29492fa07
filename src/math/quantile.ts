/**
 * Sample quantile of type 7 (Hyndman & Fan 1996): linear interpolation at h = (n − 1)·probability of the sorted
 * values. NaN for no values.
 */
export function quantile7(values: ArrayLike<number>, probability: number): number {
  // Not Float64Array.from, which goes through the iterator.
  const sorted = new Float64Array(values).sort();
  if (sorted.length === 0) return Number.NaN;
  const h = (sorted.length - 1) * probability;
  const low = Math.floor(h);
  const high = Math.min(low + 1, sorted.length - 1);
  return sorted[low] + (h - low) * (sorted[high] - sorted[low]);
}

export function mean(values: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += values[i];
  return sum / values.length;
}

/** Sample standard deviation, divisor n − 1, two passes. */
export function sampleSd(values: ArrayLike<number>): number {
  const centre = mean(values);
  let sum = 0;
  for (let i = 0; i < values.length; i++) sum += (values[i] - centre) ** 2;
  return Math.sqrt(sum / (values.length - 1));
}
