import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { dot } from "../math/products.ts";
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
  const { columns, y } = weighted(rotated, sigma);
  const half = 0.5 * dot(y, y);
  const first = ridgeCoefficients(columns, fixed, y, 2 * RIDGE * problem.releases);
  if (first === undefined) return [];
  const weights = new Float64Array(d);
  weights.set(weightsFrom(first, options.gamma), fixed);
  const smooth = leastSquares(columns, y);
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

/** Columns and interval logits in the rotated coordinates times √w, w_i = λ_i/(1 + σ²λ_i). */
function weighted({ two, columns }: RotatedColumns, sigma: number) {
  const root = two.eigenvalues.map((value) => Math.sqrt(value / (1 + sigma * sigma * value)));
  const scaled = (column: Float64Array) => column.map((value, i) => root[i] * value);
  return { columns: columns.map(scaled), y: scaled(two.rotated) };
}

/**
 * Ridge coefficients of the columns from `fixed` on, those before unpenalised: the least of ½|y − Fα − Zβ|² + ½κ Σβ². By the dual
 * (Hastie, Tibshirani & Friedman 2009, §18.3.5), n × n whatever the number of columns: with V = ZZᵀ + κI
 *
 *     α = (FᵀV⁻¹F)⁻¹ FᵀV⁻¹y,   β = ZᵀV⁻¹(y − Fα).
 *
 * Undefined where the columns F cannot be told apart.
 */
function ridgeCoefficients(
  columns: readonly Float64Array[],
  fixed: number,
  y: Float64Array,
  kappa: number,
): Float64Array | undefined {
  const n = y.length;
  const v = new Float64Array(n * n);
  for (let k = fixed; k < columns.length; k++) {
    const z = columns[k];
    for (let i = 0; i < n; i++) for (let j = 0; j <= i; j++) v[i * n + j] += z[i] * z[j];
  }
  for (let i = 0; i < n; i++) v[i * n + i] += kappa;
  if (!choleskyInPlace(v, n)) return undefined;
  const solved = (column: Float64Array) => {
    const out = Float64Array.from(column);
    choleskySolve(v, n, out);
    return out;
  };
  const f = columns.slice(0, fixed);
  const vf = f.map(solved);
  const normal = new Float64Array(fixed * fixed);
  const alpha = Float64Array.from(vf, (one) => dot(one, y));
  for (let a = 0; a < fixed; a++) for (let b = 0; b < fixed; b++) normal[a * fixed + b] = dot(f[a], vf[b]);
  if (!choleskyInPlace(normal, fixed)) return undefined;
  choleskySolve(normal, fixed, alpha);
  const rest = y.map((value, i) => value - f.reduce((sum, one, a) => sum + one[i] * alpha[a], 0));
  const by = solved(rest);
  return Float64Array.from({ length: columns.length - fixed }, (_, k) => dot(columns[fixed + k], by));
}

/** ½|y − Xβ|². */
function leastSquares(columns: readonly Float64Array[], y: Float64Array): Smooth {
  const residual = new Float64Array(y.length);
  return {
    dimension: columns.length,
    evaluate: (x, gradient) => {
      residual.set(y);
      for (let k = 0; k < x.length; k++) {
        const column = columns[k];
        if (x[k] !== 0) for (let i = 0; i < residual.length; i++) residual[i] -= x[k] * column[i];
      }
      for (let k = 0; k < x.length; k++) gradient[k] = -dot(columns[k], residual);
      return 0.5 * dot(residual, residual);
    },
    curvature: (which, out) => {
      const m = which.length;
      for (let i = 0; i < m; i++)
        for (let j = i; j < m; j++) {
          out[i * m + j] = dot(columns[which[i]], columns[which[j]]);
          out[j * m + i] = out[i * m + j];
        }
    },
  };
}
