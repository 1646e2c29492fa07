/** How a value stands for its period: a total is prorated, a mean weighted, a minimum or maximum taken as such. */
export type ValueKind = "total" | "mean" | "minimum" | "maximum";

/**
 * One variable at one station or place: n observations, each over its own period [starts[i], ends[i]), ordered by
 * start, without overlaps or repeats. Missing values are NaN; a period that was never observed has no row.
 */
export interface Series {
  /** The station, or the place of a layer. */
  readonly site: string;
  /** The variable, e.g. `rain`. */
  readonly variable: string;
  readonly unit: string;
  readonly kind: ValueKind;
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  readonly values: Float64Array;
  /** Files it was read from, relative to the data folder, sorted. */
  readonly files: readonly string[];
}

/** A station or place with where it is (WGS 84 degrees); NaN where not known. */
export interface Site {
  readonly id: string;
  readonly name: string;
  readonly longitude: number;
  readonly latitude: number;
  readonly elevation: number;
}
