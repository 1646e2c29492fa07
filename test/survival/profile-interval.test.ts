import { describe, expect, test } from "vitest";
import { constantRecapture, covariateSurvival, type Frame } from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { predictedSurvival } from "../../src/survival/predict.ts";
import { profileInterval } from "../../src/survival/profile-interval.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf, reference } from "../support/reference.ts";

interface Dipper {
  readonly data: {
    releases: number[];
    m_array_rows: number[][];
    flood_covariate_by_interval: number[];
  };
}
const { data: dipper } = reference<Dipper>("A_dipper");
const frame: Frame = {
  strata: ["all animals"],
  intervals: 6,
  lengths: new Float64Array(6).fill(1),
  forced: [],
  effort: undefined,
};
const data = [sufficientStatistics(countsOf(dipper.releases, dipper.m_array_rows))];
const flood = { name: "flood", values: Float64Array.from(dipper.flood_covariate_by_interval) };
const design = designOf(frame, covariateSurvival(frame, [flood]), constantRecapture(frame));
const fit = fitModel(data, design);
/** χ²₁(.95), any table. */
const CHI = 3.841458820694124;

describe("profile-likelihood intervals", () => {
  test("at each end −2 log L is 3.8415 above the least, all else refitted (dipper, flood)", () => {
    const { low, high, estimate } = profileInterval(data, design, fit, 1);
    expect(estimate).toBe(fit.estimates[1]);
    for (const end of [low, high]) {
      // the same model with β fixed as an offset: survival = logistic(β0 + end · flood) by a column that has it
      const least = leastWith(end);
      expect(least - fit.minus2LogL).toBeCloseTo(CHI, 6);
    }
    expect(low).toBeLessThan(estimate);
    expect(high).toBeGreaterThan(estimate);
    // not far from estimate ± 1.96 se, and not the same
    expect(Math.abs(low - (estimate - 1.96 * fit.se[1]))).toBeLessThan(0.05);
    expect(low).not.toBeCloseTo(estimate - 1.959964 * fit.se[1], 4);
  });

  test("ĉ between animals widens it: the drop is ĉ times as deep", () => {
    const { low } = profileInterval(data, design, fit, 1, 2);
    expect(leastWith(low) - fit.minus2LogL).toBeCloseTo(2 * CHI, 6);
  });

  test("a covariate that separates: one end at infinity, the other found", () => {
    // all of the third interval's releases are met again, of the others some
    const seen = [
      [20, 0, 0],
      [0, 30, 0],
      [0, 0, 22],
    ];
    const some: Frame = { ...frame, intervals: 3, lengths: new Float64Array(3).fill(1) };
    const counts = [sufficientStatistics(countsOf([40, 30, 40], seen))];
    const column = { name: "x", values: Float64Array.of(0, 1, 0) };
    const one = designOf(some, covariateSurvival(some, [column]), { known: 1 });
    const { low, high } = profileInterval(counts, one, fitModel(counts, one), 1);
    expect(high).toBe(Number.POSITIVE_INFINITY);
    expect(low).toBeGreaterThan(0);
    expect(Number.isFinite(low)).toBe(true);
  });

  /** Least −2 log L with the effect of flood fixed: golden sections over β0 and α in turn would be slow, so nested. */
  function leastWith(effect: number): number {
    const golden = (f: (x: number) => number, from: number, to: number): number => {
      const ratio = (Math.sqrt(5) - 1) / 2;
      let [a, b] = [from, to];
      while (b - a > 1e-7) {
        const [c, d] = [b - ratio * (b - a), a + ratio * (b - a)];
        if (f(c) < f(d)) b = d;
        else a = c;
      }
      return f((a + b) / 2);
    };
    return golden((b0) => golden((a0) => minus2(b0, effect, a0), 1, 4), -1, 2);
  }

  /** −2 log L by cell probabilities. */
  function minus2(b0: number, effect: number, a0: number): number {
    const p = 1 / (1 + Math.exp(-a0));
    const s = flood.values.map((x) => 1 / (1 + Math.exp(-b0 - effect * x)));
    let total = 0;
    dipper.releases.forEach((released, i) => {
      const row = dipper.m_array_rows[i].slice(-(6 - i));
      let [cell, never] = [1, 1];
      row.forEach((m, j) => {
        const now = cell * s[i + j] * p;
        cell *= s[i + j] * (1 - p);
        never -= now;
        if (m > 0) total -= 2 * m * Math.log(now);
      });
      total -= 2 * (released - row.reduce((a, b) => a + b, 0)) * Math.log(never);
    });
    return total;
  }
});

describe("predicted survival", () => {
  test("at observed values it is the fitted survival with its interval; beyond them it says so", () => {
    const [curve] = predictedSurvival(frame, [flood], fit);
    for (const t of [0, 1, 2]) {
      const point = curve.points.find((one) => one.value === flood.values[t]);
      expect(point?.survival).toBeCloseTo(fit.survival[t].value, 10);
      expect(point?.low).toBeCloseTo(fit.survival[t].low, 10);
      expect(point?.high).toBeCloseTo(fit.survival[t].high, 10);
      expect(point?.observed).toBe(true);
    }
    expect(curve.points.filter((one) => !one.observed).map((one) => one.value)).toEqual([
      -0.2, -0.1, 1.1, 1.2,
    ]);
  });

  test("how far it goes beyond the observed goes by their range", () => {
    const wide = { name: "wide", values: flood.values.map((value) => 5 * value - 1) };
    const own = fitModel(data, designOf(frame, covariateSurvival(frame, [wide]), constantRecapture(frame)));
    const [curve] = predictedSurvival(frame, [wide], own);
    expect(curve.points.filter((one) => !one.observed).map((one) => one.value)).toEqual([-2, -1.5, 4.5, 5]);
  });
});
