import { InputError, type Place } from "../../errors.ts";
import { CALENDAR_NAMES, type Calendar, calendarNamed, numberOf } from "./calendar.ts";

/** A time axis: how its numbers count. */
export interface TimeScale {
  readonly calendar: Calendar;
  /** Days in one unit. */
  readonly days: number;
  /** The reference time in the calendar's own count of days, its hours as a fraction, in UTC. */
  readonly from: number;
}

const UNIT_DAYS: Readonly<Record<string, number>> = {
  day: 1,
  days: 1,
  d: 1,
  hour: 1 / 24,
  hours: 1 / 24,
  hr: 1 / 24,
  hrs: 1 / 24,
  h: 1 / 24,
  minute: 1 / 1440,
  minutes: 1 / 1440,
  min: 1 / 1440,
  mins: 1 / 1440,
  second: 1 / 86400,
  seconds: 1 / 86400,
  sec: 1 / 86400,
  secs: 1 / 86400,
  s: 1 / 86400,
};

const REFERENCE =
  /^([-+]?\d{1,6})-(\d{1,2})-(\d{1,2})(?:(?:\s+|[Tt])(\d{1,2})(?::(\d{1,2})(?::(\d{1,2}(?:\.\d*)?))?)?)?\s*(Z|UTC|GMT|[-+]\d{1,2}(?::?\d{2})?)?$/i;

/**
 * Reads `units` and `calendar` of a time axis (CF-1.11 §4.4): "days since 1950-01-01 00:00:00", with a zone or without.
 * Throws `layers.time-units` (no such text, or "months since" and "years since", whose lengths CF warns of),
 * `layers.time-reference` and `layers.calendar`.
 */
export function readTimeScale(units: string, calendarText: string | undefined, where: Place): TimeScale {
  const calendar = calendarNamed(calendarText ?? "standard");
  if (calendar === undefined)
    throw new InputError({
      name: "layers.calendar",
      expected: `a calendar that has dates: ${CALENDAR_NAMES.join(", ")}`,
      found: JSON.stringify(calendarText),
      where,
      remedy: "date the images by their names or by first and step, or mend the calendar attribute",
    });
  const match = /^\s*(\S+)\s+since\s+(.+?)\s*$/i.exec(units);
  const days = match === null ? undefined : UNIT_DAYS[match[1].toLowerCase()];
  if (match === null || days === undefined) {
    const uneven = /^\s*(months?|mons?|years?|yrs?|common_years?)\s+since/i.test(units);
    throw new InputError({
      name: "layers.time-units",
      expected: "a time in days, hours, minutes or seconds since a date",
      found: `${JSON.stringify(units)}${uneven ? ", a unit without one length (UDUNITS takes a year of 365.2425 days, a month of a twelfth)" : ""}`,
      where,
      remedy: "date the images instead, e.g. date: { first: 2001-01, step: month }",
    });
  }
  const reference = REFERENCE.exec(match[2]);
  const label =
    reference === null
      ? undefined
      : { year: Number(reference[1]), month: Number(reference[2]), day: Number(reference[3]) };
  // There is no year 0 in the mixed and Julian calendars; old conventions marked climatologies by it.
  const absent = label?.year === 0 && (calendar === "standard" || calendar === "julian");
  const day = label === undefined || absent ? undefined : numberOf(calendar, label);
  const clock = (reference ?? []).slice(4, 7).map((part) => Number(part ?? 0));
  if (reference === null || day === undefined || clock[0] > 24 || clock[1] > 59 || clock[2] >= 61)
    throw new InputError({
      name: "layers.time-reference",
      expected: `a reference date that the ${calendar} calendar has`,
      found: JSON.stringify(match[2]),
      where,
      remedy: "mend the units or the calendar attribute, or date the images by first and step",
    });
  const seconds = clock[0] * 3600 + clock[1] * 60 + clock[2] - zoneSeconds(reference[7]);
  return { calendar, days, from: day + seconds / 86400 };
}

/** Seconds that a zone is ahead of UTC. */
function zoneSeconds(zone: string | undefined): number {
  const match = /^([-+])(\d{1,2})(?::?(\d{2}))?$/.exec(zone ?? "");
  if (match === null) return 0;
  return (match[1] === "-" ? -1 : 1) * (Number(match[2]) * 3600 + Number(match[3] ?? 0) * 60);
}

/** A moment in the calendar's own count of days. Within a second of midnight it is midnight: 8 hours are 0.333… days. */
export function momentOf({ from, days }: TimeScale, value: number): number {
  const moment = from + value * days;
  const near = Math.round(moment);
  return Math.abs(moment - near) < 1 / 86400 ? near : moment;
}
