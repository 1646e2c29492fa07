import { UTCDate } from "@date-fns/utc";
import { parse } from "date-fns";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { civil, dayOf, isoDay } from "../../src/data/day.ts";
import {
  COMMON_FORMATS,
  compileDateFormat,
  coveredPeriod,
  periodsBetween,
  recogniseFormats,
} from "../../src/stations/dates.ts";

/** The date as date-fns reads it; its day of the year needs a switch. */
function oracle(text: string, format: string): number {
  const date = parse(text, format, new UTCDate(0), { useAdditionalDayOfYearTokens: true });
  return Number.isNaN(date.getTime()) ? Number.NaN : Math.floor(date.getTime() / 86_400_000);
}

/** A date by a pattern, day and month possibly beyond the calendar. */
function write(format: string, year: number, month: number, day: number, yearday: number): string {
  const pad = (n: number, width: number) => String(n).padStart(width, "0");
  return format
    .replace("yyyy", pad(year, 4))
    .replace("MM", pad(month, 2))
    .replace("dd", pad(day, 2))
    .replace("DDD", pad(yearday, 3))
    .replace("D", String(yearday))
    .replace("HH", "13")
    .replace("mm", "45")
    .replace("ss", "59")
    .replaceAll("'T'", "T")
    .replaceAll("'Z'", "Z");
}

describe("dates", () => {
  test("every common pattern reads, and refuses, as date-fns does", () => {
    const parts = fc.tuple(
      fc.constantFrom(...COMMON_FORMATS),
      fc.integer({ min: 1700, max: 2199 }),
      fc.integer({ min: 0, max: 13 }),
      fc.integer({ min: 0, max: 32 }),
      fc.integer({ min: 0, max: 367 }),
    );
    fc.assert(
      fc.property(parts, ([format, year, month, day, yearday]) => {
        const text = write(format, year, month, day, yearday);
        expect([text, format, compileDateFormat(format)(text)]).toEqual([text, format, oracle(text, format)]);
      }),
      { numRuns: 3000 },
    );
  });

  test("texts that are no dates", () => {
    const iso = compileDateFormat("yyyy-MM-dd");
    for (const text of [
      "",
      "2001-01-01 ",
      "2001-02-29",
      "1900-02-29",
      "98-01-01",
      "2001-1x-01",
      "2001-01-01T00",
    ])
      expect([text, iso(text)]).toEqual([text, Number.NaN]);
    expect(isoDay(iso("2000-02-29"))).toBe("2000-02-29");
    expect(compileDateFormat("dd.MM.yyyy")("1.2.2003")).toBe(dayOf(2003, 2, 1));
    // Without a separator nothing tells where a short field ends.
    expect(compileDateFormat("yyyyMMdd")("200111")).toBeNaN();
  });

  test.each(["YYYY-MM-dd", "yy-MM-dd", "MM-dd", "yyyy-LL"])("the pattern %s is refused", (format) => {
    expect(() => compileDateFormat(format)).toThrow("expected a date pattern of yyyy, MM, dd");
  });

  test("periods: every day lies in the one it is given; counts of periods add up", () => {
    const covers = fc.constantFrom("day", "dekad", "month", "year");
    fc.assert(
      fc.property(fc.integer({ min: -90_000, max: 90_000 }), covers, fc.nat(50), (day, kind, n) => {
        const first = coveredPeriod(day, kind);
        expect(first.start <= day && day < first.end).toBe(true);
        let end = first.end;
        for (let i = 0; i < n; i++) end = coveredPeriod(end, kind).end;
        expect(periodsBetween(first.start, end, kind)).toBe(n + 1);
      }),
    );
    expect(civil(coveredPeriod(dayOf(2000, 2, 25), "dekad").end)).toEqual({ year: 2000, month: 3, day: 1 });
  });

  test("formats that cannot be told apart are both named", () => {
    expect(recogniseFormats(["01/02/2003", "03/04/2003"])).toEqual(["dd/MM/yyyy", "MM/dd/yyyy"]);
    expect(recogniseFormats(["01/02/2003", "13/04/2003"])).toEqual(["dd/MM/yyyy"]);
    expect(recogniseFormats(["2003-02"])).toEqual(["yyyy-MM"]);
    expect(recogniseFormats(["20030230"])).toEqual([]);
  });
});
