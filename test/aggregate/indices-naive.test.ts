import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { aggregateCovariate } from "../../src/aggregate/aggregate.ts";
import type { CovariateDefinition, EtccdiIndex, Statistic } from "../../src/aggregate/options.ts";
import { isoDay } from "../../src/data/day.ts";
import type { Series } from "../../src/data/series.ts";
import { daily, interval, yearly } from "./made.ts";

// What statistic.test.ts does for the plain statistics: a second, naive implementation of everything that needs base years, two
// series or a published index, on arrays of (ISO date, value).

type Dated = readonly (readonly [string, number])[];

const YEAR = { type: "year", lag: 0 } as const;
const define = (
  series: readonly Series[],
  statistic: Statistic,
  more: Partial<CovariateDefinition> = {},
) => ({
  name: "x",
  theme: "x",
  unit: "mm",
  window: YEAR,
  statistic,
  complete: { type: "wmo" } as const,
  join: "mean of windows" as const,
  series,
  ...more,
});
const dated = (series: Series): Dated =>
  Array.from(series.values, (value, i) => [isoDay(series.starts[i]), value]);
const add = (list: readonly number[]) => list.reduce((a, b) => a + b, 0);
/** Days of a calendar year out of a longer record. */
const ofYear = (all: Dated, year: number) =>
  all.filter(([day]) => day.startsWith(`${year}-`)).map(([, x]) => x);
const longest = (flags: readonly boolean[]) =>
  Math.max(
    0,
    ...flags
      .map((f) => (f ? "x" : " "))
      .join("")
      .split(" ")
      .map((run) => run.length),
  );

const NAIVE: Readonly<
  Record<Exclude<EtccdiIndex, "growing-season length">, (x: readonly number[]) => number>
> = {
  "frost days": (x) => x.filter((t) => t < 0).length,
  "icing days": (x) => x.filter((t) => t < 0).length,
  "summer days": (x) => x.filter((t) => t > 25).length,
  "tropical nights": (x) => x.filter((t) => t > 20).length,
  TXx: (x) => Math.max(...x),
  TNn: (x) => Math.min(...x),
  Rx1day: (x) => Math.max(...x),
  Rx5day: (x) => Math.max(...x.slice(4).map((_, i) => add(x.slice(i, i + 5)))),
  SDII: (x) => add(x.filter((r) => r >= 1)) / x.filter((r) => r >= 1).length,
  R10mm: (x) => x.filter((r) => r >= 10).length,
  R20mm: (x) => x.filter((r) => r >= 20).length,
  CDD: (x) => longest(x.map((r) => r < 1)),
  CWD: (x) => longest(x.map((r) => r >= 1)),
  PRCPTOT: (x) => add(x.filter((r) => r >= 1)),
};
const TEMPERATURES = ["frost days", "icing days", "summer days", "tropical nights", "TXx", "TNn"];

/** Values in quarters, so that thresholds are hit exactly and sums are exact. */
const quarters = (least: number, most: number, days: number) =>
  fc
    .array(fc.integer({ min: 4 * least, max: 4 * most }), { minLength: days, maxLength: days })
    .map((list) => list.map((x) => x / 4));

/** Growing-season length by looking at every day: the start of the first 6 warm days, then of 6 cold ones from 1 July on. */
function growingNaive(year: Dated): number {
  const six = (from: number, side: (t: number) => boolean) => {
    for (let i = from; i + 6 <= year.length; i++)
      if (year.slice(i, i + 6).every(([, t]) => side(t))) return i;
    return -1;
  };
  const start = six(0, (t) => t > 5);
  if (start < 0) return Number.NaN;
  const half = year.findIndex(([day]) => day.slice(5) === "07-01");
  const end = six(Math.max(half, start), (t) => t < 5);
  return (end < 0 ? year.length : end) - start;
}

/** P(gamma ≤ x) by Simpson's rule on t = u⁴, which takes the pole of shapes below 1 away; the factor by the same rule. */
function gammaBelow(x: number, shape: number): number {
  const simpson = (to: number) => {
    const n = 4000;
    const f = (u: number) => 4 * u ** (4 * shape - 1) * Math.exp(-(u ** 4));
    const h = to / n;
    let sum = f(0) + f(to);
    for (let i = 1; i < n; i++) sum += f(i * h) * (i % 2 === 1 ? 4 : 2);
    return (sum * h) / 3;
  };
  return simpson(x ** 0.25) / simpson((shape + 40 * Math.sqrt(shape) + 60) ** 0.25);
}

/** Φ by Simpson's rule from 0. */
function normalBelow(z: number): number {
  const n = 2000;
  const h = z / n;
  let sum = 1 + Math.exp((-z * z) / 2);
  for (let i = 1; i < n; i++) sum += Math.exp(-((i * h) ** 2) / 2) * (i % 2 === 1 ? 4 : 2);
  return 0.5 + (sum * h) / 3 / Math.sqrt(2 * Math.PI);
}

describe("a second, naive implementation", () => {
  test.each(Object.keys(NAIVE) as (keyof typeof NAIVE)[])("%s", (index) => {
    const cold = TEMPERATURES.includes(index);
    fc.assert(
      fc.property(quarters(cold ? -10 : 0, cold ? 30 : 24, 60), (values) => {
        const series = daily("2001-05-03", values);
        const window = { type: "interval", lag: 0 } as const;
        const definition = define([series], { type: "index", index }, { unit: cold ? "degC" : "mm", window });
        const [got] = aggregateCovariate(definition, [interval("2001-05-03", "2001-07-02")]).covariate.values;
        const expected = NAIVE[index](values);
        if (Number.isNaN(expected)) expect(got.value).toBeNaN();
        else expect(got.value).toBeCloseTo(expected, 10);
      }),
      { numRuns: 60 },
    );
  });

  test("growing-season length", () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.integer({ min: 1, max: 40 }), fc.constantFrom(2, 5, 8)), {
          minLength: 5,
          maxLength: 60,
        }),
        fc.constantFrom(2000, 2001),
        (blocks, year) => {
          const days = year === 2000 ? 366 : 365;
          const values = blocks.flatMap(([length, t]) => Array<number>(length).fill(t));
          const all = Array.from({ length: days }, (_, i) => values[i % values.length]);
          const series = daily(`${year}-01-01`, all);
          const definition = define([series], { type: "growing season" }, { unit: "degC" });
          const [got] = aggregateCovariate(definition, [interval(`${year}-01-01`, `${year + 1}-01-01`)])
            .covariate.values;
          expect(got.value).toEqual(growingNaive(dated(series)));
        },
      ),
      { numRuns: 200 },
    );
  });

  test("R95pTOT", () => {
    fc.assert(
      fc.property(quarters(0, 12, 4 * 365 + 1), (values) => {
        const series = daily("2000-01-01", values);
        const all = dated(series);
        const base = { from: 2000, to: 2002 };
        const wet = [2000, 2001, 2002]
          .flatMap((year) => ofYear(all, year))
          .filter((x) => x >= 1)
          .sort((a, b) => a - b);
        const rank = (wet.length - 1) * 0.95;
        const limit = wet[Math.floor(rank)] + (rank % 1) * (wet[Math.ceil(rank)] - wet[Math.floor(rank)]);
        const intervals = yearly("01-01", 2000, 4);
        const got = aggregateCovariate(define([series], { type: "R95pTOT", base }), intervals).covariate
          .values;
        got.forEach(({ value }, k) => {
          expect(value).toBeCloseTo(add(ofYear(all, 2000 + k).filter((x) => x > limit)), 8);
        });
      }),
      { numRuns: 10 },
    );
  });

  test("SPI, its gamma and normal distributions by numerical integration", () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 400 }), { minLength: 22, maxLength: 22 }), (months) => {
        fc.pre(new Set(months.filter((x) => x > 0)).size > 5);
        const days = months.flatMap((total, k) => {
          const length = (2000 + k) % 4 === 0 ? 366 : 365;
          return Array.from({ length }, (_, i) => (i === 100 ? total : 0));
        });
        const series = daily("2000-01-01", days, { kind: "total" });
        const base = { from: 2000, to: 2021 };
        const got = aggregateCovariate(define([series], { type: "SPI", base }), yearly("01-01", 2000, 22))
          .covariate.values;
        const wet = months.filter((x) => x > 0);
        const mean = add(wet) / wet.length;
        const a = Math.log(mean) - add(wet.map(Math.log)) / wet.length;
        const shape = (1 + Math.sqrt(1 + (4 * a) / 3)) / (4 * a);
        fc.pre(shape > 0.6);
        const q = 1 - wet.length / months.length;
        got.forEach(({ value }, k) => {
          const below = months[k] === 0 ? 0 : gammaBelow((months[k] * shape) / mean, shape);
          const h = q + (1 - q) * below;
          // The index is looked back at through the normal distribution: Φ(SPI) = H.
          if (h === 0) expect(value).toBe(Number.NEGATIVE_INFINITY);
          else expect(normalBelow(value)).toBeCloseTo(h, 6);
        });
      }),
      { numRuns: 25 },
    );
  });

  test("degree-days of extremes by both methods", () => {
    fc.assert(
      fc.property(
        quarters(30, 100, 40),
        quarters(0, 30, 40),
        fc.constantFrom(1 as const, 2 as const),
        (low, rise, method) => {
          const [base, cap] = [50, 86];
          const high = low.map((t, i) => t + rise[i]);
          const max = daily("2001-05-01", high, { variable: "tx" });
          const min = daily("2001-05-01", low, { variable: "tn" });
          const statistic = { type: "degree-days of extremes", base, cap, method } as const;
          const window = { type: "interval", lag: 0 } as const;
          const definition = define([max], statistic, { unit: "degF", second: [min], window });
          const [got] = aggregateCovariate(definition, [interval("2001-05-01", "2001-06-10")]).covariate
            .values;
          const clip = (t: number) => Math.min(cap, Math.max(base, t));
          const expected = low.map((tn, i) =>
            method === 1 ? clip((high[i] + tn) / 2) - base : (clip(high[i]) + clip(tn)) / 2 - base,
          );
          expect(got.value).toBeCloseTo(add(expected), 8);
        },
      ),
      { numRuns: 100 },
    );
  });

  test("anomalies by month and by day", () => {
    fc.assert(
      fc.property(
        quarters(-10, 20, 3 * 365),
        fc.constantFrom("month" as const, "day" as const),
        (values, by) => {
          const series = daily("2001-01-01", values);
          const all = dated(series);
          const key = (day: string) => (by === "month" ? day.slice(5, 7) : day.slice(5));
          const normal = new Map<string, number[]>();
          for (const [day, x] of all.filter(([d]) => d < "2003"))
            normal.set(key(day), [...(normal.get(key(day)) ?? []), x]);
          const away = (year: number) =>
            all
              .filter(([day]) => day.startsWith(`${year}`))
              .map(([day, x]) => x - add(normal.get(key(day)) ?? []) / (normal.get(key(day))?.length ?? 0));
          const definition = define(
            [series],
            { type: "mean" },
            { anomaly: { by, base: { from: 2001, to: 2002 } } },
          );
          const got = aggregateCovariate(definition, yearly("01-01", 2001, 3)).covariate.values;
          got.forEach(({ value }, k) => {
            expect(value).toBeCloseTo(add(away(2001 + k)) / 365, 8);
          });
        },
      ),
      { numRuns: 10 },
    );
  });
});
