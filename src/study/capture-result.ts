import type { RawFinding } from "../data/finding.ts";
import type { Interval, Occasion } from "../data/occasion.ts";
import type { Counts } from "./counts.ts";
import type { History, OccasionTally } from "./histories.ts";

export interface CaptureResult {
  /** Animal by animal, or by groups that share a history; undefined for counts tables, which do not hold them. */
  readonly histories: readonly History[] | undefined;
  /** One per stratum, strata in order of code unit. */
  readonly counts: readonly Counts[];
  /** The occasions that were handed in, or those that the table's columns name (dates and effort NaN). */
  readonly occasions: readonly Occasion[];
  /** Set only where the table itself defines the occasions: lengths as told, else 1. */
  readonly intervals: readonly Interval[] | undefined;
  readonly findings: readonly RawFinding[];
  /** Animals caught at one of the occasions; NaN for counts tables. */
  readonly animals: number;
  /** Captures that count: one per animal and occasion; NaN for counts tables. */
  readonly captures: number;
  readonly perOccasion: readonly OccasionTally[];
}
