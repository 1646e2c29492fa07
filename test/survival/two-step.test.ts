import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { mean } from "../../src/math/quantile.ts";
import { randomStream } from "../../src/math/random.ts";
import { drawCaptures } from "../../src/simulate/draw.ts";
import {
  constantRecapture,
  type Frame,
  intervalSurvival,
  occasionRecapture,
} from "../../src/survival/design.ts";
import type { RandomIntervalProblem } from "../../src/survival/effects-design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { glsFit, rotateColumns } from "../../src/survival/gls.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { type TwoStep, twoStep } from "../../src/survival/two-step.ts";
import { normals } from "./small-problem.ts";

function drawn(n: number, marked: number, survival: Float64Array, seed: number): RandomIntervalProblem {
  const frame: Frame = {
    strata: ["all"],
    intervals: n,
    lengths: new Float64Array(n).fill(1),
    forced: [],
    effort: undefined,
  };
  const truth = {
    stratum: "all",
    marked: new Float64Array(n).fill(marked),
    survival,
    recapture: new Float64Array(n).fill(0.75),
  };
  return {
    data: [drawCaptures(truth, randomStream(9, "two steps", seed))],
    frame,
    recapture: constantRecapture(frame),
    covariates: [],
  };
}

/** A two-step result with independent logits of one variance. */
function balanced(logits: Float64Array, variance: number): TwoStep {
  const n = logits.length;
  const unit = (t: number) => Float64Array.from({ length: n }, (_, u) => (t === u ? 1 : 0));
  const empty = { rows: 0, columns: 0, data: new Float64Array(0) };
  return {
    logits,
    covariance: empty,
    information: empty,
    atBound: [],
    rotation: Array.from({ length: n }, (_, t) => unit(t)),
    eigenvalues: new Float64Array(n).fill(1 / variance),
    rotated: logits,
  };
}

describe("first step", () => {
  test("logits and covariance are those of the fit with one survival per interval", () => {
    const problem = drawn(8, 60, new Float64Array(8).fill(0.6), 1);
    const two = twoStep(problem);
    const fit = fitModel(
      problem.data,
      designOf(problem.frame, intervalSurvival(problem.frame), problem.recapture),
    );
    expect(two.atBound).toEqual([]);
    for (let t = 0; t < 8; t++) {
      expect(two.logits[t]).toBeCloseTo(fit.estimates[t], 8);
      for (let u = 0; u < 8; u++)
        expect(two.covariance.data[t * 8 + u]).toBeCloseTo(fit.covariance.data[t * 9 + u], 8);
    }
  });

  test("an interval that everyone survives is named, finite and weighs little; the others stay as they were", () => {
    const survival = new Float64Array(8).fill(0.6);
    survival[3] = 1;
    const problem = drawn(8, 60, survival, 2);
    const two = twoStep(problem);
    expect(two.atBound).toEqual([3]);
    expect(two.logits[3]).toBeGreaterThan(3);
    expect(two.logits[3]).toBeLessThan(12);
    const weight = (t: number) => two.information.data[t * 8 + t];
    for (const t of [0, 1, 2, 4, 5, 6]) expect(weight(3)).toBeLessThan(0.1 * weight(t));
    const fit = fitModel(
      problem.data,
      designOf(problem.frame, intervalSurvival(problem.frame), problem.recapture),
    );
    for (const t of [0, 1, 5, 6]) expect(Math.abs(two.logits[t] - fit.estimates[t])).toBeLessThan(0.03);
  });

  test("what recapture per occasion leaves unknown (the last interval) has no weight and moves nothing", () => {
    const problem = drawn(8, 60, new Float64Array(8).fill(0.6), 3);
    const two = twoStep({ ...problem, recapture: occasionRecapture(problem.frame) });
    expect(two.eigenvalues.length).toBe(7);
    const fit = glsFit(rotateColumns(two, [new Float64Array(8).fill(1)]), [0], "REML");
    expect(fit.df).toBe(6);
    expect(Math.abs(fit.coefficients[0] - Math.log(0.6 / 0.4))).toBeLessThan(0.5);
  });
});

describe("generalised least squares", () => {
  test("with one error variance σ² is RSS/(n − k) − v by REML, RSS/n − v by ML, 0 where that is negative", () => {
    // closed form, textbook algebra of the balanced one-way model
    fc.assert(
      fc.property(fc.nat(1000), fc.constantFrom(0.05, 0.5, 1.5), (seed, variance) => {
        const n = 14;
        const x = normals(n, seed);
        const y = normals(n, seed + 1);
        const slope =
          x.reduce((sum, value, t) => sum + (value - mean(x)) * y[t], 0) /
          x.reduce((sum, value) => sum + (value - mean(x)) ** 2, 0);
        const rss = y.reduce((sum, value, t) => sum + (value - mean(y) - slope * (x[t] - mean(x))) ** 2, 0);
        const rotated = rotateColumns(balanced(y, variance), [new Float64Array(n).fill(1), x]);
        const reml = glsFit(rotated, [0, 1], "REML");
        expect(reml.coefficients[1]).toBeCloseTo(slope, 10);
        expect(reml.sigma ** 2).toBeCloseTo(Math.max(0, rss / (n - 2) - variance), 5);
        expect(glsFit(rotated, [0, 1], "ML").sigma ** 2).toBeCloseTo(Math.max(0, rss / n - variance), 5);
      }),
      { numRuns: 60 },
    );
  });

  test("is (XᵀV⁻¹X)⁻¹XᵀV⁻¹y with V = covariance + σ²D worked out in full, unequal intervals included", () => {
    const problem = drawn(9, 80, new Float64Array(9).fill(0.65), 5);
    const lengths = Float64Array.from({ length: 9 }, (_, t) => 0.7 + 0.1 * t);
    const two = twoStep({ ...problem, frame: { ...problem.frame, lengths } });
    const x = normals(9, 6);
    const sigma = 0.35;
    const fit = glsFit(rotateColumns(two, [new Float64Array(9).fill(1), x]), [0, 1], sigma);
    const v = Array.from({ length: 9 }, (_, t) =>
      Array.from(
        { length: 9 },
        (_, u) => two.covariance.data[t * 9 + u] + (t === u ? (sigma * sigma) / lengths[t] : 0),
      ),
    );
    // normal equations by plain elimination of [V | 1 x y]
    const wide = v.map((row, t) => [...row, 1, x[t], two.logits[t]]);
    for (let k = 0; k < 9; k++) {
      const pivot = wide[k][k];
      wide[k] = wide[k].map((value) => value / pivot);
      for (let r = 0; r < 9; r++) {
        if (r === k) continue;
        const share = wide[r][k];
        wide[r] = wide[r].map((value, c) => value - share * wide[k][c]);
      }
    }
    const sum = (column: Float64Array, k: number) =>
      column.reduce((total, value, t) => total + value * wide[t][9 + k], 0);
    const ones = new Float64Array(9).fill(1);
    const [a, b, c] = [sum(ones, 0), sum(ones, 1), sum(x, 1)];
    const [p, q] = [sum(ones, 2), sum(x, 2)];
    const determinant = a * c - b * b;
    expect(fit.coefficients[0]).toBeCloseTo((c * p - b * q) / determinant, 9);
    expect(fit.coefficients[1]).toBeCloseTo((a * q - b * p) / determinant, 9);
    expect(fit.covariance.data[3]).toBeCloseTo(a / determinant, 9);
    expect(fit.covariance.data[1]).toBeCloseTo(-b / determinant, 9);
  });
});
