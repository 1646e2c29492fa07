import { Matrix as Dense, EigenvalueDecomposition } from "ml-matrix";
import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { Smooth } from "../solve/smooth.ts";
import { fixedSurvivalColumns } from "../survival/design.ts";
import { gradientTolerance, totalReleases } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { covariatePositions, designWith, type ScreenProblem } from "./problem.ts";
import { inRowSpace } from "./row-space.ts";

export interface AdaptiveWeights {
  /** w_k = 1/|β̃_k|^γ, K. */
  readonly weights: Float64Array;
  /** β̃, K. */
  readonly first: Float64Array;
  readonly by: "maximum likelihood" | "ridge";
  /** Condition number of the information matrix at the maximum, Infinity where there is none. */
  readonly condition: number;
}

/** Above this condition number of the information the maximum is not trusted and ridge takes its place. */
export const CONDITION_LIMIT = 1e8;
/** Weight of Σβ² beside −log L / n_releases. */
export const RIDGE = 0.005;

/**
 * Weights of the adaptive lasso (Zou 2006): 1/|β̃|^γ, β̃ by maximum likelihood where the information is conditioned
 * to 1e8 or better (never with more survival coefficients than rows, strata × intervals), else from −log L / n_releases + 0.005 Σβ².
 */
export function adaptiveWeights(
  problem: ScreenProblem,
  gamma: number,
  start?: Float64Array,
): AdaptiveWeights {
  const smooth = cjsLikelihood(problem.data, designWith(problem));
  const positions = covariatePositions(problem);
  const tolerance = gradientTolerance(problem.data);
  const x0 = start ?? new Float64Array(smooth.dimension);
  const condition = { value: Number.POSITIVE_INFINITY };
  const rows = problem.frame.strata.length * problem.frame.intervals;
  const solved =
    fixedSurvivalColumns(problem.frame) + positions.length <= rows
      ? proximalNewton(smooth, noPenalty, x0, { tolerance, iterations: 60 })
      : undefined;
  if (solved?.stopped === "optimum") condition.value = conditionAt(smooth, solved.x);
  const trusted = solved !== undefined && condition.value <= CONDITION_LIMIT;
  const first = trusted ? Float64Array.from(positions, (k) => solved.x[k]) : ridgeEstimates(problem, x0);
  return {
    weights: weightsFrom(first, gamma),
    first,
    by: trusted ? "maximum likelihood" : "ridge",
    condition: condition.value,
  };
}

/** w_k = 1/|β̃_k|^γ. */
export function weightsFrom(first: Float64Array, gamma: number): Float64Array {
  return first.map((value) => 1 / Math.abs(value) ** gamma);
}

/**
 * The K covariate coefficients that minimise −log L / n_releases + 0.005 Σβ². Start: all d coefficients, of which those of
 * covariates are not used where there are more of them than rows (`inRowSpace`).
 */
export function ridgeEstimates(problem: ScreenProblem, start: Float64Array): Float64Array {
  const space = inRowSpace(problem);
  const smooth = cjsLikelihood(space.problem.data, designWith(space.problem));
  const positions = covariatePositions(space.problem);
  const strength = RIDGE * totalReleases(problem.data);
  const solved = proximalNewton(withRidge(smooth, positions, strength), noPenalty, space.shorten(start), {
    tolerance: gradientTolerance(problem.data),
    iterations: 500,
  });
  const x = space.lengthen(solved.x);
  return Float64Array.from(covariatePositions(problem), (k) => x[k]);
}

/** f(x) + strength · Σ x_k² over the coordinates given. */
export function withRidge(smooth: Smooth, coordinates: Int32Array, strength: number): Smooth {
  const penalised = new Set(coordinates);
  return {
    dimension: smooth.dimension,
    evaluate: (x, gradient) => {
      let value = smooth.evaluate(x, gradient);
      for (const k of coordinates) {
        value += strength * x[k] * x[k];
        gradient[k] += 2 * strength * x[k];
      }
      return value;
    },
    curvature: (which, out) => {
      smooth.curvature(which, out);
      which.forEach((k, i) => {
        if (penalised.has(k)) out[i * which.length + i] += 2 * strength;
      });
    },
  };
}

function conditionAt(smooth: Smooth, x: Float64Array): number {
  const d = smooth.dimension;
  const information = new Float64Array(d * d);
  smooth.evaluate(x, new Float64Array(d));
  smooth.curvature(
    Int32Array.from({ length: d }, (_, k) => k),
    information,
  );
  const values = new EigenvalueDecomposition(Dense.from1DArray(d, d, information), { assumeSymmetric: true })
    .realEigenvalues;
  const smallest = Math.min(...values);
  return smallest <= 0 ? Number.POSITIVE_INFINITY : Math.max(...values) / smallest;
}
