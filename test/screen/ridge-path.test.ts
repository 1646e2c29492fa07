import { Matrix, solve } from "ml-matrix";
import { describe, expect, test } from "vitest";
import { lassoPath, solveNull } from "../../src/screen/path.ts";
import { plainLasso } from "../../src/screen/plain-lasso.ts";
import { designWith, type ScreenProblem } from "../../src/screen/problem.ts";
import { refitsOf } from "../../src/screen/refits.ts";
import { ridgePath } from "../../src/screen/ridge-path.ts";
import { ridgeEstimates } from "../../src/screen/weights.ts";
import { constantRecapture, type Frame } from "../../src/survival/design.ts";
import { fitModel, totalReleases } from "../../src/survival/fit.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { drawnProblem, normals } from "../survival/small-problem.ts";

const base = drawnProblem(12, 1, 4, 30, 0.4);
const frame: Frame = { ...base.frame, lengths: new Float64Array(12).fill(1) };
const problem: ScreenProblem = {
  data: base.data,
  frame,
  recapture: constantRecapture(frame),
  covariates: [0, 1, 2].map((k) => ({ name: `x${k}`, values: normals(12, 30 + k) })),
};
const n = totalReleases(problem.data);

describe("ridge with more covariates than rows", () => {
  const wide: ScreenProblem = {
    ...problem,
    covariates: Array.from({ length: 30 }, (_, k) => ({ name: `x${k}`, values: normals(12, 60 + k) })),
  };

  test("the gradient of −log L is −2κβ on all 30, as without the row space", () => {
    const smooth = cjsLikelihood(wide.data, designWith(wide));
    for (const step of ridgePath(wide, n).steps) {
      const gradient = new Float64Array(smooth.dimension);
      smooth.evaluate(step.estimates, gradient);
      for (let k = 0; k < 30; k++)
        expect(gradient[1 + k] + 2 * step.strength * step.coefficients[k]).toBeCloseTo(0, 6);
      expect(gradient[0]).toBeCloseTo(0, 6);
      expect(gradient[31]).toBeCloseTo(0, 6);
    }
  });

  test("effective parameters are tr[(H + 2κD)⁻¹H] over all coefficients", () => {
    const smooth = cjsLikelihood(wide.data, designWith(wide));
    const d = smooth.dimension;
    const step = ridgePath(wide, n).steps[20];
    smooth.evaluate(step.estimates, new Float64Array(d));
    const h = new Float64Array(d * d);
    smooth.curvature(
      Int32Array.from({ length: d }, (_, k) => k),
      h,
    );
    const plain = Matrix.from1DArray(d, d, Array.from(h));
    const shrunken = plain.clone();
    for (let k = 1; k <= 30; k++) shrunken.set(k, k, shrunken.get(k, k) + 2 * step.strength);
    expect(solve(shrunken, plain).trace()).toBeCloseTo(step.effective, 8);
  });
});

describe("ridge beside the lasso", () => {
  const ridge = ridgePath(problem, n);

  test("effective parameters run from those without covariates to those of the full fit", () => {
    const { steps } = ridge;
    for (let i = 1; i < steps.length; i++) expect(steps[i].effective).toBeGreaterThan(steps[i - 1].effective);
    expect(steps[0].effective).toBeLessThan(2.1);
    expect(steps[0].effective).toBeGreaterThan(2);
    const full = fitModel(problem.data, designWith(problem));
    const last = steps[steps.length - 1];
    expect(last.effective).toBeGreaterThan(4.99);
    expect(last.minus2LogL).toBeGreaterThan(full.minus2LogL);
    expect(last.minus2LogL - full.minus2LogL).toBeLessThan(1e-3);
  });

  test("stationary: the gradient of −log L is −2κβ on the covariates, 0 elsewhere", () => {
    const smooth = cjsLikelihood(problem.data, designWith(problem));
    for (const step of ridge.steps) {
      const gradient = new Float64Array(smooth.dimension);
      smooth.evaluate(step.estimates, gradient);
      for (let k = 0; k < 3; k++)
        expect(gradient[1 + k] + 2 * step.strength * step.coefficients[k]).toBeCloseTo(0, 6);
      expect(gradient[0]).toBeCloseTo(0, 6);
    }
  });

  test("at the strength of the weights it is the ridge estimate of the weights", () => {
    const at = 0.005 * n;
    const i = ridge.steps.findIndex((step) => step.strength < at);
    const between = ridgeEstimates(problem, new Float64Array(5));
    for (let k = 0; k < 3; k++) {
      const [a, b] = [ridge.steps[i - 1].coefficients[k], ridge.steps[i].coefficients[k]];
      expect(between[k]).toBeGreaterThan(Math.min(a, b) - 1e-3);
      expect(between[k]).toBeLessThan(Math.max(a, b) + 1e-3);
    }
  });

  test("the chosen one has the least AICc and survivals between 0 and 1", () => {
    const least = Math.min(...ridge.steps.map((step) => step.aicc));
    expect(ridge.steps[ridge.index].aicc).toBeCloseTo(least, 8);
    expect(ridge.survival.every((s) => s > 0 && s < 1)).toBe(true);
    expect(ridge.survival.length).toBe(12);
  });
});

describe("plain lasso beside the adaptive one", () => {
  test("is the path with equal weights", () => {
    const options = {
      steps: 20,
      downTo: 0.01,
      gamma: 1,
      chooseBy: "BIC",
      sampleSize: "releases",
      fit: "shrunken",
      permutations: 0,
    } as const;
    const nothing = solveNull(problem, cjsLikelihood(problem.data, designWith(problem)));
    const refit = refitsOf(problem, nothing.x);
    const plain = plainLasso(problem, { constantParameters: 2, sampleSize: n }, options, refit);
    const path = lassoPath(problem, Float64Array.of(1, 1, 1), options);
    expect(plain.path).toEqual(path);
    expect(plain.chosen).toEqual(path.steps[plain.choice.index].active);
  });
});
