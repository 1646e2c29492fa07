import { isoDay } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";

/** The stations' values on common periods: values[s][i] is station s in period i, NaN if it has none. */
export interface Grid {
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  readonly values: readonly Float64Array[];
}

/** Puts stations on the union of their periods. Throws `aggregate.periods-differ` where two overlap unequally. */
export function align(stations: readonly Series[]): Grid {
  const periods = new Map<number, number>();
  for (const { site, starts, ends } of stations)
    for (let i = 0; i < starts.length; i++) {
      const end = periods.get(starts[i]);
      if (end !== undefined && end !== ends[i])
        throw new InputError({
          name: "aggregate.periods-differ",
          expected: "stations whose values cover the same periods",
          found: `values of ${end - starts[i]} and of ${ends[i] - starts[i]} days from ${isoDay(starts[i])}`,
          where: { cell: site },
          remedy: "join them by mean of windows",
        });
      periods.set(starts[i], ends[i]);
    }
  const starts = Int32Array.from(periods.keys()).sort();
  const ends = starts.map((start) => periods.get(start) ?? start);
  const values = stations.map((station) => {
    const row = new Float64Array(starts.length).fill(Number.NaN);
    let i = 0;
    for (let j = 0; j < station.starts.length; j++) {
      while (starts[i] < station.starts[j]) i++;
      row[i] = station.values[j];
    }
    return row;
  });
  return { starts, ends, values };
}
