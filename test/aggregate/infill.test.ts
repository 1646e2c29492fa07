import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { aggregateCovariate } from "../../src/aggregate/aggregate.ts";
import { infillSeries } from "../../src/aggregate/infill.ts";
import { commonOf, correlation, ratioed, regressed, without } from "../../src/aggregate/neighbour.ts";
import type { CovariateDefinition } from "../../src/aggregate/options.ts";
import { columnIndex, readCsv } from "../../src/data/csv.ts";
import { dayOf } from "../../src/data/day.ts";
import type { Series } from "../../src/data/series.ts";
import { InputError } from "../../src/errors.ts";
import { infilledTables } from "../../src/tables/infilled-table.ts";
import { daily, on, yearly } from "./made.ts";

const NaNs = Number.NaN;

/** Days of a sawtooth, so that neighbours correlate without being straight lines. */
const wave = Array.from({ length: 60 }, (_, k) => (k % 7) + (k % 5));

describe("infilling", () => {
  const gappy = wave.map((x, k) => (k === 20 || k === 21 || (k >= 40 && k < 44) ? null : 2 * x + 3));
  test("regression on a neighbour gives back an exact line, and leaves what is too long", () => {
    const done = infillSeries([daily("2001-01-01", gappy), daily("2001-01-01", wave, { site: "Beck" })], {
      method: "regression",
      longest: 3,
    });
    const values = done.series[0].values;
    expect(values[20]).toBeCloseTo(2 * wave[20] + 3, 10);
    expect(values[21]).toBeCloseTo(2 * wave[21] + 3, 10);
    expect(Array.from(values.subarray(40, 44))).toEqual([NaNs, NaNs, NaNs, NaNs]);
    expect(Array.from(done.filled[0].keys()).filter((k) => done.filled[0][k] === 1)).toEqual([20, 21]);
    expect(done.sites[0]).toMatchObject({
      site: "Ash",
      days: 2,
      gaps: 1,
      left: 1,
      neighbours: ["Beck"],
      tested: 54,
    });
    expect(done.sites[0].error).toBeLessThan(1e-9);
    expect(done.sites[1]).toMatchObject({ days: 0, gaps: 0, left: 0 });
  });

  test("the best-correlated neighbour first, the next where it has no value", () => {
    const noisy = wave.map((x, k) => x + (k % 3));
    const best = wave.map((x, k) => (k === 21 ? null : x));
    const done = infillSeries(
      [
        daily("2001-01-01", gappy),
        daily("2001-01-01", noisy, { site: "Beck" }),
        daily("2001-01-01", best, { site: "Cairn" }),
      ],
      { method: "regression", longest: 3 },
    );
    expect(done.sites[0].neighbours).toEqual(["Cairn", "Beck"]);
    expect(done.series[0].values[20]).toBeCloseTo(2 * wave[20] + 3, 10);
    expect(Math.abs(done.series[0].values[21] - (2 * wave[21] + 3))).toBeGreaterThan(0.01);
    expect(done.series[0].values[21]).not.toBeNaN();
  });

  test("stations that only lend their values are not filled and need not share every period", () => {
    const lent = daily("2001-01-01", wave, { site: "Beck" });
    const monthly = {
      ...lent,
      site: "Cairn",
      starts: Int32Array.of(dayOf(2001, 1, 1)),
      ends: Int32Array.of(dayOf(2001, 2, 1)),
      values: Float64Array.of(3),
    };
    const done = infillSeries([daily("2001-01-01", gappy)], { method: "regression", longest: 3 }, [
      monthly,
      lent,
      daily("2001-01-01", wave),
    ]);
    expect(done.series.map((one) => one.site)).toEqual(["Ash"]);
    expect(done.sites).toMatchObject([{ site: "Ash", days: 2, neighbours: ["Beck"] }]);
    expect(done.series[0].values[20]).toBeCloseTo(2 * wave[20] + 3, 10);
  });

  test("normal ratio: each neighbour's value times the ratio of normals, averaged", () => {
    // Three neighbours of 2, 1 and 0.5 times the rain; one of them short by 3 mm on the day that is filled.
    const rain = wave.map((x) => x + 1);
    const kind = "total" as const;
    const at = (site: string, factor: number, off: number) =>
      daily(
        "2001-01-01",
        rain.map((x, k) => factor * x + (k === 20 ? off : 0)),
        { site, kind },
      );
    const target = daily(
      "2001-01-01",
      rain.map((x, k) => (k === 20 ? null : x)),
      { kind },
    );
    const done = infillSeries([target, at("B", 2, 0), at("C", 1, -3), at("D", 0.5, 0)], {
      method: "normal ratio",
      longest: 1,
    });
    expect(done.series[0].values[20]).toBeCloseTo(rain[20] - 1, 10);
  });

  test("normal ratio: normals 980 against 1120, 935, 1200 and catches of 107, 89, 122 (textbook figures, from memory)", () => {
    const of = (meanX: number) => ({ count: 30, meanX, meanY: 980, sxx: 1, sxy: 1, syy: 1 });
    // By hand: 980/3 · (107/1120 + 89/935 + 122/1200) = (93.625 + 93.283 + 99.633)/3
    const each = [ratioed(of(1120), 107), ratioed(of(935), 89), ratioed(of(1200), 122)];
    expect(each.reduce((a, b) => a + b) / 3).toBeCloseTo(95.514, 3);
  });

  // Anscombe (1973), Graphs in statistical analysis, The American Statistician 27: data set 1 and what its page lists.
  test("moments, correlation and line of Anscombe's first data set, and of it without one pair", () => {
    const x = Float64Array.of(10, 8, 13, 9, 11, 14, 6, 4, 12, 7, 5);
    const y = Float64Array.of(8.04, 6.95, 7.58, 8.81, 8.33, 9.96, 7.24, 4.26, 10.84, 4.82, 5.68);
    const all = commonOf(x, y);
    expect(all).toMatchObject({ count: 11, meanX: 9, sxx: 110 });
    expect(all.meanY).toBeCloseTo(7.5, 2);
    expect(all.syy).toBeCloseTo(27.5 + 13.75, 1); // regression and residual sums of squares
    expect(correlation(all) ** 2).toBeCloseTo(0.667, 3);
    expect(regressed(all, 0)).toBeCloseTo(3, 2);
    expect(regressed(all, 10)).toBeCloseTo(8, 2);
    const left = without(all, x[4], y[4]);
    const again = commonOf(
      x.map((one, k) => (k === 4 ? NaNs : one)),
      y,
    );
    for (const name of ["count", "meanX", "meanY", "sxx", "sxy", "syy"] as const)
      expect(left[name], name).toBeCloseTo(again[name], 10);
  });

  test("the second series is filled from neighbours of its own", () => {
    const tmin = wave.map((v, k) => (k === 20 ? null : v));
    const definition: CovariateDefinition = {
      name: "warmth",
      theme: "temperature",
      unit: "degC",
      window: { type: "season", from: { month: 1, day: 1 }, to: { month: 1, day: 0 }, lag: 0 },
      statistic: { type: "degree-days of extremes", base: 0, cap: Number.POSITIVE_INFINITY, method: 1 },
      complete: { type: "wmo" },
      join: "mean of windows",
      series: [
        daily(
          "2001-01-01",
          wave.map((v) => v + 4),
        ),
      ],
      second: [daily("2001-01-01", tmin)],
      secondNeighbours: [
        daily(
          "2001-01-01",
          wave.map((v) => 3 * v - 1),
          { site: "Beck" },
        ),
      ],
      infill: { method: "regression", longest: 1 },
    };
    const [value] = aggregateCovariate(definition, yearly("07-20", 2000, 1)).covariate.values;
    // Above the base all month: the sum of (maximum + minimum) / 2.
    expect(value.value).toBeCloseTo(
      wave.slice(0, 31).reduce((sum, v) => sum + v + 2, 0),
      9,
    );
    expect(value.daysInfilled).toBe(1);
    const { secondNeighbours: _, ...alone } = definition;
    const [gap] = aggregateCovariate(alone, yearly("07-20", 2000, 1)).covariate.values;
    expect(gap.failed).toBe("1 of 31 days missing (none allowed)");
  });

  test("normal ratio is refused for temperatures", () => {
    try {
      infillSeries([daily("2001-01-01", wave), daily("2001-01-01", wave)], {
        method: "normal ratio",
        longest: 1,
      });
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      expect((error as InputError).facts.name).toBe("aggregate.normal-ratio");
    }
  });

  test("rain is never filled below 0; the ends of a record are not filled; few common days are not enough", () => {
    const rain = wave.map((x) => Math.max(0, x - 4));
    expect(rain[21]).toBe(0);
    const target = rain.map((x, k) => (k === 0 || k === 21 || k === 59 ? null : Math.max(0, 3 * x - 6)));
    const fill = (kind: Series["kind"]) =>
      infillSeries(
        [daily("2001-01-01", target, { kind }), daily("2001-01-01", rain, { site: "Beck", kind })],
        { method: "regression", longest: 5 },
      );
    const done = fill("total");
    expect(fill("mean").series[0].values[21]).toBeLessThan(-0.1); // the line itself goes below 0 on a dry day
    expect(done.series[0].values[21]).toBe(0);
    expect(done.series[0].values[0]).toBeNaN();
    expect(done.series[0].values[59]).toBeNaN();
    const few = infillSeries(
      [daily("2001-01-01", gappy.slice(0, 31)), daily("2001-01-01", wave, { site: "B" })],
      {
        method: "regression",
        longest: 3,
      },
    );
    expect(few.sites[0]).toMatchObject({ days: 0, left: 1, tested: 0, error: NaNs });
  });

  test("in a covariate: counted per window and told per station", () => {
    const hole = wave.map((x, k) => (k === 20 ? null : x + 1));
    const definition: CovariateDefinition = {
      name: "January",
      theme: "rain",
      unit: "mm",
      window: { type: "season", from: { month: 1, day: 1 }, to: { month: 1, day: 0 }, lag: 0 },
      statistic: { type: "sum" },
      complete: { type: "wmo" },
      join: "mean of windows",
      series: [
        daily("2001-01-01", hole, { kind: "total" }),
        daily("2001-01-01", wave, { site: "B", kind: "total" }),
      ],
      infill: { method: "regression", longest: 2 },
    };
    const { covariate, findings } = aggregateCovariate(definition, yearly("07-20", 2000, 1));
    const january = wave.slice(0, 31).reduce((a, b) => a + b);
    expect(covariate.values[0].value).toBeCloseTo(january + 31 / 2, 9);
    expect(covariate.values[0]).toMatchObject({ daysInfilled: 1, daysCovered: 31, stations: ["Ash", "B"] });
    expect(findings).toMatchObject([{ kind: "infilled", subject: "January", count: 1 }]);
    expect(findings[0].message).toMatch(
      /^Ash: 1 day in 1 gap filled by regression on B \(leave-one-out error /,
    );
    // Row 20 from 1 January is the 21st.
    const period = { start: on("2001-01-21"), end: on("2001-01-22") };
    expect(covariate.infilled).toEqual([
      { station: "Ash", variable: "x", unit: "mm", period, value: expect.closeTo(wave[20] + 1, 9) },
    ]);
    expect(infilledTables([covariate])[0].rows.map((row) => row.slice(0, 5))).toEqual([
      ["January", "Ash", "x", "2001-01-21", "2001-01-21"],
    ]);
    const { infill: _, ...without } = definition;
    expect(infilledTables([aggregateCovariate(without, []).covariate])).toEqual([]);
    const plain = aggregateCovariate(without, yearly("07-20", 2000, 1));
    expect(plain.covariate.values[0].stations).toEqual(["B"]);
  });
});

// Twelve US cooperative stations, 1948–1997, National Center for Atmospheric Research: real gaps are empty cells.
describe("Colorado", () => {
  const table = readCsv(
    readFileSync(new URL("../data/colorado-monthly.csv", import.meta.url), "utf8"),
    "colorado-monthly.csv",
  );
  function read(variable: string, kind: Series["kind"]): Series[] {
    const [station, month, value] = ["station", "month", variable].map((name) =>
      columnIndex(table, name, name),
    );
    const rows = new Map<string, [number, number, number][]>();
    for (const { cells } of table.rows) {
      const [year, m] = cells[month].split("-").map(Number);
      const number = cells[value] === "" ? NaNs : Number(cells[value]);
      rows.set(cells[station], [
        ...(rows.get(cells[station]) ?? []),
        [dayOf(year, m, 1), dayOf(year, m + 1, 1), number],
      ]);
    }
    return Array.from(rows, ([site, list]) => ({
      site,
      variable,
      unit: "cm",
      kind,
      starts: Int32Array.from(list, (row) => row[0]),
      ends: Int32Array.from(list, (row) => row[1]),
      values: Float64Array.from(list, (row) => row[2]),
      files: ["colorado-monthly.csv"],
    }));
  }
  const rain = read("precipitation_cm", "total");
  const winters = yearly("07-20", 1948, 49);
  const winterRain: CovariateDefinition = {
    name: "winter rain",
    theme: "rain",
    unit: "cm",
    window: { type: "season", from: { month: 11, day: 1 }, to: { month: 2, day: 0 }, lag: 0 },
    statistic: { type: "sum" },
    complete: { type: "wmo" },
    join: "mean of windows",
    series: rain,
  };

  test("what WMO's rule refuses: every station and winter with an empty month, counted from the rows", () => {
    for (const one of rain) {
      const { covariate } = aggregateCovariate({ ...winterRain, series: [one] }, winters);
      winters.forEach((_, t) => {
        // The four rows of November 1948 + t to February, straight from the table's order (600 months from 1948-01).
        const rows = Array.from(one.values.subarray(10 + 12 * t, 14 + 12 * t));
        const sum = rows.reduce((a, b) => a + b);
        const found = covariate.values[t];
        if (rows.every(Number.isNaN)) expect(found.failed).toMatch(/^none of 12[01] days covered$/);
        else if (Number.isNaN(sum)) expect(found.failed).toContain("(a sum needs all days)");
        else expect(found.value).toBeCloseTo(sum, 9);
      });
    }
  });

  test("the joined winter rain has a value in every winter, and the changing set is a finding", () => {
    const { covariate, findings } = aggregateCovariate(winterRain, winters);
    const complete = winters.filter((_, t) =>
      rain.every(
        (one) => !Number.isNaN(one.values.subarray(10 + 12 * t, 14 + 12 * t).reduce((a, b) => a + b)),
      ),
    );
    expect(complete.length).toBeGreaterThan(0);
    expect(complete.length).toBeLessThan(49);
    expect(findings).toMatchObject([{ kind: "changing-stations", count: 49 - complete.length }]);
    expect(covariate.values.every((one) => Number.isFinite(one.value))).toBe(true);
  });

  test("infilling: leave-one-out errors agree with refitting on everything but the value, one by one", () => {
    const done = infillSeries(rain, { method: "regression", longest: 62 });
    const site = done.sites[2];
    const at = rain.findIndex((one) => one.site === site.site);
    const target = rain[at].values;
    let [squares, tested] = [0, 0];
    for (let i = 0; i < target.length; i++) {
      if (Number.isNaN(target[i])) continue;
      const name = site.neighbours.find(
        (one) => !Number.isNaN(rain[rain.findIndex((r) => r.site === one)].values[i]),
      );
      const x = rain[rain.findIndex((one) => one.site === name)].values;
      // Normal equations over all common months but this one.
      let [n, sx, sy, sxx, sxy] = [0, 0, 0, 0, 0];
      for (let j = 0; j < x.length; j++) {
        if (j === i || Number.isNaN(x[j] + target[j])) continue;
        n++;
        sx += x[j];
        sy += target[j];
        sxx += x[j] * x[j];
        sxy += x[j] * target[j];
      }
      const slope = (n * sxy - sx * sy) / (n * sxx - sx * sx);
      const guess = Math.max(0, (sy - slope * sx) / n + slope * x[i]);
      squares += (guess - target[i]) ** 2;
      tested++;
    }
    expect(site.tested).toBe(tested);
    expect(site.error).toBeCloseTo(Math.sqrt(squares / tested), 9);
  });

  test("infilling helps: its error is below the spread of the values, and more winters are complete", () => {
    const done = infillSeries(rain, { method: "normal ratio", longest: 62 });
    done.sites.forEach((site, s) => {
      const known = rain[s].values.filter((x) => !Number.isNaN(x));
      const mean = known.reduce((a, b) => a + b) / known.length;
      const sd = Math.sqrt(known.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (known.length - 1));
      expect(site.error, `${site.site}: ${site.error} against ${sd}`).toBeLessThan(sd);
    });
    const given = (definition: CovariateDefinition) =>
      aggregateCovariate(definition, winters).covariate.values.reduce(
        (sum, one) => sum + one.stations.length,
        0,
      );
    const before = given(winterRain);
    const after = given({ ...winterRain, infill: { method: "normal ratio", longest: 62 } });
    expect(after).toBeGreaterThan(before);
    expect(on("1948-11-01")).toBe(rain[0].starts[10]);
  });
});
