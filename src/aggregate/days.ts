import { civil } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import { align, type Grid } from "./grid.ts";
import { filesOf } from "./sites.ts";

/** The mean series of several stations, and the periods on which some of them, not all, had a value. */
interface MeanOfDays {
  readonly series: Series;
  /** True where a value was made of fewer than all stations. */
  readonly partial: Uint8Array;
}

/**
 * How far each station stands above the mean of all, per calendar month (the last slot: over the whole year),
 * on the periods that every station has. NaN where there is no such period.
 */
function offsets(grid: Grid, months: Int32Array, weights: readonly number[]): Float64Array[] {
  const { values } = grid;
  const whole = weights.reduce((sum, w) => sum + w, 0);
  const counts = new Float64Array(13);
  const sums = values.map(() => new Float64Array(13));
  for (let i = 0; i < grid.starts.length; i++) {
    let total = 0;
    for (const [s, row] of values.entries()) total += weights[s] * row[i];
    if (Number.isNaN(total)) continue;
    for (const slot of [months[i], 12]) {
      counts[slot]++;
      for (let s = 0; s < values.length; s++) sums[s][slot] += values[s][i] - total / whole;
    }
  }
  return sums.map((row) => row.map((sum, slot) => sum / (counts[slot] > 0 ? counts[slot] : Number.NaN)));
}

/**
 * `mean of days`: one series, the mean of the stations on each day. Where all have a value it is the plain mean;
 * where some lack one, the others' values are first reduced by how far each stands above the mean of all in that
 * calendar month (on the days that all have), so that a station that is away for a while makes no step. A day is
 * missing if no station has a value, or if no day at all is common to them. With weights all means are weighted ones. Throws
 * `aggregate.periods-differ`.
 */
export function meanOfDays(
  stations: readonly Series[],
  weights: readonly number[] = stations.map(() => 1),
): MeanOfDays {
  const grid = align(stations);
  const { starts, ends, values } = grid;
  const months = starts.map((start) => civil(start).month - 1);
  const above = offsets(grid, months, weights);
  const mean = new Float64Array(starts.length).fill(Number.NaN);
  const partial = new Uint8Array(starts.length);
  for (let i = 0; i < starts.length; i++) {
    let plain = 0;
    let adjusted = 0;
    let count = 0;
    let there = 0;
    for (let s = 0; s < values.length; s++) {
      const value = values[s][i];
      if (Number.isNaN(value)) continue;
      const offset = above[s][months[i]];
      plain += weights[s] * value;
      adjusted += weights[s] * (value - (Number.isNaN(offset) ? above[s][12] : offset));
      there += weights[s];
      count++;
    }
    if (count === 0) continue;
    partial[i] = count < values.length ? 1 : 0;
    mean[i] = (partial[i] === 0 ? plain : adjusted) / there;
  }
  const site = stations.map((one) => one.site).join(", ");
  const series = { ...stations[0], site, starts, ends, values: mean, files: filesOf(stations) };
  return { series, partial };
}
