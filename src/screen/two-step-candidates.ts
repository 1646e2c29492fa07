import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { weightedL1 } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { Smooth } from "../solve/smooth.ts";
import { totalReleases } from "../survival/fit.ts";
import { glsFit, type RotatedColumns, rotateColumns } from "../survival/gls.ts";
import { type TwoStep, twoStep } from "../survival/two-step.ts";
import { lambdaGrid } from "./path.ts";
import type { ScreenProblem } from "./problem.ts";
import { RIDGE, weightsFrom } from "./weights.ts";

/** Two-step quantities of a problem with its columns: common survival, forced covariates, then the K candidates. */
export interface TwoStepProblem {
  readonly two: TwoStep;
  readonly rotated: RotatedColumns;
  /** Columns before the candidates. */
  readonly fixed: number;
  readonly covariates: number;
  readonly releases: number;
}

export function twoStepProblem(problem: ScreenProblem, two: TwoStep = twoStep(problem)): TwoStepProblem {
  const ones = new Float64Array(problem.frame.intervals).fill(1);
  const columns = [
    ones,
    ...problem.frame.forced.map((one) => one.values),
    ...problem.covariates.map((one) => one.values),
  ];
  return {
    two,
    rotated: rotateColumns(two, columns),
    fixed: 1 + problem.frame.forced.length,
    covariates: problem.covariates.length,
    releases: totalReleases(problem.data),
  };
}

/** D(S) up to a constant from the Gaussian model of the interval logits, σ ≥ 0 by maximum likelihood. */
export function twoStepEvidence(problem: TwoStepProblem): (set: readonly number[]) => number {
  const fixed = Array.from({ length: problem.fixed }, (_, k) => k);
  return (set) => glsFit(problem.rotated, [...fixed, ...set.map((k) => problem.fixed + k)], "ML").minus2LogL;
}

/**
 * Candidate sets that know about years: the active sets of an adaptive lasso on the interval logits, weighted by their
 * covariance plus σ²D, with weights from ridge on the same quantities (½ RSS_w + 0.005 · releases · Σβ²). σ is REML's
 * without covariates, so that what the covariates explain counts as unexplained at first and the path starts late.
 */
export function twoStepCandidates(
  problem: TwoStepProblem,
  options: { readonly steps: number; readonly downTo: number; readonly gamma: number },
): (readonly number[])[] {
  const { fixed, covariates, rotated } = problem;
  const d = fixed + covariates;
  const { sigma } = glsFit(
    rotated,
    Array.from({ length: fixed }, (_, k) => k),
    "REML",
  );
  const { normal, right, half } = normalEquations(rotated, sigma);
  const ridge = Float64Array.from(normal);
  for (let k = fixed; k < d; k++) ridge[k * d + k] += 2 * RIDGE * problem.releases;
  const first = Float64Array.from(right);
  if (!choleskyInPlace(ridge, d)) return [];
  choleskySolve(ridge, d, first);
  const weights = new Float64Array(d);
  weights.set(weightsFrom(first.subarray(fixed), options.gamma), fixed);
  const smooth = quadratic(normal, right, half, d);
  const held = weights.map((w, k) => (k < fixed ? w : Number.POSITIVE_INFINITY));
  const solve = (lambda: number, by: Float64Array, from: Float64Array) =>
    proximalNewton(smooth, weightedL1(lambda, by), from, { tolerance: 1e-9 * half, iterations: 50 });
  const nothing = solve(1, held, new Float64Array(d));
  let lambdaMax = 0;
  for (let k = fixed; k < d; k++) lambdaMax = Math.max(lambdaMax, Math.abs(nothing.gradient[k]) / weights[k]);
  const sets = new Map<string, readonly number[]>([["", []]]);
  let x = nothing.x;
  for (const lambda of lambdaGrid(lambdaMax, options.steps, options.downTo)) {
    x = solve(lambda, weights, x).x;
    const active = Array.from({ length: covariates }, (_, k) => k).filter((k) => x[fixed + k] !== 0);
    sets.set(active.join(","), active);
  }
  return [...sets.values()];
}

/** XᵀWX, XᵀWy and ½ yᵀWy in the rotated coordinates, w_i = λ_i/(1 + σ²λ_i). */
function normalEquations({ two, columns }: RotatedColumns, sigma: number) {
  const d = columns.length;
  const normal = new Float64Array(d * d);
  const right = new Float64Array(d);
  let half = 0;
  for (let i = 0; i < two.eigenvalues.length; i++) {
    const w = two.eigenvalues[i] / (1 + sigma * sigma * two.eigenvalues[i]);
    half += 0.5 * w * two.rotated[i] ** 2;
    for (let a = 0; a < d; a++) {
      right[a] += w * columns[a][i] * two.rotated[i];
      for (let b = 0; b < d; b++) normal[a * d + b] += w * columns[a][i] * columns[b][i];
    }
  }
  return { normal, right, half };
}

/** ½ βᵀNβ − rᵀβ + ½ yᵀWy. */
function quadratic(normal: Float64Array, right: Float64Array, half: number, d: number): Smooth {
  return {
    dimension: d,
    evaluate: (x, gradient) => {
      let value = half;
      for (let a = 0; a < d; a++) {
        let row = 0;
        for (let b = 0; b < d; b++) row += normal[a * d + b] * x[b];
        gradient[a] = row - right[a];
        value += x[a] * (0.5 * row - right[a]);
      }
      return value;
    },
    curvature: (which, out) => {
      which.forEach((a, i) => {
        which.forEach((b, j) => {
          out[i * which.length + j] = normal[a * d + b];
        });
      });
    },
  };
}
