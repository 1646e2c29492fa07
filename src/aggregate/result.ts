import type { Period } from "../data/period.ts";

/** The outcome of one window of one covariate. */
export interface WindowValue {
  /** NaN if missing. */
  readonly value: number;
  /** The window; undefined where the interval holds none. */
  readonly period: Period | undefined;
  readonly daysDue: number;
  readonly daysCovered: number;
  readonly longestGap: number;
  /** Why the value is missing, in words; undefined if it is not. */
  readonly failed: string | undefined;
  /** A sum that was scaled up by due/covered under a share rule. */
  readonly scaled: boolean;
  /** Stations that gave a value, sorted; empty for layers and ready-made values. */
  readonly stations: readonly string[];
}

/** One covariate over all intervals, before preparation. */
export interface IntervalCovariate {
  readonly name: string;
  readonly theme: string;
  readonly unit: string;
  /** The definition in words: statistic of variable at place over window. */
  readonly definition: string;
  readonly files: readonly string[];
  /** One per interval. */
  readonly values: readonly WindowValue[];
}
