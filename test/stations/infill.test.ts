import { fileURLToPath } from "node:url";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import type { Series } from "../../src/data/series.ts";
import { type InfillOptions, infill, infillFindings, normalRatio } from "../../src/stations/infill.ts";
import { readRecords } from "../../src/stations/read-records.ts";
import { effectsBelow } from "./memory-files.ts";

const daily = (
  site: string,
  values: readonly (number | undefined)[],
  kind: Series["kind"] = "mean",
): Series => {
  // `undefined` has no row at all, NaN a row without a value.
  const rows = values.flatMap((value, i) => (value === undefined ? [] : [[i, value]]));
  return {
    site,
    variable: "t",
    unit: "degC",
    kind,
    starts: Int32Array.from(rows, ([i]) => i),
    ends: Int32Array.from(rows, ([i]) => i + 1),
    values: Float64Array.from(rows, ([, value]) => value),
    files: [`${site}.csv`],
  };
};
const OPTIONS: InfillOptions = { method: "regression", longestGap: 3, overlap: 5, correlation: 0.5 };
const wave = (n: number) =>
  Array.from({ length: n }, (_, i) => 10 + 5 * Math.sin(i * 0.7) + ((i * 37) % 11) / 10);

describe("infilling", () => {
  test("an exact line fills exactly; only short gaps, missing rows and empty values alike; the rest untouched", () => {
    const x = wave(40);
    const y = x.map((value, i) =>
      i === 5 || i === 6 ? undefined : i === 12 ? Number.NaN : i >= 20 && i < 25 ? undefined : 2 + 3 * value,
    );
    const [ash] = infill([daily("Ash", y), daily("Beck", x)], OPTIONS);
    expect(ash.filled.map(({ start, from }) => [start, from])).toEqual([5, 6, 12].map((i) => [i, ["Beck"]]));
    for (const { start, value } of ash.filled) expect(value).toBeCloseTo(2 + 3 * x[start], 10);
    expect([ash.left, ash.series.starts.length]).toEqual([1, 35]);
    expect(Array.from(ash.series.starts)).toEqual([
      ...Array(20).keys(),
      ...Array.from({ length: 15 }, (_, i) => 25 + i),
    ]);
    expect(ash.error.rootMeanSquare).toBeLessThan(1e-10);
  });

  test("nothing before the first and after the last value, nothing from weak or constant neighbours", () => {
    const x = wave(40);
    const y = x.map((value, i) => (i < 2 || i > 37 || i === 9 ? undefined : value));
    const flat = x.map(() => 4);
    const odd = x.map((_, i) => ((i * 7919) % 13) - 6);
    const [ash] = infill([daily("Ash", y), daily("Flat", flat), daily("Odd", odd)], OPTIONS);
    expect([ash.filled, ash.left, ash.error.n]).toEqual([[], 1, 0]);
    const [again] = infill([daily("Ash", y), daily("Flat", flat), daily("Good", x)], OPTIONS);
    expect(again.filled.map(({ start }) => start)).toEqual([9]);
  });

  test("the next best neighbour steps in where the best has no value", () => {
    const x = wave(40);
    const y = x.map((value, i) => (i === 9 || i === 15 ? undefined : value));
    const best = x.map((value, i) => (i === 9 ? Number.NaN : value));
    const second = x.map((value, i) => value + ((i * 31) % 7) / 10);
    const [ash] = infill([daily("Ash", y), daily("Best", best), daily("Second", second)], OPTIONS);
    expect(ash.filled.map(({ from }) => from)).toEqual([["Second"], ["Best"]]);
  });

  test("leave-one-out error equals refitting without each value, for both methods", () => {
    const value = fc.integer({ min: 1, max: 400 });
    const pairs = fc.array(fc.tuple(value, value), { minLength: 8, maxLength: 30 });
    fc.assert(
      fc.property(pairs, fc.constantFrom("regression" as const, "normal ratio" as const), (list, method) => {
        const options: InfillOptions = { method, longestGap: 1, overlap: 2, correlation: -1 };
        const [y, x] = [list.map(([a]) => a), list.map(([, b]) => b)];
        fc.pre(new Set(x).size > 3 && new Set(y).size > 1);
        const { error } = infill([daily("Ash", y, "total"), daily("Beck", x, "total")], options)[0];
        // Naively: a gap is made of each value in turn, the line is fitted anew by its textbook formula.
        const errors = list.map(([yi, xi], i) => {
          const rest = list.filter((_, k) => k !== i);
          const my = rest.reduce((sum, [a]) => sum + a, 0) / rest.length;
          const mx = rest.reduce((sum, [, b]) => sum + b, 0) / rest.length;
          const slope =
            rest.reduce((sum, [a, b]) => sum + (a - my) * (b - mx), 0) /
            rest.reduce((sum, [, b]) => sum + (b - mx) ** 2, 0);
          const estimate = method === "regression" ? my + slope * (xi - mx) : (my / mx) * xi;
          return Math.max(0, estimate) - yi;
        });
        const rms = Math.sqrt(errors.reduce((sum, e) => sum + e * e, 0) / errors.length);
        expect(error.n).toBe(list.length);
        expect(Math.abs(error.rootMeanSquare - rms)).toBeLessThan(1e-7 * (1 + rms));
      }),
    );
  });

  test("normal ratio: a gauge with normals 980 against 1120, 935, 1200 and catches of 107, 89, 122 (textbook figures, from memory)", () => {
    // 980/3 · (107/1120 + 89/935 + 122/1200), by hand: (93.625 + 93.283 + 99.633)/3
    expect(normalRatio([980, 980, 980], [1120, 935, 1200], [107, 89, 122])).toBeCloseTo(95.514, 3);
  });

  test("totals are never filled below zero, and the finding says all of it", () => {
    const x = wave(40).map((value, i) => (i === 9 ? 0 : value));
    const y = x.map((value, i) => (i === 9 ? undefined : value * 2 - 8));
    const options: InfillOptions = { ...OPTIONS };
    const results = infill([daily("Ash", y, "total"), daily("Beck", x, "total")], options);
    expect(results[0].filled[0].value).toBe(0);
    const [finding] = infillFindings(results, options);
    expect([finding.kind, finding.count, finding.value]).toEqual(["infilled", 1, "1970-01-10 to 1970-01-10"]);
    expect(finding.message).toMatch(
      /^t at Ash: 1 period filled by regression from Beck; leave-one-out error \S+ degC/,
    );
  });
});

test("Colorado (real monthly records): the neighbours do better than the station's own mean, everywhere", async () => {
  const { series } = await readRecords(
    [
      {
        layout: "long",
        files: ["colorado-monthly.csv"],
        station: { column: "station" },
        date: { column: "month", format: "yyyy-MM", covers: "month" },
        missing: [],
        series: { tmax: { column: "tmax_c", unit: "degC", kind: "maximum", day: 0, scale: 1 } },
      },
    ],
    undefined,
    { keep: "none", except: [] },
    effectsBelow(fileURLToPath(new URL("../data", import.meta.url))),
  );
  const results = infill(series, { method: "regression", longestGap: 62 });
  expect(results.length).toBe(12);
  for (const { series: one, error, filled } of results) {
    expect([one.site, error.rootMeanSquare < error.observedSd / 3]).toEqual([one.site, true]);
    for (const { start, end } of filled) expect(end - start).toBeLessThanOrEqual(31);
  }
  const akron = results[0];
  // The gaps of one and two months: 1982-08, 1990-12, 1993-01 to 02, 1995-02; those of three and more stay.
  expect(akron.filled.map(({ start }) => isoDay(start).slice(0, 7))).toEqual([
    "1982-08",
    "1990-12",
    "1993-01",
    "1993-02",
    "1995-02",
  ]);
  expect(akron.left).toBe(3);
});
