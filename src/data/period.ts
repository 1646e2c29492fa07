import { type Day, isoDay } from "./day.ts";

/** A half-open run of civil days, [start, end). */
export interface Period {
  readonly start: Day;
  readonly end: Day;
}

export function periodDays(period: Period): number {
  return period.end - period.start;
}

/** Days that two periods share, never below 0. */
export function overlapDays(a: Period, b: Period): number {
  return Math.max(0, Math.min(a.end, b.end) - Math.max(a.start, b.start));
}

/** First to last day, both included, as people write periods. */
export function periodText(period: Period): string {
  return `${isoDay(period.start)} to ${isoDay(period.end - 1)}`;
}
