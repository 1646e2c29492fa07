import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { climatology, departures } from "../../src/aggregate/anomaly.ts";
import { largestSums } from "../../src/aggregate/largest.ts";
import type { WindowStatistic } from "../../src/aggregate/options.ts";
import { longestRun, type Past } from "../../src/aggregate/past.ts";
import { cut } from "../../src/aggregate/slice.ts";
import { windowStatistic } from "../../src/aggregate/statistic.ts";
import { dayOf, isoDay } from "../../src/data/day.ts";
import type { Period } from "../../src/data/period.ts";
import type { Series } from "../../src/data/series.ts";
import { daily, on } from "./made.ts";

// H_aggregation.json: R's datasets airquality, nottem and nhtemp; expectations by pandas 1.5.3, numpy 1.24.2 and
// scipy 1.10.1. Its windows include both ends; tolerance 1e-10 absolute, exact on counts, runs and dates.
const H = JSON.parse(readFileSync(new URL("../reference/H_aggregation.json", import.meta.url), "utf8"));
const TOLERANCE = 1e-10;

function near(found: number, expected: number | null, what: string): void {
  if (expected === null) expect(found, what).toBeNaN();
  else expect(Math.abs(found - expected), `${what}: ${found} for ${expected}`).toBeLessThanOrEqual(TOLERANCE);
}

const windows: [string, Period][] = Object.entries(
  H.expected.windows as Record<string, { start: string; end: string }>,
).map(([name, { start, end }]) => [name, { start: on(start), end: on(end) + 1 }]);

const air = (column: string): Series => daily(H.data.airquality.start, H.data.airquality[column]);

/** Months or years from a first one on. */
function spaced(firstYear: number, months: number, values: readonly number[]): Series {
  const day = (i: number) => dayOf(firstYear, 1 + i * months, 1);
  return {
    ...daily("1900-01-01", values),
    starts: Int32Array.from(values, (_, i) => day(i)),
    ends: Int32Array.from(values, (_, i) => day(i + 1)),
  };
}
const nottem = spaced(1920, 1, H.data.nottem.temp);
const nhtemp = spaced(1912, 12, H.data.nhtemp.temp);

const of = (series: Series, period: Period, statistic: WindowStatistic) =>
  windowStatistic(cut(series, period), statistic);

describe("daily airquality windows", () => {
  test.each(windows)("%s: coverage, sum, mean, extremes, sd (n − 1), quantiles of type 7", (name, period) => {
    for (const column of ["Ozone", "Solar.R", "Wind", "Temp"]) {
      const expected = H.expected.airquality_windows[name][column];
      const slice = cut(air(column), period);
      expect(slice.due).toBe(expected.n_days);
      expect(slice.due - slice.covered).toBe(expected.n_missing);
      near(slice.covered / slice.due, expected.coverage, "coverage");
      near(windowStatistic(slice, { type: "sum" }), expected.sum, `${column} sum`);
      near(windowStatistic(slice, { type: "mean" }), expected.mean, `${column} mean`);
      near(windowStatistic(slice, { type: "minimum" }), expected.min, `${column} min`);
      near(windowStatistic(slice, { type: "maximum" }), expected.max, `${column} max`);
      near(windowStatistic(slice, { type: "sd" }), expected.sd, `${column} sd`);
      for (const [p, value] of Object.entries(expected.quantiles_type7 as Record<string, number | null>))
        near(windowStatistic(slice, { type: "quantile", probability: Number(p) }), value, `${column} q${p}`);
    }
  });

  test.each(windows)("%s: degree-days, counts and runs", (name, period) => {
    const expected = H.expected.airquality_degree_days_and_runs[name];
    const temp = air("Temp");
    const ozone = air("Ozone");
    const celsius = { ...temp, values: temp.values.map((f) => ((f - 32) * 5) / 9) };
    const cap = Number.POSITIVE_INFINITY;
    near(
      of(temp, period, { type: "degree-days", base: 75, cap }),
      expected.degree_days_above_75F,
      "above 75",
    );
    near(
      of(temp, period, { type: "degree-days below", base: 75 }),
      expected.degree_days_below_75F,
      "below 75",
    );
    near(
      of(celsius, period, { type: "degree-days", base: 20, cap }),
      expected.degree_days_above_20C_of_converted,
      "above 20 °C",
    );
    const below = (threshold: number, orEqual = false): Past => ({ side: "below", threshold, orEqual });
    expect(of(temp, period, { type: "days below", threshold: 75, orEqual: false })).toBe(
      expected.days_below_75F,
    );
    expect(of(temp, period, { type: "days above", threshold: 90, orEqual: true })).toBe(
      expected.days_at_or_above_90F,
    );
    const ozoneDays = of(ozone, period, { type: "days below", threshold: 30, orEqual: false });
    // The file counts 0 in a window without any value; here there is nothing to count in.
    if (cut(ozone, period).observed === 0) expect(ozoneDays).toBeNaN();
    else expect(ozoneDays).toBe(expected.days_ozone_below_30);
    const cases: [string, Series, Past][] = [
      ["longest_run_below_75F", temp, below(75)],
      ["longest_run_at_or_below_75F", temp, below(75, true)],
      ["longest_run_above_90F", temp, { side: "above", threshold: 90, orEqual: false }],
      ["longest_run_ozone_below_30_missing_breaks_run", ozone, below(30)],
    ];
    for (const [key, series, past] of cases) {
      const run = longestRun(cut(series, period), past);
      const first = run.days === 0 ? null : isoDay(run.start);
      const last = run.days === 0 ? null : isoDay(run.end - 1);
      expect({ length: run.days, start: first, end: last }, key).toEqual(expected[key]);
    }
  });

  test("means over seven days in a row, and the largest of them with its last day", () => {
    for (const [last, value] of Object.entries(
      H.expected.rolling_7day_mean_temp_trailing as Record<string, number>,
    ))
      near(of(air("Temp"), { start: on(last) - 6, end: on(last) + 1 }, { type: "mean" }), value, last);
    const season = cut(air("Temp"), { start: on("1973-05-01"), end: on("1973-10-01") });
    const most = largestSums(season, 7, 1);
    near(most.value / 7, H.expected.max_rolling_7day_mean_temp.value, "largest");
    expect(isoDay(most.lastDay)).toBe(H.expected.max_rolling_7day_mean_temp.last_day);
  });
});

interface Labelled {
  readonly label: number;
  readonly n?: number;
  readonly size?: number;
  readonly mean: number;
  readonly min?: number;
  readonly max?: number;
  readonly sum?: number;
}

describe("monthly nottem", () => {
  const season = (year: number, month: number, months: number): Period => ({
    start: dayOf(year, month, 1),
    end: dayOf(year, month + months, 1),
  });
  const cases: [string, (label: number) => Period][] = [
    ["nottem_DJF_label_year_of_january", (label) => season(label - 1, 12, 3)],
    ["nottem_JJA", (label) => season(label, 6, 3)],
    ["nottem_MAM", (label) => season(label, 3, 3)],
    ["nottem_annual", (label) => season(label, 1, 12)],
    ["nottem_aug_jul_year_label_year_of_august", (label) => season(label, 8, 12)],
  ];
  test.each(cases)("%s: count, plain mean, extremes and sum", (key, period) => {
    const rows: Labelled[] = H.expected[key];
    expect(rows.length).toBeGreaterThanOrEqual(20);
    for (const row of rows) {
      const slice = cut(nottem, period(row.label));
      const count = row.n ?? row.size;
      if (count !== undefined) expect(slice.observed).toBe(count);
      // Whole months are prorated by 1, so the sum over the count is the plain mean.
      near(windowStatistic(slice, { type: "sum" }) / slice.observed, row.mean, `${row.label} mean`);
      if (row.min !== undefined)
        near(windowStatistic(slice, { type: "minimum" }), row.min, `${row.label} min`);
      if (row.max !== undefined)
        near(windowStatistic(slice, { type: "maximum" }), row.max, `${row.label} max`);
      if (row.sum !== undefined) near(windowStatistic(slice, { type: "sum" }), row.sum, `${row.label} sum`);
    }
  });

  test("December to February, means weighted by days", () => {
    for (const row of H.expected.nottem_DJF_day_weighted_mean as Labelled[])
      near(of(nottem, season(row.label - 1, 12, 3), { type: "mean" }), row.mean, String(row.label));
  });

  test("anomalies against 1921–1930 by calendar month", () => {
    const base = { from: 1921, to: 1930 };
    const normal = climatology(nottem, "month", base);
    H.expected.nottem_monthly_climatology_1921_1930.forEach((value: number, m: number) => {
      near(normal[m], value, `month ${m + 1}`);
    });
    const away = departures(nottem, "month", base);
    H.expected.nottem_anomaly_first12.forEach((value: number, m: number) => {
      near(away.values[m], value, `anomaly ${m + 1}`);
    });
  });
});

describe("yearly nhtemp", () => {
  const all = cut(nhtemp, { start: dayOf(1912, 1, 1), end: dayOf(1972, 1, 1) });
  test("sd (n − 1) and quantiles of type 7 over sixty years", () => {
    near(windowStatistic(all, { type: "sd" }), H.expected.nhtemp.sd, "sd");
    near(
      windowStatistic(all, { type: "sum" }) / all.observed,
      H.expected.nhtemp.mean,
      "mean of years, each counted once",
    );
    for (const [p, value] of Object.entries(H.expected.nhtemp.quantiles_type7 as Record<string, number>))
      near(windowStatistic(all, { type: "quantile", probability: Number(p) }), value, p);
    near(
      of(nhtemp, { start: dayOf(1912, 1, 1), end: dayOf(1917, 1, 1) }, { type: "sum" }) / 5,
      H.expected.nhtemp.moving_average_5_centred_1914,
      "five years",
    );
  });
});
