import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { dayOf, isoDay } from "../../src/data/day.ts";
import { midDate, readOccasions, yearsBetween } from "../../src/study/occasions.ts";
import type { OccasionOptions } from "../../src/study/options.ts";
import { errorOf, inMemory, lines } from "./support.ts";

const OPTIONS: OccasionOptions = {
  file: "occasions.csv",
  name: "visit",
  start: "from",
  end: "to",
  format: "yyyy-MM-dd",
  lengths: "whole years",
  effort: "hours",
};
const read = (rows: readonly string[], options: Partial<OccasionOptions> = {}) =>
  readOccasions({ ...OPTIONS, ...options }, inMemory({ "occasions.csv": lines(...rows) }));

describe("lengths of intervals (methods, section 1)", () => {
  test("15 June to 15 June is 1, not 0.9993 or 1.0021, in common and leap years", () => {
    for (let year = 1999; year < 2006; year++)
      for (const lengths of ["exact", "whole years"] as const)
        expect(yearsBetween(dayOf(year, 6, 15), dayOf(year + 1, 6, 15), lengths)).toBe(1);
  });

  test("whole anniversaries plus the remaining days / 365.25", () => {
    expect(yearsBetween(dayOf(2001, 6, 15), dayOf(2003, 7, 25), "exact")).toBe(2 + 40 / 365.25);
    expect(yearsBetween(dayOf(2001, 6, 15), dayOf(2002, 6, 14), "exact")).toBe(364 / 365.25);
    expect(yearsBetween(dayOf(2001, 6, 15), dayOf(2001, 7, 5), "exact")).toBe(20 / 365.25);
    expect(yearsBetween(dayOf(2004, 2, 29), dayOf(2005, 2, 28), "exact")).toBe(1);
  });

  test("whole years: within 18 days counts as the whole number, 19 days do not; never 0", () => {
    const start = dayOf(2001, 6, 15);
    const year = dayOf(2002, 6, 15);
    expect(yearsBetween(start, year + 18, "whole years")).toBe(1);
    expect(yearsBetween(start, year - 18, "whole years")).toBe(1);
    expect(yearsBetween(start, year + 19, "whole years")).toBe(1 + 19 / 365.25);
    expect(yearsBetween(start, year - 19, "whole years")).toBe(346 / 365.25);
    expect(yearsBetween(start, dayOf(2004, 6, 20), "whole years")).toBe(3);
    expect(yearsBetween(start, start + 10, "whole years")).toBe(10 / 365.25);
  });

  test("exact lengths grow with the end, by at most a day and a half at an anniversary", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 20_000 }), fc.integer({ min: 1, max: 4000 }), (start, days) => {
        const before = yearsBetween(start, start + days, "exact");
        const after = yearsBetween(start, start + days + 1, "exact");
        expect(after).toBeGreaterThanOrEqual(before);
        expect(after - before).toBeLessThan(1.5 / 365.25);
        expect(Math.abs(before - days / 365.25)).toBeLessThan(1.5 / 365.25);
      }),
    );
  });
});

describe("occasions", () => {
  test("names, days, effort, and intervals from mid-date to mid-date", async () => {
    const { occasions, intervals } = await read([
      "visit,from,to,hours",
      "2001,2001-07-20,2001-07-24,12.5",
      "2002,2002-07-22,2002-07-22,",
      "2004,2004-07-18,2004-07-21,9",
    ]);
    expect(occasions.map((one) => one.name)).toEqual(["2001", "2002", "2004"]);
    expect(occasions.map((one) => one.effort)).toEqual([12.5, Number.NaN, 9]);
    expect(occasions.map((one) => isoDay(midDate(one)))).toEqual(["2001-07-22", "2002-07-22", "2004-07-20"]);
    expect(intervals.map((one) => [one.name, isoDay(one.start), isoDay(one.end), one.length])).toEqual([
      ["2001 to 2002", "2001-07-22", "2002-07-22", 1],
      ["2002 to 2004", "2002-07-22", "2004-07-20", 2],
    ]);
  });

  test("dates in another form, and the day of the year", async () => {
    const { occasions } = await read(["visit,from,to", "a,1.7.2001,02.07.2001", "b,1.7.2002,2.7.2002"], {
      format: "d.M.yyyy",
      effort: undefined as never,
    });
    expect(isoDay(occasions[0].last)).toBe("2001-07-02");
    expect(occasions[0].effort).toBeNaN();
    const yearday = await read(["visit,from,to,hours", "a,2000-366,2000-366,", "b,2001-365,2001-365,"], {
      format: "yyyy-DDD",
    });
    expect(yearday.occasions.map((one) => isoDay(one.first))).toEqual(["2000-12-31", "2001-12-31"]);
  });

  const HEAD = "visit,from,to,hours";
  const A = "a,2001-07-20,2001-07-24,9";
  test.each([
    [
      "study.occasion-date",
      [HEAD, A, "b,2002-02-29,2002-07-24,9"],
      'occasions.csv:3:2 (from): expected a date written as yyyy-MM-dd, found "2002-02-29"; mend the date, or state how dates are written under occasions.format',
    ],
    [
      "study.occasion-ends-early",
      [HEAD, "a,2001-07-20,2001-07-19,9"],
      'occasions.csv:2:3 (to): expected a last day on or after the first, 2001-07-20, found "2001-07-19"; swap the two dates or mend the wrong one; both days belong to the occasion',
    ],
    [
      "study.occasion-order",
      [HEAD, A, "b,2000-07-20,2000-07-24,9"],
      'occasions.csv:3:2 (from): expected occasions in order of time, this one after 2001-07-24 (line 2), found "2000-07-20"; sort the rows by date',
    ],
    [
      "study.occasion-overlap",
      [HEAD, A, "b,2001-07-24,2001-07-30,9"],
      'occasions.csv:3:2 (from): expected a first day after the last day of the occasion before, 2001-07-24 (line 2), found "2001-07-24"; mend the dates or join the two occasions: a day belongs to one occasion only',
    ],
    [
      "study.occasion-name",
      [HEAD, A, "a,2002-07-20,2002-07-24,9"],
      'occasions.csv:3:1 (visit): expected a name of its own (see line 2), found "a"; give each occasion its own name, e.g. its year',
    ],
    [
      "study.occasion-name",
      [HEAD, ",2001-07-20,2001-07-24,9"],
      "occasions.csv:2:1 (visit): expected a name for the occasion, found an empty cell; give each occasion its own name, e.g. its year",
    ],
    [
      "study.effort",
      [HEAD, "a,2001-07-20,2001-07-24,0"],
      'occasions.csv:2:4 (hours): expected an effort above 0, found "0"; leave the cell empty if the effort is not known, or drop the occasion if nobody looked',
    ],
    [
      "study.not-a-number",
      [HEAD, "a,2001-07-20,2001-07-24,0x10"],
      'occasions.csv:2:4 (hours): expected a number, or an empty cell where it is not known, found "0x10"; mend the cell, or leave it empty if the value is not known',
    ],
    [
      "study.too-few-occasions",
      [HEAD, A],
      "occasions.csv: expected at least 2 occasions, so that there is an interval between them, found 1 occasion; add the missing rows: one for each visit",
    ],
    [
      "table.column-missing",
      ["name,from,to,hours", A],
      'occasions.csv:1 (occasions.name): expected a column named "visit", found the columns "name", "from", "to", "hours"; name one of the columns that are there',
    ],
  ])("%s: %s", async (name, rows, message) => {
    expect(await errorOf(read(rows))).toEqual({ name, message });
  });

  test.each(["YYYY-MM-dd", "yyyy-mm-dd", "yyyy-MM", "dd.MM.yy", "yyyy-MM-dd HH", "yyyy MM DDD"])(
    "the pattern %s is refused",
    async (format) => {
      expect(await errorOf(read([HEAD, A], { format }))).toEqual({
        name: "study.date-format",
        message: `occasions.format: expected a date pattern with yyyy, MM and dd (or D, the day of the year), e.g. yyyy-MM-dd or dd.MM.yyyy, found ${JSON.stringify(format)}; write the pattern as the dates in the file are written; letters are case-sensitive`,
      });
    },
  );
});
