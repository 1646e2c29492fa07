/**
 * A civil date as a whole number of days since 1970-01-01 (proleptic Gregorian). It has no time zone, so nothing
 * that is counted in days can depend on the machine's zone or on daylight saving.
 */
export type Day = number;

const MS_PER_DAY = 86_400_000;

/** Year, month (1–12) and day of the month (1–31). */
export interface CivilDate {
  readonly year: number;
  readonly month: number;
  readonly day: number;
}

/** The day number of a date; months and days beyond their range roll over, as in the calendar of `Date.UTC`. */
export function dayOf(year: number, month: number, day: number): Day {
  const date = new Date(0);
  // setUTCFullYear, not Date.UTC: the latter reads years 0–99 as 1900–1999.
  date.setUTCFullYear(year, month - 1, day);
  return date.getTime() / MS_PER_DAY;
}

export function civil(day: Day): CivilDate {
  const date = new Date(day * MS_PER_DAY);
  return { year: date.getUTCFullYear(), month: date.getUTCMonth() + 1, day: date.getUTCDate() };
}

/** ISO 8601 calendar date, yyyy-MM-dd. */
export function isoDay(day: Day): string {
  const { year, month, day: dom } = civil(day);
  const pad = (value: number, width: number) => String(value).padStart(width, "0");
  return `${pad(year, 4)}-${pad(month, 2)}-${pad(dom, 2)}`;
}

/** Days in a month of the proleptic Gregorian calendar. */
export function daysInMonth(year: number, month: number): number {
  return dayOf(year, month + 1, 1) - dayOf(year, month, 1);
}

/** True if the three numbers name a real calendar date. */
export function isCivilDate(year: number, month: number, day: number): boolean {
  return month >= 1 && month <= 12 && day >= 1 && day <= daysInMonth(year, month);
}

/** The same day of the month `months` later; a day that does not exist becomes the month's last. */
export function addMonths(day: Day, months: number): Day {
  const { year, month, day: dom } = civil(day);
  const index = year * 12 + (month - 1) + months;
  const toYear = Math.floor(index / 12);
  const toMonth = index - toYear * 12 + 1;
  return dayOf(toYear, toMonth, Math.min(dom, daysInMonth(toYear, toMonth)));
}

/** Reads an ISO date (yyyy-MM-dd); NaN if it is not one. */
export function parseIsoDay(text: string): Day {
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(text);
  if (match === null) return Number.NaN;
  const [year, month, day] = [Number(match[1]), Number(match[2]), Number(match[3])];
  return isCivilDate(year, month, day) ? dayOf(year, month, day) : Number.NaN;
}
