import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { aggregateCovariate, baseValues } from "../../src/aggregate/aggregate.ts";
import { ETCCDI_INDICES } from "../../src/aggregate/etccdi.ts";
import type { CovariateDefinition, Statistic } from "../../src/aggregate/options.ts";
import { civil, dayOf, isoDay } from "../../src/data/day.ts";
import type { Series } from "../../src/data/series.ts";
import { InputError } from "../../src/errors.ts";
import { randomStream } from "../../src/math/random.ts";
import { daily, interval, on, yearly } from "./made.ts";

/** Invented weather: days of seeded noise about a level; holes are days that are missing. */
function station(
  site: string,
  level: number,
  first: string,
  days: number,
  holes: readonly string[] = [],
): Series {
  const random = randomStream(7, site, 0);
  const gone = new Set(holes.map(on));
  const values = Array.from({ length: days }, (_, k) =>
    gone.has(on(first) + k) ? null : Math.round((level + random.normal()) * 10) / 10,
  );
  return daily(first, values, { site, variable: "tmin" });
}

const YEARS = 6;
const DAYS = dayOf(2007, 1, 1) - dayOf(2001, 1, 1);
const stations = [
  station("Ash", 5, "2001-01-01", DAYS),
  station("Beck", 9, "2001-01-01", DAYS, ["2003-12-03"]),
  station("Cairn", 1, "2001-01-01", DAYS),
];
const intervals = yearly("07-20", 2001, YEARS - 1);

const winter: CovariateDefinition = {
  name: "winter",
  theme: "temperature",
  unit: "degC",
  window: { type: "season", from: { month: 11, day: 1 }, to: { month: 2, day: 0 }, lag: 0 },
  statistic: { type: "mean" },
  complete: { type: "wmo" },
  join: "mean of windows",
  series: stations,
};
const numbers = (definition: CovariateDefinition, of = intervals) =>
  aggregateCovariate(definition, of).covariate.values.map((one) => one.value);

function errorName(run: () => unknown): string {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return error.facts.name;
    throw error;
  }
  return "nothing thrown";
}

describe("one covariate over all intervals", () => {
  test("stations of unequal weight: a window's mean is weighted, whether days or windows are joined", () => {
    const at = (site: string, value: number) =>
      daily("2001-01-01", new Array<number>(1000).fill(value), { site });
    const weights = {
      bySite: new Map([
        ["Ash", 3],
        ["Beck", 1],
      ]),
      words: "by distance",
    };
    for (const join of ["mean of windows", "mean of days"] as const) {
      const definition = { ...winter, series: [at("Ash", 1), at("Beck", 5)], join, weights };
      expect(numbers(definition, intervals.slice(0, 1))).toEqual([(3 * 1 + 5) / 4]);
    }
  });

  test("value, days, gap, stations, definition, unit and files", () => {
    const { covariate, findings } = aggregateCovariate(winter, intervals);
    expect(covariate).toMatchObject({
      name: "winter",
      unit: "degC",
      definition: "mean of tmin over Nov to Feb, mean of 3 stations",
      files: ["made.csv"],
    });
    expect(covariate.values[2]).toMatchObject({
      period: { start: on("2003-11-01"), end: on("2004-03-01") },
      daysDue: 121,
      daysCovered: 120,
      longestGap: 1,
      failed: undefined,
      scaled: false,
      stations: ["Ash", "Beck", "Cairn"],
      years: 1,
    });
    expect(findings).toEqual([]);
    // By hand: the mean of the three stations' means over 1 November 2001 to 28 February 2002.
    const at = (one: Series) =>
      one.values.subarray(on("2001-11-01") - on("2001-01-01"), on("2002-03-01") - on("2001-01-01"));
    const means = stations.map((one) => at(one).reduce((a, b) => a + b) / 120);
    expect(covariate.values[0].value).toBeCloseTo((means[0] + means[1] + means[2]) / 3, 12);
  });

  test("a sum: the station with a missing day gives none, its base carries the others, and it is a finding", () => {
    const { covariate, findings } = aggregateCovariate({ ...winter, statistic: { type: "sum" } }, intervals);
    expect(covariate.values[2].stations).toEqual(["Ash", "Cairn"]);
    expect(findings).toMatchObject([{ kind: "changing-stations", subject: "winter", count: 1 }]);
    expect(findings[0].message).toContain(
      "the stations change in 1 of 5 intervals (2003 to 2004 lacks Beck)",
    );
    // Ash and Cairn alone would give some 3 × 121 degrees and not 5 × 121.
    expect(covariate.values[2].value / 121).toBeGreaterThan(4.7);
    expect(covariate.values[2].value / 121).toBeLessThan(5.3);
  });

  test("a share rule scales the sum by due/covered and flags it", () => {
    const share = {
      ...winter,
      statistic: { type: "sum" },
      complete: { type: "share", share: 0.95 },
    } as const;
    const alone = { ...share, series: [stations[1]] };
    const { covariate } = aggregateCovariate(alone, intervals);
    expect(covariate.values.map((one) => one.scaled)).toEqual([false, false, true, false, false]);
    const mean = aggregateCovariate({ ...alone, statistic: { type: "mean" } }, intervals).covariate;
    expect(covariate.values[2].value).toBeCloseTo(mean.values[2].value * 121, 9);
    expect(covariate.definition).toBe("sum of tmin over Nov to Feb, at Beck");
  });

  test("no value: NaN with the rule that failed, per station, and one finding for all", () => {
    const short = [station("Ash", 5, "2001-01-01", DAYS, ["2002-11-05"]), stations[1]];
    const sums = { ...winter, statistic: { type: "sum" }, series: short } as const;
    const late = short.map((one) => ({
      ...one,
      values: one.values.map((x, k) => (k > 900 ? Number.NaN : x)),
    }));
    const { covariate, findings } = aggregateCovariate({ ...sums, series: late }, intervals);
    expect(covariate.values[2].value).toBeNaN();
    expect(covariate.values[2].failed).toBe("Ash, none of 121 days covered; Beck, none of 121 days covered");
    expect(covariate.values[2].stations).toEqual([]);
    expect(findings.map((one) => one.kind)).toEqual(["incomplete", "changing-stations"]);
    expect(findings[0].message).toContain(
      "3 of 5 intervals have no value: 2003 to 2004 (Ash, none of 121 days",
    );
  });

  test("an interval that holds no season, and a window that leaks", () => {
    const odd = [...intervals.slice(0, 2), interval("2003-07-20", "2003-12-20", 0.42, 2)];
    const { covariate, findings } = aggregateCovariate(winter, odd);
    expect(covariate.values[2]).toMatchObject({
      period: undefined,
      failed: "the interval holds no whole Nov to Feb",
    });
    expect(findings).toMatchObject([{ kind: "window-empty", count: 1 }]);
    const window = {
      type: "span",
      from: { days: -5, of: "end" },
      to: { days: 3, of: "end" },
      lag: 0,
    } as const;
    const leak = aggregateCovariate({ ...winter, window }, intervals);
    expect(leak.findings).toMatchObject([{ kind: "window-leak", count: 5, subject: "winter" }]);
    expect(leak.findings[0].message).toContain("reaches 3 days past the end occasion");
  });

  test("a station that is never complete takes no part and is named", () => {
    const broken = station("Dell", 20, "2001-01-01", 30);
    const { covariate, findings } = aggregateCovariate(
      { ...winter, series: [...stations, broken] },
      intervals,
    );
    expect(findings).toMatchObject([{ kind: "incomplete", where: { cell: "winter, Dell" }, count: 5 }]);
    expect(covariate.values.map((one) => one.value)).toEqual(numbers(winter));
  });

  test("several years: the mean of yearly values, their number stated, sums per year", () => {
    const long = [interval("2001-07-20", "2003-07-20", 2)];
    const rain = { ...winter, statistic: { type: "sum" }, series: [stations[0]] } as const;
    const { covariate } = aggregateCovariate(rain, long);
    const [first, second] = numbers(rain);
    expect(covariate.values[0].value).toBeCloseTo((first + second) / 2, 12);
    expect(covariate.values[0]).toMatchObject({ years: 2, daysDue: 240, daysCovered: 240 });
    expect(covariate.values[0].periods).toHaveLength(2);
    // A whole interval of 2.5 years: the sum per year is the sum divided by 2.5.
    const whole = { ...rain, window: { type: "interval", lag: 0 } } as const;
    const odd = interval("2001-01-01", "2003-07-02", 2.5);
    const sum = stations[0].values.subarray(0, odd.end - odd.start).reduce((a, b) => a + b);
    expect(numbers(whole, [odd])[0]).toBeCloseTo(sum / 2.5, 9);
  });

  test("several years: one incomplete year and the interval has no value", () => {
    const long = [interval("2002-07-20", "2004-07-20", 2)];
    const beck = { ...winter, statistic: { type: "sum" }, series: [stations[1]] } as const;
    expect(aggregateCovariate(beck, long).covariate.values[0].failed).toBe(
      "1 of 2 years incomplete; 1 of 121 days missing (a sum needs all days)",
    );
  });

  test("mean of days: runs of the mean differ from the mean of runs", () => {
    const a = daily(
      "2001-11-01",
      Array.from({ length: 120 }, (_, k) => (k % 2 === 0 ? -2 : 4)),
      { site: "Ash" },
    );
    const b = daily(
      "2001-11-01",
      Array.from({ length: 120 }, (_, k) => (k % 2 === 0 ? 0 : -6)),
      { site: "Beck" },
    );
    const statistic: Statistic = { type: "longest run below", threshold: 0, orEqual: false };
    const both = { ...winter, statistic, series: [a, b] };
    expect(numbers({ ...both, join: "mean of windows" }, intervals.slice(0, 1))).toEqual([1]);
    const { covariate } = aggregateCovariate({ ...both, join: "mean of days" }, intervals.slice(0, 1));
    expect(covariate.values[0].value).toBe(120);
    expect(covariate.values[0].stations).toEqual(["Ash", "Beck"]);
    expect(covariate.unit).toBe("days");
    expect(covariate.definition).toBe(
      "longest run below 0 degC of x over Nov to Feb, of the daily mean of 2 stations",
    );
  });

  test("mean of days with a day that a station lacks: the step does not come, the finding does", () => {
    const { covariate, findings } = aggregateCovariate({ ...winter, join: "mean of days" }, intervals);
    expect(findings).toMatchObject([{ kind: "changing-stations", count: 1 }]);
    expect(covariate.values[2]).toMatchObject({ daysCovered: 121, failed: undefined });
    expect(Math.abs(covariate.values[2].value - numbers(winter)[2])).toBeLessThan(0.05);
  });
});

describe("statistics that need more than a window", () => {
  const year = { type: "year", lag: 0 } as const;
  const years = yearly("01-01", 2001, 5);
  const rainfall = (values: readonly (number | null)[]) =>
    daily("2001-01-01", values, { site: "Ash", kind: "total", variable: "rain" });
  const wet = rainfall(Array.from({ length: DAYS }, (_, k) => [0, 0.9, 1, 9.9, 10, 20, 35][k % 7]));
  const rain: CovariateDefinition = { ...winter, unit: "mm", window: year, series: [wet] };
  const index = (name: (typeof ETCCDI_INDICES)[number], more: Partial<CovariateDefinition> = {}) =>
    numbers({ ...rain, statistic: { type: "index", index: name }, ...more }, years.slice(0, 1))[0];

  test("rain indices on a week of 0, 0.9, 1, 9.9, 10, 20, 35 mm: the edges 1, 10 and 20 count", () => {
    // 2001 has 52 such weeks and one day of 0 mm. Definitions: Zhang et al. (2011); the counts by hand.
    expect(index("R10mm")).toBe(52 * 3);
    expect(index("R20mm")).toBe(52 * 2);
    expect(index("CWD")).toBe(5);
    expect(index("CDD")).toBe(2);
    expect(index("PRCPTOT")).toBeCloseTo(52 * 75.9, 9);
    expect(index("SDII")).toBeCloseTo(75.9 / 5, 12);
    expect(index("Rx1day")).toBe(35);
    expect(index("Rx5day")).toBeCloseTo(75.9, 12);
  });

  test("R95pTOT: rain above the 95th percentile (type 7) of the base years' wet days", () => {
    const fifth = wet.values.map((mm, k) => (k % 70 === 6 ? 50 : mm));
    const series = [{ ...wet, values: fifth }];
    const statistic: Statistic = { type: "R95pTOT", base: { from: 2001, to: 2003 } };
    // One wet day in 50 has 50 mm, nine in 50 have 35: the percentile is 35, and only more than that counts.
    const days = fifth.subarray(0, 365).filter((mm) => mm > 35);
    expect(days.length).toBe(6);
    expect(numbers({ ...rain, statistic, series }, years.slice(0, 1))).toEqual([300]);
    const dry = aggregateCovariate(
      { ...rain, statistic: { type: "R95pTOT", base: { from: 1991, to: 1993 } } },
      years.slice(0, 1),
    );
    expect(dry.covariate.values[0].failed).toBe("no wet day in the base years 1991 to 1993");
  });

  test("R95pTOT: the percentile is that of wet days alone", () => {
    // Wet days of 1 … 20 mm: type 7 gives 19.05, so 20 mm alone counts; of all 365 days it would be some 2 mm.
    const values = Array.from({ length: 365 }, (_, k) => (k % 18 === 0 && k < 360 ? k / 18 + 1 : 0.5));
    const statistic: Statistic = { type: "R95pTOT", base: { from: 2001, to: 2001 } };
    expect(numbers({ ...rain, statistic, series: [rainfall(values)] }, years.slice(0, 1))).toEqual([20]);
  });

  test("temperature indices are strict: 0, 20 and 25 themselves do not count", () => {
    const cycle = [-5, 0, 20, 20.1, 25, 25.1, 30];
    const values = Array.from({ length: DAYS }, (_, k) => cycle[k % 7]);
    const series = [daily("2001-01-01", values, { variable: "t" })];
    const of = (name: (typeof ETCCDI_INDICES)[number]) => index(name, { unit: "degC", series });
    expect(of("frost days")).toBe(53); // 52 weeks and the year's last day
    expect(of("icing days")).toBe(53);
    expect(of("tropical nights")).toBe(52 * 4);
    expect(of("summer days")).toBe(52 * 2);
    expect(of("TXx")).toBe(30);
    expect(of("TNn")).toBe(-5);
    expect(of("growing-season length")).toBeNaN(); // never six warm days in a row
  });

  test("an index in the wrong unit is refused", () => {
    expect(errorName(() => index("TXx"))).toBe("aggregate.index-unit");
    expect(errorName(() => index("CDD", { unit: "in" }))).toBe("aggregate.index-unit");
    for (const name of ETCCDI_INDICES) {
      const units = ["degC", "mm"].filter(
        (unit) => errorName(() => index(name, { unit })) === "nothing thrown",
      );
      expect(units, name).toHaveLength(1);
    }
  });

  test("degree-days of two series; a station without minima is refused", () => {
    const max = daily("2001-01-01", new Array(365).fill(87), { variable: "tmax" });
    const min = daily("2001-01-01", new Array(365).fill(63), { variable: "tmin" });
    const statistic: Statistic = { type: "degree-days of extremes", base: 50, cap: 86, method: 2 };
    const corn = { ...rain, unit: "degF", statistic, series: [max], second: [min] };
    const { covariate } = aggregateCovariate(corn, years.slice(0, 1));
    expect(covariate.values[0].value).toBe(365 * 24.5);
    expect(covariate.unit).toBe("degF days");
    expect(covariate.definition).toContain(
      "capped at 86 degF (method 2) of tmax and tmin over calendar year",
    );
    expect(errorName(() => numbers({ ...corn, second: [] }))).toBe("aggregate.second-missing");
    const hourly = { ...min, ends: min.ends.map((end) => end + 1) };
    expect(errorName(() => numbers({ ...corn, second: [hourly] }))).toBe("aggregate.periods-differ");
  });

  test("anomalies: departures from the base mean of the month take the season out", () => {
    const seasonal = Array.from(
      { length: DAYS },
      (_, k) => 10 * civil(on("2001-01-01") + k).month + (k < 365 ? 0 : 3),
    );
    const series = [daily("2001-01-01", seasonal)];
    const anomaly = { by: "month", base: { from: 2001, to: 2001 } } as const;
    expect(numbers({ ...winter, series, anomaly }, intervals.slice(1, 3))).toEqual([3, 3]);
  });

  test("anomalies by calendar day: a value that depends on month and day alone leaves nothing", () => {
    const values = Array.from({ length: DAYS }, (_, k) => {
      const { month, day } = civil(on("2001-01-01") + k);
      return month * day + (k >= 730 ? 1 : 0);
    });
    const anomaly = { by: "day", base: { from: 2001, to: 2002 } } as const;
    const series = [daily("2001-01-01", values)];
    const range = { ...winter, series, anomaly, statistic: { type: "range" } } as const;
    expect(numbers(range, intervals.slice(0, 1))).toEqual([0]);
    expect(numbers({ ...winter, series, anomaly }, intervals.slice(2, 3))).toEqual([1]); // but 29 February 2004
    const { covariate } = aggregateCovariate({ ...winter, series, anomaly }, intervals.slice(2, 3));
    expect(covariate.values[0]).toMatchObject({ daysDue: 121, daysCovered: 120 }); // the base has no such day
  });

  test("no series at all is refused; parts that overlap too", () => {
    expect(errorName(() => numbers({ ...winter, series: [] }))).toBe("aggregate.no-series");
    expect(errorName(() => numbers({ ...winter, series: [stations[0], stations[0]] }))).toBe(
      "aggregate.series-overlap",
    );
  });

  test("values of the base years: the season that ends in each", () => {
    const values = baseValues({ ...winter, series: [stations[0]] }, { from: 2002, to: 2006 });
    expect(Array.from(values ?? [])).toEqual(numbers({ ...winter, series: [stations[0]] }));
    expect(
      baseValues({ ...winter, window: { type: "interval", lag: 0 } }, { from: 2002, to: 2006 }),
    ).toBeUndefined();
    const lagged = { ...winter, window: { ...winter.window, lag: 2 }, series: [stations[0]] };
    expect(baseValues(lagged, { from: 2002, to: 2006 })).toEqual(values);
    const before = baseValues({ ...winter, series: [stations[0]] }, { from: 2000, to: 2002 });
    expect(Array.from(before ?? [], Number.isNaN)).toEqual([true, true, false]);
  });
});

describe("what must not matter", () => {
  const definitions: CovariateDefinition[] = [
    winter,
    { ...winter, join: "mean of days" },
    { ...winter, statistic: { type: "sum" } },
    { ...winter, statistic: { type: "quantile", probability: 0.9 } },
    { ...winter, statistic: { type: "days below", threshold: 2, orEqual: false } },
    { ...winter, window: { type: "interval", lag: 0 } },
  ];
  test("the order of the stations", () => {
    for (const definition of definitions) {
      const turned = { ...definition, series: [stations[2], stations[0], stations[1]] };
      expect(aggregateCovariate(turned, intervals)).toEqual(aggregateCovariate(definition, intervals));
    }
  });

  test("a series split at any day and put together again", () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: DAYS }), fc.constantFrom(...definitions), (k, definition) => {
        const part = (from: number, to: number): Series => ({
          ...stations[1],
          starts: stations[1].starts.slice(from, to),
          ends: stations[1].ends.slice(from, to),
          values: stations[1].values.slice(from, to),
        });
        const series = [part(k, DAYS), stations[0], part(0, k), stations[2]];
        expect(aggregateCovariate({ ...definition, series }, intervals)).toEqual(
          aggregateCovariate(definition, intervals),
        );
      }),
      { numRuns: 30 },
    );
  });

  test("days outside every window", () => {
    const changed = stations.map((one) => ({
      ...one,
      values: one.values.map((x, k) =>
        [3, 4, 5, 6, 7, 8, 9, 10].includes(civil(one.starts[k]).month) ? 999 : x,
      ),
    }));
    expect(numbers({ ...winter, series: changed })).toEqual(numbers(winter));
  });

  test("the machine's time zone: the daylight-saving days of three zones are days like any other", () => {
    // The suite runs under three zones; these dates are where a local clock loses or gains an hour.
    for (const day of ["2003-04-06", "2003-10-26", "2003-09-28", "2004-04-04"]) {
      const one = interval(isoDay(on(day) - 1), isoDay(on(day) + 2), 0.01);
      const { covariate } = aggregateCovariate(
        {
          ...winter,
          window: { type: "interval", lag: 0 },
          statistic: { type: "sum" },
          series: [stations[0]],
        },
        [one],
      );
      const k = on(day) - on("2001-01-01");
      const [a, b, c] = stations[0].values.subarray(k - 1, k + 2);
      expect(covariate.values[0]).toMatchObject({ daysDue: 3, daysCovered: 3, value: a + b + c });
    }
  });
});
