import type { Day } from "./day.ts";
import { countText } from "./words.ts";

/** A sampling occasion: first and last day, both included. */
export interface Occasion {
  readonly index: number;
  readonly name: string;
  readonly first: Day;
  readonly last: Day;
  /** Effort in the unit the user keeps it in; NaN if not given. */
  readonly effort: number;
}

/**
 * Interval t runs from occasion t to occasion t + 1, mid-date to mid-date, half-open. For counts tables without
 * dates `start` and `end` are NaN.
 */
export interface Interval {
  readonly index: number;
  /** e.g. `2001 to 2002`, from the occasions' names. */
  readonly name: string;
  readonly start: Day;
  readonly end: Day;
  /** Length Δ in years. */
  readonly length: number;
}

/** `20 intervals`; where some are split into years, `19 intervals, cut into 20 years`. */
export function intervalWords(between: number, parts: number): string {
  const intervals = countText(between, "interval");
  return parts === between ? intervals : `${intervals}, cut into ${countText(parts, "year")}`;
}
