import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { dayOf, isoDay } from "../../../src/data/day.ts";
import { InputError } from "../../../src/errors.ts";
import { type Calendar, civilDay, labelOf, numberOf } from "../../../src/layers/netcdf/calendar.ts";
import { momentOf, readTimeScale } from "../../../src/layers/netcdf/time-units.ts";

const WHERE = { file: "a.nc", cell: "time" };
const scale = (units: string, calendar?: string) => readTimeScale(units, calendar, WHERE);
const named = (work: () => unknown): string => {
  try {
    work();
  } catch (error) {
    if (error instanceof InputError) return error.facts.name;
    throw error;
  }
  return "nothing was thrown";
};
const day = (units: string, value: number, calendar?: string) => {
  const one = scale(units, calendar);
  const civil = civilDay(one.calendar, Math.floor(momentOf(one, value)));
  return civil === undefined ? "no such day" : isoDay(civil);
};

describe("times of the CF conventions 1.11", () => {
  // §4.4: "seconds since 1992-10-8 15:15:42.5 -6:00" is seconds since 8 October 1992, 3 hours 15 minutes 42.5 seconds
  // in the afternoon, in the time zone six hours behind UTC.
  test("§4.4: the reference time with a zone", () => {
    const { from } = scale("seconds since 1992-10-8 15:15:42.5 -6:00");
    expect((from - dayOf(1992, 10, 8)) * 86400).toBeCloseTo(21 * 3600 + 15 * 60 + 42.5, 4);
  });
  // Example 4.5 (perpetual July) and example 4.6 (126 kyr B.P. with month lengths of its own): no dates to be told.
  test.each(["none", "126 kyr B.P.", "user_defined", ""])("§4.4.1: calendar %j is refused", (calendar) => {
    expect(named(() => scale("days since 1-7-15 0:0:0", calendar))).toBe("layers.calendar");
  });
  test("§4.4.1: in standard 4 October 1582 is followed by the 15th; the days between are refused", () => {
    const before = numberOf("standard", { year: 1582, month: 10, day: 4 }) ?? Number.NaN;
    expect(numberOf("standard", { year: 1582, month: 10, day: 15 })).toBe(before + 1);
    for (let d = 5; d <= 14; d++)
      expect(named(() => scale(`days since 1582-10-${d}`))).toBe("layers.time-reference");
    expect(day("days since 1582-10-4", 1)).toBe("1582-10-15");
  });
  test("§4.4.1: year 0 is refused where calendars have none", () => {
    expect(named(() => scale("days since 0000-01-01", "standard"))).toBe("layers.time-reference");
    expect(named(() => scale("days since 0-1-1", "julian"))).toBe("layers.time-reference");
    expect(day("days since 0000-01-01", 365 * 2001, "noleap")).toBe("2001-01-01");
  });
  test.each(["months since 2001-01-01", "years since 2001-01-01", "common_year since 2001-01-01"])(
    "§4.4: %j is refused by name",
    (units) => expect(named(() => scale(units))).toBe("layers.time-units"),
  );
  test.each(["", "days", "fortnights since 2001-01-01", "degrees_north"])("units %j are refused", (units) =>
    expect(named(() => scale(units))).toBe("layers.time-units"),
  );
  test.each([
    "days since yesterday",
    "days since 2001-13-01",
    "days since 2001-02-29",
    "days since 2001-01-01 25:00",
  ])("%j is refused", (units) => expect(named(() => scale(units))).toBe("layers.time-reference"));
  test.each([
    ["hours since 2001-01-01T00:00:00Z", 36, "2001-01-02"],
    ["h since 1998-4-19 6:0:0", 18, "1998-04-20"],
    ["minutes since 2000-02-28 00:00", 1440 * 2, "2000-03-01"],
    ["days since 1900-1-1", 36524, "2000-01-01"],
    ["days since 2001-01-01 +05:30", 0, "2000-12-31"],
    // A third of a day is no fraction of two: 8-hourly steps must not end a day early.
    ["hours since 1970-01-01", 24 * 11323, "2001-01-01"],
  ] as const)("%s + %d is %s", (units, value, iso) => expect(day(units, value)).toBe(iso));
});

describe("calendars", () => {
  // From memory: the Julian calendar was 13 days behind through the 20th century; Julian day 0 is 1 January 4713 BC.
  test("Julian dates are those of the same morning", () => {
    expect(isoDay(numberOf("julian", { year: 1917, month: 10, day: 25 }) ?? Number.NaN)).toBe("1917-11-07");
    expect(numberOf("julian", { year: -4712, month: 1, day: 1 })).toBe(-2440588);
    expect(numberOf("julian", { year: 1900, month: 2, day: 29 })).toBe(dayOf(1900, 3, 13));
  });
  test("days that a calendar does not have", () => {
    expect(day("days since 2001-01-01", 58, "noleap")).toBe("2001-02-28");
    expect(day("days since 2000-01-01", 59, "noleap")).toBe("2000-03-01");
    expect(day("days since 2001-01-01", 59, "all_leap")).toBe("no such day");
    expect(day("days since 2001-01-01", 59, "360_day")).toBe("no such day");
    expect(day("days since 2001-01-01", 60, "360_day")).toBe("2001-03-01");
    expect(numberOf("360_day", { year: 2001, month: 1, day: 31 })).toBeUndefined();
  });
  test("numbers and labels undo each other, day after day", () => {
    const calendars: readonly Calendar[] = ["noleap", "all_leap", "360_day"];
    const holds = fc.property(
      fc.constantFrom(...calendars),
      fc.integer({ min: -10, max: 1_000_000 }),
      (calendar, n) => {
        expect(numberOf(calendar, labelOf(calendar, n))).toBe(n);
      },
    );
    fc.assert(holds);
  });
  test("standard and proleptic Gregorian agree from the reform on", () => {
    const holds = fc.property(fc.integer({ min: dayOf(1582, 10, 15), max: 100_000 }), (n) => {
      const [year, month, dom] = isoDay(n).split("-").map(Number);
      const label = { year, month, day: dom };
      expect(numberOf("standard", label)).toBe(n);
      expect(numberOf("proleptic_gregorian", label)).toBe(n);
    });
    fc.assert(holds);
  });
});
