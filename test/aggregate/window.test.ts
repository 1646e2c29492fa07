import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Window } from "../../src/aggregate/options.ts";
import { planWindows } from "../../src/aggregate/plan.ts";
import { seasonEnding, windowPeriod, windowText } from "../../src/aggregate/window.ts";
import { addMonths, isoDay } from "../../src/data/day.ts";
import type { Interval } from "../../src/data/occasion.ts";
import { periodText } from "../../src/data/period.ts";
import { interval } from "./made.ts";

const NOV_TO_FEB: Window = { type: "season", from: { month: 11, day: 1 }, to: { month: 2, day: 0 }, lag: 0 };
const JUN_TO_AUG: Window = { type: "season", from: { month: 6, day: 1 }, to: { month: 8, day: 0 }, lag: 0 };
const texts = (window: Window, one: Interval) => windowPeriod(window, one).periods.map(periodText);

describe("seasons", () => {
  test("Nov to Feb lies in the interval that holds all of it, and ends on 29 Feb in a leap year", () => {
    expect(texts(NOV_TO_FEB, interval("2002-07-20", "2003-07-22"))).toEqual(["2002-11-01 to 2003-02-28"]);
    expect(texts(NOV_TO_FEB, interval("2003-07-20", "2004-07-22"))).toEqual(["2003-11-01 to 2004-02-29"]);
  });

  test("lag goes whole years back: each year's own last of February", () => {
    const lagged = { ...NOV_TO_FEB, lag: 3 };
    expect(texts(lagged, interval("2002-07-20", "2003-07-22"))).toEqual(["1999-11-01 to 2000-02-29"]);
  });

  test("one day short at either end and the season is not held: empty, not shifted", () => {
    expect(texts(JUN_TO_AUG, interval("2001-06-01", "2001-09-01", 0.25))).toHaveLength(1);
    for (const [start, end] of [
      ["2001-06-02", "2002-06-02"],
      ["2000-08-31", "2001-08-31"],
    ]) {
      const { periods, problem, words } = windowPeriod(JUN_TO_AUG, interval(start, end));
      expect(periods).toEqual([]);
      expect(problem).toBe("window-empty");
      expect(words).toBe("holds no whole Jun to Aug");
    }
  });

  test("an interval of several years gives each of its seasons", () => {
    expect(texts(NOV_TO_FEB, interval("2001-07-20", "2004-07-20", 3))).toEqual([
      "2001-11-01 to 2002-02-28",
      "2002-11-01 to 2003-02-28",
      "2003-11-01 to 2004-02-29",
    ]);
  });

  test("day–month seasons across the new year; a season that begins and ends in one month", () => {
    const cross: Window = { type: "season", from: { month: 11, day: 15 }, to: { month: 3, day: 10 }, lag: 0 };
    expect(texts(cross, interval("2001-07-01", "2002-07-01"))).toEqual(["2001-11-15 to 2002-03-10"]);
    const long: Window = { type: "season", from: { month: 7, day: 20 }, to: { month: 7, day: 19 }, lag: 0 };
    expect(texts(long, interval("2001-07-20", "2002-07-20"))).toEqual(["2001-07-20 to 2002-07-19"]);
    const leap: Window = { type: "season", from: { month: 2, day: 29 }, to: { month: 3, day: 0 }, lag: 0 };
    expect(texts(leap, interval("2001-01-01", "2002-01-01"))).toEqual(["2001-02-28 to 2001-03-31"]);
  });

  test("south of the equator: July to June in an interval of calendar halves", () => {
    const year: Window = { type: "season", from: { month: 7, day: 1 }, to: { month: 6, day: 0 }, lag: 0 };
    expect(texts(year, interval("2001-07-01", "2002-07-01"))).toEqual(["2001-07-01 to 2002-06-30"]);
  });

  test("the season that ends in a year", () => {
    expect(periodText(seasonEnding(NOV_TO_FEB, 2004) ?? { start: 0, end: 0 })).toBe(
      "2003-11-01 to 2004-02-29",
    );
    expect(periodText(seasonEnding(JUN_TO_AUG, 2004) ?? { start: 0, end: 0 })).toBe(
      "2004-06-01 to 2004-08-31",
    );
    // its last day is the year's own
    const autumn = {
      type: "season",
      from: { month: 9, day: 1 },
      to: { month: 12, day: 31 },
      lag: 0,
    } as const;
    expect(periodText(seasonEnding(autumn, 2004) ?? { start: 0, end: 0 })).toBe("2004-09-01 to 2004-12-31");
    expect(seasonEnding({ type: "interval", lag: 0 }, 2004)).toBeUndefined();
  });

  test("a season or year that is given lies in the interval, whole, and every such season is given", () => {
    const monthDay = fc.record({
      month: fc.integer({ min: 1, max: 12 }),
      day: fc.integer({ min: 0, max: 28 }),
    });
    const span = fc.record({
      start: fc.integer({ min: 0, max: 20_000 }),
      days: fc.integer({ min: 1, max: 1500 }),
    });
    fc.assert(
      fc.property(monthDay, monthDay, span, (from, to, { start, days }) => {
        const one: Interval = { index: 0, name: "i", start, end: start + days, length: days / 365.25 };
        const { periods } = windowPeriod({ type: "season", from, to, lag: 0 }, one);
        // Naive: walk day by day, and from each day that is the first of the season, to its next last day.
        const naive: string[] = [];
        const isDate = (day: number, { month, day: dom }: { month: number; day: number }) =>
          dom === 0
            ? isoDay(day + 1).endsWith("-01") && Number(isoDay(day).slice(5, 7)) === month
            : isoDay(day).endsWith(`-${String(month).padStart(2, "0")}-${String(dom).padStart(2, "0")}`);
        for (let day = one.start; day < one.end; day++) {
          if (!isDate(day, from)) continue;
          let last = day;
          while (!isDate(last, to)) last++;
          if (last < one.end) naive.push(periodText({ start: day, end: last + 1 }));
        }
        expect(periods.map(periodText)).toEqual(naive);
      }),
      { numRuns: 60 },
    );
  });
});

describe("spans, whole intervals, calendar years", () => {
  const one = interval("2001-07-20", "2002-07-22");
  const end = (days: number) => ({ days, of: "end" as const });

  test("60 days before end up to end, the end day not included", () => {
    const window: Window = { type: "span", from: end(-60), to: end(0), lag: 0 };
    expect(texts(window, one)).toEqual(["2002-05-23 to 2002-07-21"]);
    expect(texts({ ...window, lag: 1 }, one)).toEqual(["2001-05-23 to 2001-07-21"]);
  });

  test("a span past the end occasion is given and marked", () => {
    const window: Window = { type: "span", from: end(-10), to: end(1), lag: 0 };
    expect(windowPeriod(window, one)).toMatchObject({
      problem: "window-leak",
      words: "reaches 1 day past the end occasion",
    });
    expect(windowPeriod({ ...window, to: end(0) }, one).problem).toBeUndefined();
    const from = { days: 400, of: "start" as const };
    expect(
      windowPeriod({ type: "span", from: { days: 0, of: "start" }, to: from, lag: 0 }, one).problem,
    ).toBe("window-leak");
  });

  test("a span whose ends are the wrong way round is empty", () => {
    const found = windowPeriod({ type: "span", from: end(0), to: end(-5), lag: 0 }, one);
    expect(found).toMatchObject({
      periods: [],
      problem: "window-empty",
      words: "is no period: end to 5 days before end",
    });
  });

  test("the whole interval, cut at anniversaries over several years", () => {
    const window: Window = { type: "interval", lag: 0 };
    expect(texts(window, one)).toEqual(["2001-07-20 to 2002-07-21"]);
    const three = windowPeriod(window, interval("2001-07-20", "2004-07-22", 3));
    expect(three.periods.map(periodText)).toEqual([
      "2001-07-20 to 2002-07-19",
      "2002-07-20 to 2003-07-19",
      "2003-07-20 to 2004-07-21",
    ]);
    expect(three.perYear).toBe(1);
    const half = windowPeriod(window, interval("2001-01-01", "2003-07-02", 2.5));
    expect(half.periods).toHaveLength(3);
    expect(half.perYear).toBeCloseTo(3 / 2.5, 14);
    expect(texts({ ...window, lag: 1 }, interval("2004-02-29", "2005-02-28"))).toEqual([
      "2003-02-28 to 2004-02-27",
    ]);
  });

  test("calendar years wholly held", () => {
    const window: Window = { type: "year", lag: 0 };
    expect(texts(window, interval("2000-12-31", "2003-01-01", 2))).toEqual([
      "2001-01-01 to 2001-12-31",
      "2002-01-01 to 2002-12-31",
    ]);
    expect(windowPeriod(window, one).problem).toBe("window-empty");
    expect(texts({ ...window, lag: 2 }, interval("2001-01-01", "2002-01-01"))).toEqual([
      "1999-01-01 to 1999-12-31",
    ]);
  });

  test("an interval without dates holds no window", () => {
    const undated = { ...one, start: Number.NaN, end: Number.NaN };
    expect(windowPeriod(NOV_TO_FEB, undated)).toMatchObject({
      problem: "window-empty",
      words: "has no dates",
    });
  });

  test("whole intervals of any length are covered without gap or overlap", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 20_000 }), fc.integer({ min: 1, max: 4000 }), (start, days) => {
        const length = days / 365.25;
        const { periods } = windowPeriod(
          { type: "interval", lag: 0 },
          { index: 0, name: "i", start, end: start + days, length },
        );
        expect(periods[0].start).toBe(start);
        expect(periods[periods.length - 1].end).toBe(start + days);
        for (let k = 1; k < periods.length; k++) expect(periods[k].start).toBe(periods[k - 1].end);
        for (const period of periods) expect(period.end).toBeGreaterThan(period.start);
      }),
    );
  });
});

describe("words and plan", () => {
  test("windows in the words of the pipeline file", () => {
    expect(windowText(NOV_TO_FEB)).toBe("Nov to Feb");
    expect(windowText({ ...JUN_TO_AUG, lag: 1 })).toBe("Jun to Aug, 1 year before");
    expect(
      windowText({ type: "season", from: { month: 11, day: 15 }, to: { month: 2, day: 0 }, lag: 0 }),
    ).toBe("15 Nov to end of Feb");
    const span = {
      type: "span",
      from: { days: -60, of: "end" },
      to: { days: 1, of: "start" },
      lag: 0,
    } as const;
    expect(windowText(span)).toBe("60 days before end to 1 day after start");
  });

  test("the plan: covariate × interval → first and last day, days due", () => {
    const intervals = [interval("2001-07-20", "2002-07-20"), interval("2002-07-20", "2002-12-20", 0.4)];
    expect(planWindows([{ name: "winter", window: NOV_TO_FEB }], intervals)).toEqual([
      {
        covariate: "winter",
        interval: "2001 to 2002",
        firstDay: "2001-11-01",
        lastDay: "2002-02-28",
        daysDue: 120,
        years: 1,
      },
      {
        covariate: "winter",
        interval: "2002 to 2002",
        firstDay: "",
        lastDay: "",
        daysDue: 0,
        years: 0,
        problem: "window-empty",
        words: "holds no whole Nov to Feb",
      },
    ]);
  });

  test("adding months never rolls over: 29 Feb less a year is 28 Feb", () => {
    expect(isoDay(addMonths(interval("2004-02-29", "2005-01-01").start, -12))).toBe("2003-02-28");
  });
});
