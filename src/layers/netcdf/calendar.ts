import { type Day, dayOf, isCivilDate } from "../../data/day.ts";

/** The calendars of CF-1.11 §4.4.1 whose days can be told; aliases are resolved by `calendarNamed`. */
export type Calendar = "standard" | "proleptic_gregorian" | "julian" | "noleap" | "all_leap" | "360_day";

const NAMES: Readonly<Record<string, Calendar>> = {
  standard: "standard",
  gregorian: "standard",
  proleptic_gregorian: "proleptic_gregorian",
  julian: "julian",
  noleap: "noleap",
  "365_day": "noleap",
  all_leap: "all_leap",
  "366_day": "all_leap",
  "360_day": "360_day",
};

export const CALENDAR_NAMES: readonly string[] = Object.keys(NAMES);

/** The calendar of an attribute's text; undefined for `none` and calendars of a file's own. */
export function calendarNamed(text: string): Calendar | undefined {
  const name = text.trim().toLowerCase();
  return Object.hasOwn(NAMES, name) ? NAMES[name] : undefined;
}

export interface DateLabel {
  readonly year: number;
  readonly month: number;
  readonly day: number;
}

const COMMON = [31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];
const LEAP = [31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31];
/** 1582-10-15, the first day of the Gregorian calendar; the day before it is 4 October in `standard`. */
const REFORM = dayOf(1582, 10, 15);

/** Days of the months, where they are the same every year. */
function monthsOf(calendar: Calendar): readonly number[] | undefined {
  if (calendar === "noleap") return COMMON;
  if (calendar === "all_leap") return LEAP;
  return calendar === "360_day" ? new Array(12).fill(30) : undefined;
}

/** True if days of this calendar are those of the sun, so that counting them gives real dates. */
export function isReal(calendar: Calendar): boolean {
  return monthsOf(calendar) === undefined;
}

/**
 * The number of a date in its calendar's own count of days; undefined if the calendar has no such date. For the real
 * calendars the count is that of `Day` (days since 1970-01-01 in the proleptic Gregorian calendar).
 */
export function numberOf(calendar: Calendar, { year, month, day }: DateLabel): number | undefined {
  if (!(month >= 1 && month <= 12 && day >= 1)) return undefined;
  const months = monthsOf(calendar);
  if (months !== undefined) {
    if (day > months[month - 1]) return undefined;
    const inYear = months.reduce((sum, one) => sum + one, 0);
    return year * inYear + months.slice(0, month - 1).reduce((sum, one) => sum + one, 0) + day - 1;
  }
  if (calendar === "proleptic_gregorian")
    return isCivilDate(year, month, day) ? dayOf(year, month, day) : undefined;
  const julian = julianDay(year, month, day);
  if (calendar === "julian") return julian;
  // CF §4.4.1: standard is Julian before the reform and Gregorian from it on; the ten days between never were.
  const gregorian = isCivilDate(year, month, day) ? dayOf(year, month, day) : undefined;
  if (gregorian !== undefined && gregorian >= REFORM) return gregorian;
  return julian !== undefined && julian < REFORM ? julian : undefined;
}

/** The civil day a number of the calendar's own count is: by instant in real calendars, by its label in others. */
export function civilDay(calendar: Calendar, number: number): Day | undefined {
  if (isReal(calendar)) return number;
  const { year, month, day } = labelOf(calendar, number);
  return isCivilDate(year, month, day) ? dayOf(year, month, day) : undefined;
}

/** The date of a number, in a calendar whose years are all alike. */
export function labelOf(calendar: Calendar, number: number): DateLabel {
  const months = monthsOf(calendar) ?? COMMON;
  const inYear = months.reduce((sum, one) => sum + one, 0);
  const year = Math.floor(number / inYear);
  let rest = number - year * inYear;
  let month = 1;
  while (rest >= months[month - 1]) rest -= months[month++ - 1];
  return { year, month, day: rest + 1 };
}

/**
 * Days since 1970-01-01 (Gregorian) of a Julian date: 365 days a year, a leap day every fourth. Julian 1970-01-01 is
 * Gregorian 1970-01-14, so the count begins 13 days later.
 */
function julianDay(year: number, month: number, day: number): number | undefined {
  const leap = ((year % 4) + 4) % 4 === 0;
  const months = leap ? LEAP : COMMON;
  if (day > months[month - 1]) return undefined;
  const before = (y: number) => 365 * y + Math.floor((y + 3) / 4);
  const ofYear = months.slice(0, month - 1).reduce((sum, one) => sum + one, 0);
  return before(year) - before(1970) + ofYear + day - 1 + 13;
}
