import type { Period } from "../data/period.ts";

/** The outcome of one window of one covariate. */
export interface WindowValue {
  /** NaN if missing. */
  readonly value: number;
  /** The window; undefined where the interval holds none. */
  readonly period: Period | undefined;
  /** Days of the window (of all its yearly periods). */
  readonly daysDue: number;
  /** Days with a value; of several stations, the least covered one that gave a value. */
  readonly daysCovered: number;
  /** Longest run of days without a value; of several stations, the longest among those that gave a value. */
  readonly longestGap: number;
  /** Why the value is missing, in words; undefined if it is not. */
  readonly failed: string | undefined;
  /** A sum that was scaled up by due/covered under a share rule. */
  readonly scaled: boolean;
  /** Stations that gave a value, sorted; empty for layers and ready-made values. */
  readonly stations: readonly string[];
  /** Station-days in the window whose values were infilled, of the stations that gave a value; 0 if not said. */
  readonly daysInfilled?: number;
  /** How many yearly values were averaged, where the interval holds several seasons or years; else 1. */
  readonly years?: number;
  /** Where `years` is above 1: the yearly periods, of which `period` is the hull. */
  readonly periods?: readonly Period[];
}

/** A value that was filled from neighbouring stations. */
export interface InfilledValue {
  readonly station: string;
  readonly variable: string;
  readonly unit: string;
  readonly period: Period;
  readonly value: number;
}

/** One covariate over all intervals, before preparation. */
export interface IntervalCovariate {
  readonly name: string;
  readonly theme: string;
  readonly unit: string;
  /** The definition in words: statistic of variable at place over window. */
  readonly definition: string;
  readonly files: readonly string[];
  /** Window, statistic and rule of completeness in words; absent for ready-made values. */
  readonly window?: string;
  readonly statistic?: string;
  readonly complete?: string;
  /** Every filled value, whether or not a window takes it in; absent without infilling. */
  readonly infilled?: readonly InfilledValue[];
  /** One per interval. */
  readonly values: readonly WindowValue[];
}
