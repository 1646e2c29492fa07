import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { dailyFromExtremes, degreeDaysAbove } from "../../src/aggregate/degree-days.ts";
import { largestSums } from "../../src/aggregate/largest.ts";
import type { WindowStatistic } from "../../src/aggregate/options.ts";
import { growingSeason } from "../../src/aggregate/past.ts";
import { cut } from "../../src/aggregate/slice.ts";
import { windowStatistic } from "../../src/aggregate/statistic.ts";
import { dayOf } from "../../src/data/day.ts";
import type { Series } from "../../src/data/series.ts";
import { daily, on } from "./made.ts";
import { naive } from "./naive.ts";

/** A series with observations of 1 to `longest` days, rows left out and values missing. */
function anySeries(longest: number): fc.Arbitrary<Series> {
  const row = fc.record({
    gap: fc.oneof({ weight: 8, arbitrary: fc.constant(0) }, fc.integer({ min: 1, max: 5 })),
    length: fc.integer({ min: 1, max: longest }),
    // Few distinct values, so that ties and values on the threshold occur.
    value: fc.oneof(
      { weight: 8, arbitrary: fc.integer({ min: -4, max: 12 }).map((x) => x / 2) },
      fc.constant(Number.NaN),
    ),
  });
  return fc.array(row, { minLength: 1, maxLength: 60 }).map((rows) => {
    let day = 10_000;
    const starts: number[] = [];
    const ends: number[] = [];
    for (const { gap, length } of rows) {
      starts.push(day + gap);
      day += gap + length;
      ends.push(day);
    }
    return {
      ...daily("2000-01-01", []),
      starts: Int32Array.from(starts),
      ends: Int32Array.from(ends),
      values: Float64Array.from(rows, (one) => one.value),
    };
  });
}

const anyPeriod = fc
  .record({ from: fc.integer({ min: -10, max: 90 }), days: fc.integer({ min: 1, max: 120 }) })
  .map(({ from, days }) => ({ start: 10_000 + from, end: 10_000 + from + days }));

const past = { threshold: 1, orEqual: false } as const;
const pastOrEqual = { threshold: 1, orEqual: true } as const;

const ANY_LENGTH: WindowStatistic[] = [
  { type: "mean" },
  { type: "sum" },
  { type: "minimum" },
  { type: "maximum" },
  { type: "range" },
  { type: "sd" },
  { type: "median" },
  { type: "quantile", probability: 0.9 },
  { type: "quantile", probability: 0 },
  { type: "quantile", probability: 1 },
  { type: "trend" },
];
const DAILY: WindowStatistic[] = [
  { type: "days below", ...past },
  { type: "days above", ...pastOrEqual },
  { type: "share below", ...pastOrEqual },
  { type: "share above", ...past },
  { type: "longest run below", ...past },
  { type: "longest run above", ...pastOrEqual },
  { type: "degree-days", base: 0.5, cap: 4 },
  { type: "degree-days", base: 0.5, cap: Number.POSITIVE_INFINITY },
  { type: "degree-days below", base: 2 },
  { type: "sum above", ...past },
  { type: "mean above", ...pastOrEqual },
  { type: "first day below", ...past },
  { type: "first day above", ...pastOrEqual },
  { type: "last day below", ...pastOrEqual },
  { type: "last day above", ...past },
  { type: "largest sums", days: 5, count: 1 },
  { type: "largest means", days: 3, count: 2 },
];
const named = (statistic: WindowStatistic) => ({ name: JSON.stringify(statistic), statistic });

function agrees(series: Series, period: { start: number; end: number }, statistic: WindowStatistic): void {
  const found = windowStatistic(cut(series, period), statistic);
  const expected = naive(series, period, statistic);
  if (Number.isNaN(expected)) expect(found).toBeNaN();
  else expect(Math.abs(found - expected), `${found} for ${expected}`).toBeLessThan(1e-9);
}

describe("against a second, naive implementation that spreads values over days", () => {
  test.each(ANY_LENGTH.map(named))("values of any length: $name", ({ statistic }) => {
    fc.assert(fc.property(anySeries(35), anyPeriod, (series, period) => agrees(series, period, statistic)));
  });
  test.each([...ANY_LENGTH, ...DAILY].map(named))("daily values: $name", ({ statistic }) => {
    fc.assert(fc.property(anySeries(1), anyPeriod, (series, period) => agrees(series, period, statistic)));
  });

  test("days due, days covered and the longest gap, counted day by day", () => {
    fc.assert(
      fc.property(anySeries(20), anyPeriod, (series, period) => {
        const slice = cut(series, period);
        const has = new Set<number>();
        series.values.forEach((value, i) => {
          if (Number.isNaN(value)) return;
          for (let day = series.starts[i]; day < series.ends[i]; day++) has.add(day);
        });
        let [covered, gap, longest] = [0, 0, 0];
        for (let day = period.start; day < period.end; day++) {
          if (has.has(day)) covered++;
          gap = has.has(day) ? 0 : gap + 1;
          longest = Math.max(longest, gap);
        }
        expect([slice.due, slice.covered, slice.longestGap]).toEqual([
          period.end - period.start,
          covered,
          longest,
        ]);
      }),
    );
  });
});

describe("the edges of a window", () => {
  const months: Series = {
    ...daily("2001-01-01", []),
    starts: Int32Array.of(on("2001-01-01"), on("2001-02-01"), on("2001-03-01")),
    ends: Int32Array.of(on("2001-02-01"), on("2001-03-01"), on("2001-04-01")),
    values: Float64Array.of(31, 28, 62),
  };
  const period = { start: on("2001-01-22"), end: on("2001-03-11") }; // 10 + 28 + 10 days
  test("sums are prorated by days, means weighted by them", () => {
    expect(windowStatistic(cut(months, period), { type: "sum" })).toBeCloseTo(10 + 28 + 20, 12);
    const mean = (10 * 31 + 28 * 28 + 10 * 62) / 48;
    expect(windowStatistic(cut(months, period), { type: "mean" })).toBeCloseTo(mean, 12);
  });
  test("extremes and medians take whatever overlaps, each once", () => {
    expect(windowStatistic(cut(months, period), { type: "maximum" })).toBe(62);
    expect(windowStatistic(cut(months, period), { type: "median" })).toBe(31);
  });
  test("the end is not in the window: a half-open period of one day sees one day", () => {
    const days = daily("2001-01-01", [1, 10, 100]);
    const second = cut(days, { start: on("2001-01-02"), end: on("2001-01-03") });
    expect(windowStatistic(second, { type: "sum" })).toBe(10);
  });
});

describe("degree-days of extremes", () => {
  // McMaster & Wilhelm (1997), corn, base 50 °F, cap 86 °F: the four days of methods §2, method 2
  test.each([
    [90, 65, 25.5],
    [72, 46, 11],
    [63, 42, 6.5],
    [87, 63, 24.5],
  ])("method 2: %d/%d °F gives %d", (high, low, expected) => {
    const both = dailyFromExtremes(daily("2001-06-01", [high]), daily("2001-06-01", [low]), 50, 86, 2);
    expect(degreeDaysAbove(cut(both, { start: on("2001-06-01"), end: on("2001-06-02") }), 50, 86)).toBe(
      expected,
    );
  });
  test("method 1 clips the mean instead: 90/65 → 27.5, 72/46 → 9, 45/40 → 0", () => {
    // By the definition: (90 + 65)/2 − 50, (72 + 46)/2 − 50, below the base.
    const both = dailyFromExtremes(
      daily("2001-06-01", [90, 72, 45]),
      daily("2001-06-01", [65, 46, 40]),
      50,
      86,
      1,
    );
    const of = (k: number) => cut(both, { start: on("2001-06-01") + k, end: on("2001-06-01") + k + 1 });
    expect([0, 1, 2].map((k) => degreeDaysAbove(of(k), 50, 86))).toEqual([27.5, 9, 0]);
  });
  test("a day that lacks either value is missing", () => {
    const both = dailyFromExtremes(
      daily("2001-06-01", [90, 91, null]),
      daily("2001-06-02", [60, 61]),
      50,
      86,
      2,
    );
    expect(Array.from(both.values)).toEqual([Number.NaN, 73, Number.NaN]);
  });
});

describe("ETCCDI worked cases (methods §2)", () => {
  const year = (first: number): { start: number; end: number } => ({
    start: dayOf(first, 1, 1),
    end: dayOf(first + 1, 1, 1),
  });
  function temperatures(y: number): Series {
    const { start, end } = year(y);
    const between = (day: number, from: [number, number], to: [number, number]) =>
      day >= dayOf(y, ...from) && day <= dayOf(y, ...to);
    const values = Array.from({ length: end - start }, (_, k) => {
      const day = start + k;
      if (between(day, [10, 20], [10, 29])) return -1;
      return between(day, [1, 20], [1, 27]) || between(day, [7, 1], [12, 31]) ? 10 : 0;
    });
    return daily(`${y}-01-01`, values);
  }
  test("growing-season length: 273 in a common year, 274 in a leap year", () => {
    const gsl: WindowStatistic = { type: "growing season" };
    expect(windowStatistic(cut(temperatures(2001), year(2001)), gsl)).toBe(273);
    expect(windowStatistic(cut(temperatures(2004), year(2004)), gsl)).toBe(274);
  });
  test("never warm: missing; warm to the end: up to the year's end", () => {
    const flat = (value: number) => cut(daily("2001-01-01", new Array(365).fill(value)), year(2001));
    expect(growingSeason(flat(0), dayOf(2001, 7, 1))).toBeNaN();
    expect(growingSeason(flat(10), dayOf(2001, 7, 1))).toBe(365);
  });
  test("south of the equator the same year, moved by half: July to June, the second half from January", () => {
    // 20 July to 20 April: 274 days; the cold spell of August to December does not end the season.
    const start = dayOf(2001, 7, 1);
    const values = Array.from({ length: 365 }, (_, k) => {
      const day = start + k;
      if (day >= dayOf(2002, 4, 20)) return -1;
      return day >= dayOf(2001, 7, 20) && day < dayOf(2001, 8, 10) ? 10 : day >= dayOf(2002, 1, 1) ? 10 : 0;
    });
    const slice = cut(daily("2001-07-01", values), { start, end: dayOf(2002, 7, 1) });
    expect(windowStatistic(slice, { type: "growing season" })).toBe(dayOf(2002, 4, 20) - dayOf(2001, 7, 20));
  });
  test("Rx5day: rain of 8 × 2, 7 × 3, 5 × 1 mm gives 15, dated by its last day", () => {
    const rain = daily("2001-01-01", [...Array(8).fill(2), ...Array(7).fill(3), ...Array(5).fill(1)]);
    const found = largestSums(cut(rain, { start: on("2001-01-01"), end: on("2001-01-21") }), 5, 1);
    expect(found).toEqual({ value: 15, lastDay: on("2001-01-13") });
  });
  test("Rx5day does not reach outside the window, nor over a day without a value", () => {
    const rain = daily("2001-01-01", [50, 1, 1, 1, 1, 1, null, 60, 60, 60, 60]);
    const from = (start: string) => cut(rain, { start: on(start), end: on("2001-01-12") });
    expect(largestSums(from("2001-01-01"), 5, 1).value).toBe(54);
    expect(largestSums(from("2001-01-02"), 5, 1).value).toBe(5);
    expect(largestSums(from("2001-01-03"), 5, 1).value).toBeNaN();
  });
  test("the mean of the two largest sums shares no day: a single storm is not counted twice", () => {
    const rain = daily("2001-01-01", [0, 0, 30, 0, 0, 0, 4, 5, 0, 0]);
    const slice = cut(rain, { start: on("2001-01-01"), end: on("2001-01-11") });
    expect(largestSums(slice, 2, 2).value).toBe((30 + 9) / 2);
  });
});
