import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { PrepareOptions } from "../../src/covariates/options.ts";
import { prepareCovariates } from "../../src/covariates/prepare.ts";
import { fitLine, withoutLine, yearIndex } from "../../src/covariates/time.ts";
import { column } from "../../src/data/matrix.ts";
import { InputError } from "../../src/errors.ts";
import { calendarYears, made, PLAIN } from "./made.ts";

const H = JSON.parse(readFileSync(new URL("../reference/H_aggregation.json", import.meta.url), "utf8"));
const NH: number[] = H.data.nhtemp.temp;
const NaNs = Number.NaN;

/** The stable name of the InputError that is thrown, and its message. */
function refusal(run: () => unknown): { name: string; message: string } {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return { name: error.facts.name, message: error.message };
    throw error;
  }
  return { name: "nothing thrown", message: "" };
}

const prepare = (values: readonly number[], options: Partial<PrepareOptions> = {}, base?: number[]) =>
  prepareCovariates(
    [made("rain", values)],
    calendarYears(2000, values.length),
    { ...PLAIN, ...options },
    base && new Map([["rain", base]]),
  );

describe("standardise", () => {
  // H_aggregation.json: R's nhtemp 1912–1971, z-scores with sd n − 1, tolerance 1e-10
  test("sample: z-scores of nhtemp by sd with n − 1", () => {
    const { matrix } = prepareCovariates([made("temp", NH)], calendarYears(1912, 60), PLAIN);
    H.expected.nhtemp.zscore_first5.forEach((z: number, t: number) => {
      expect(Math.abs(matrix.standard.data[t] - z)).toBeLessThanOrEqual(1e-10);
    });
    expect(Math.abs(matrix.recipes[0].centre - H.expected.nhtemp.mean)).toBeLessThanOrEqual(1e-10);
    expect(Math.abs(matrix.recipes[0].scale - H.expected.nhtemp.sd)).toBeLessThanOrEqual(1e-10);
    expect(matrix.recipes[0].range).toEqual([47.9, 54.6]);
  });

  test("base: mean and sd of the base years, so the sample need not be centred", () => {
    const base = { type: "base", from: 1912, to: 1941 } as const;
    const { matrix } = prepare([51, 52, 53], { standardise: base }, NH.slice(0, 30));
    const years = NH.slice(0, 30);
    const centre = years.reduce((a, b) => a + b) / 30;
    const sd = Math.sqrt(years.reduce((sum, x) => sum + (x - centre) ** 2, 0) / 29);
    expect(matrix.recipes[0].centre).toBeCloseTo(centre, 12);
    expect(matrix.recipes[0].scale).toBeCloseTo(sd, 12);
    expect(matrix.standard.data[0]).toBeCloseTo((51 - centre) / sd, 12);
  });

  test("base: the base years are transformed as the column is", () => {
    const standardise = { type: "base", from: 1912, to: 1941 } as const;
    const logs = NH.slice(0, 30).map(Math.log);
    const { matrix } = prepare([51, 52, 53], { standardise, transform: { rain: "log" } }, NH.slice(0, 30));
    expect(matrix.recipes[0].centre).toBeCloseTo(logs.reduce((a, b) => a + b) / 30, 12);
  });

  test("base: refused with 19 complete years, without base years, and beside detrending", () => {
    const standardise = { type: "base", from: 1912, to: 1941 } as const;
    const short = [...NH.slice(0, 19), ...new Array(11).fill(NaNs)];
    expect(refusal(() => prepare([1, 2, 3], { standardise }, short))).toMatchObject({
      name: "covariates.base-short",
      message: expect.stringContaining(
        "expected at least 20 complete years in the base 1912 to 1941, found 19",
      ),
    });
    expect(refusal(() => prepare([1, 2, 3], { standardise })).name).toBe("covariates.base-missing");
    expect(refusal(() => prepare([1, 2, 4], { standardise, detrend: "linear" }, NH)).name).toBe(
      "covariates.base-detrend",
    );
    // With 20 it passes.
    expect(prepare([1, 2, 3], { standardise }, NH.slice(0, 20)).matrix.names).toEqual(["rain"]);
  });

  test("every standardised column has mean 0 and sd 1", () => {
    const values = fc.array(fc.double({ min: -1e6, max: 1e6, noNaN: true }), { minLength: 3, maxLength: 40 });
    fc.assert(
      fc.property(values, fc.constantFrom("none", "linear", "difference"), (raw, detrend) => {
        fc.pre(new Set(raw.map((x) => x.toFixed(2))).size >= 3);
        // Values that differ by 0.01 or more in 1e6 can still lie on a line; nothing else may be refused.
        const refused = refusal(() => prepare(raw, { detrend })).name;
        expect(["nothing thrown", "covariates.constant"]).toContain(refused);
        fc.pre(refused === "nothing thrown");
        const z = column(prepare(raw, { detrend }).matrix.standard, 0);
        const mean = z.reduce((a, b) => a + b, 0) / z.length;
        const variance = z.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (z.length - 1);
        expect(Math.abs(mean)).toBeLessThan(1e-6);
        expect(Math.abs(variance - 1)).toBeLessThan(1e-6);
      }),
    );
  });
});

describe("detrend", () => {
  // H_aggregation.json: slope, intercept at year 0 and residuals of nhtemp on the calendar year
  test("linear: slope, intercept and residuals of nhtemp", () => {
    const years = NH.map((_, k) => 1912 + k);
    const [intercept, slope] = fitLine(years, NH);
    expect(Math.abs(slope - H.expected.nhtemp.trend_slope)).toBeLessThanOrEqual(1e-10);
    expect(Math.abs(intercept - H.expected.nhtemp.trend_intercept)).toBeLessThanOrEqual(1e-10);
    const left = withoutLine([intercept, slope], years, NH);
    const expected: number[] = [...H.expected.nhtemp.detrended_first5, ...H.expected.nhtemp.detrended_last5];
    [...left.slice(0, 5), ...left.slice(-5)].forEach((value, k) => {
      expect(Math.abs(value - expected[k])).toBeLessThanOrEqual(1e-10);
    });
  });

  test("linear: a rising column keeps only its departures, uncorrelated with time", () => {
    const raw = [1, 4, 2, 8, 5, 7, 9, 8];
    const { matrix } = prepare(raw, { detrend: "linear" });
    const years = yearIndex(calendarYears(2000, 8));
    const z = column(matrix.standard, 0);
    const mid = years.reduce((a, b) => a + b) / 8;
    expect(z.reduce((sum, x, t) => sum + x * (years[t] - mid), 0)).toBeCloseTo(0, 9);
    expect(matrix.recipes[0].trend[1]).toBeGreaterThan(0.9);
  });

  test("difference: the first interval is filled with the mean difference, and said so", () => {
    const { matrix, findings } = prepare([1, 3, 4, 8], { detrend: "difference" });
    expect(matrix.recipes[0].filled).toEqual([0]);
    expect(matrix.recipes[0].centre).toBeCloseTo(7 / 3, 12); // of 2, 1, 4
    expect(matrix.standard.data[0]).toBeCloseTo(0, 12);
    expect(findings[0].message).toContain("2000 to 2001 has no difference");
  });

  test("without dates time is counted in interval lengths", () => {
    const undated = [1, 2, 1].map((length, index) => ({
      index,
      name: String(index),
      start: NaNs,
      end: NaNs,
      length,
    }));
    expect(Array.from(yearIndex(undated))).toEqual([0.5, 2, 3.5]);
  });
});

describe("derive and transform", () => {
  const intervals = calendarYears(2000, 3);
  const two = [made("a", [6, 8, 9]), made("b", [3, 2, 1])];
  const derived = (rule: PrepareOptions["derive"][number]["rule"], of: string[]) => {
    const derive = [{ name: "d", theme: "rain", unit: "1", rule, of }];
    const { matrix } = prepareCovariates(two, intervals, { ...PLAIN, derive });
    return Array.from(column(matrix.raw, 2));
  };
  test("difference, ratio, product, square and mean, row by row", () => {
    expect(derived("difference", ["a", "b"])).toEqual([3, 6, 8]);
    expect(derived("ratio", ["a", "b"])).toEqual([2, 4, 9]);
    expect(derived("product", ["a", "b"])).toEqual([18, 16, 9]);
    expect(derived("square", ["b"])).toEqual([9, 4, 1]);
    expect(derived("mean", ["a", "b"])).toEqual([4.5, 5, 5]);
  });

  test("derived before transformed: the log of a ratio", () => {
    const derive = [{ name: "d", theme: "rain", unit: "1", rule: "ratio" as const, of: ["a", "b"] }];
    const options: PrepareOptions = {
      ...PLAIN,
      derive,
      transform: { d: "log" },
      standardise: { type: "none" },
    };
    const { matrix } = prepareCovariates(two, intervals, options);
    expect(Array.from(column(matrix.standard, 2))).toEqual([2, 4, 9].map(Math.log));
    expect(matrix.recipes[2].definition).toBe("a divided by b");
  });

  test("what has no answer is refused with covariate and interval", () => {
    const zero = refusal(() => prepare([1, 0, 2], { transform: { rain: "log" } }));
    expect(zero.name).toBe("covariates.impossible");
    expect(zero.message).toContain("rain, 2001 to 2002: expected values above 0 for log, found 0");
    expect(refusal(() => prepare([0.5, 1, 0.2], { transform: { rain: "logit" } })).name).toBe(
      "covariates.impossible",
    );
    expect(refusal(() => prepare([4, -1, 2], { transform: { rain: "square root" } })).name).toBe(
      "covariates.impossible",
    );
    expect(refusal(() => prepare([4, -1, 2], { transform: { rain: "log1p" } })).name).toBe(
      "covariates.impossible",
    );
    const ratio = [{ name: "d", theme: "x", unit: "1", rule: "ratio" as const, of: ["a", "zero"] }];
    const byZero = refusal(() =>
      prepareCovariates([made("a", [1, 2, 3]), made("zero", [1, 0, 2])], intervals, {
        ...PLAIN,
        derive: ratio,
      }),
    );
    expect(byZero.message).toContain("d, 2001 to 2002");
  });

  test("names that are none, that repeat, rules with too few, rows that do not fit", () => {
    const derive = (of: string[], rule: "ratio" | "square" = "ratio", name = "d") => ({
      ...PLAIN,
      derive: [{ name, theme: "x", unit: "1", rule, of }],
    });
    const run = (options: PrepareOptions) => refusal(() => prepareCovariates(two, intervals, options)).name;
    expect(run(derive(["a", "c"]))).toBe("covariates.unknown");
    expect(run({ ...PLAIN, transform: { c: "log" } })).toBe("covariates.unknown");
    expect(run(derive(["a"]))).toBe("covariates.derive-count");
    expect(run(derive(["a", "b"], "square"))).toBe("covariates.derive-count");
    expect(run(derive(["a", "b"], "ratio", "a"))).toBe("covariates.repeated");
    expect(refusal(() => prepareCovariates(two, calendarYears(2000, 4), PLAIN)).name).toBe("covariates.rows");
  });
});

describe("missing cells and constant columns", () => {
  const gappy = [1, NaNs, 3, 8];
  test("leave out: the column leaves with a finding that says which cells and why", () => {
    const { matrix, leftOut, findings } = prepare(gappy);
    expect(matrix.names).toEqual([]);
    expect(leftOut).toEqual([
      { name: "rain", reason: "1 of 4 intervals missing: 2001 to 2002 (none of 1 day covered)" },
    ]);
    expect(findings).toMatchObject([{ kind: "incomplete-column", subject: "rain", count: 1 }]);
  });

  test("mean: filled with the column mean, recorded, 0 after standardising", () => {
    const { matrix, findings } = prepare(gappy, { incomplete: "mean" });
    expect(matrix.recipes[0].filled).toEqual([1]);
    expect(matrix.recipes[0].centre).toBeCloseTo(4, 14);
    expect(matrix.standard.data[1]).toBeCloseTo(0, 14);
    expect(matrix.raw.data[1]).toBeNaN();
    expect(findings[0].message).toContain("filled with the column mean");
  });

  test("a column without any value leaves even so", () => {
    const { leftOut, findings } = prepare([NaNs, NaNs, NaNs], { incomplete: "mean" });
    expect(leftOut.map((one) => one.name)).toEqual(["rain"]);
    expect(findings[0].message).toContain("the column leaves the matrix");
  });

  test("stop: an error with the cell", () => {
    expect(refusal(() => prepare(gappy, { incomplete: "stop" }))).toMatchObject({
      name: "covariates.incomplete",
      message: expect.stringContaining("rain, 2001 to 2002"),
    });
  });

  test("a constant column is refused, also one whose departures from a line are rounding", () => {
    expect(refusal(() => prepare([5, 5, 5])).name).toBe("covariates.constant");
    const line = yearIndex(calendarYears(2000, 12)).map((year) => 1000 + 0.3 * year);
    expect(refusal(() => prepare(Array.from(line), { detrend: "linear" })).name).toBe("covariates.constant");
    expect(refusal(() => prepare([1, 2, 3, 4], { detrend: "difference" })).name).toBe("covariates.constant");
  });

  test("derived of a missing value is missing, with where it came from", () => {
    const derive = [{ name: "d", theme: "x", unit: "1", rule: "square" as const, of: ["rain"] }];
    const { leftOut } = prepare(gappy, { derive });
    expect(leftOut[1].reason).toContain("rain: none of 1 day covered");
  });
});
