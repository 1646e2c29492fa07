import { InputError } from "../errors.ts";
import { weightedL1 } from "../solve/penalty.ts";
import { proximalNewton, type Solution } from "../solve/proximal-newton.ts";
import type { Smooth, StopReason } from "../solve/smooth.ts";
import { gradientTolerance } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { covariatePositions, designWith, fullWeights, type ScreenProblem } from "./problem.ts";

/** One solution of the path, with its certificate. */
export interface PathStep {
  readonly lambda: number;
  /** All d coefficients: intercept, strata, forced, covariates, recapture. */
  readonly estimates: Float64Array;
  /** The K covariate coefficients. */
  readonly coefficients: Float64Array;
  /** −2 log L at this shrunken solution. */
  readonly minus2LogL: number;
  /** −log L + λ Σ w|β|. */
  readonly objective: number;
  /** Positions of the covariates that are not 0. */
  readonly active: readonly number[];
  /** Largest violation of the Karush–Kuhn–Tucker conditions, as a share of λ_max. */
  readonly residual: number;
  readonly stopped: StopReason;
}

export interface LassoPath {
  readonly lambdaMax: number;
  readonly weights: Float64Array;
  readonly steps: readonly PathStep[];
}

export interface PathOptions {
  readonly steps: number;
  readonly downTo: number;
  /** λ values to use instead of the grid, falling. */
  readonly lambdas?: readonly number[];
  /** End the path before the first solution with more covariates than this. */
  readonly most?: number;
}

/** Largest residual, relative to λ_max, that a solution may carry. */
export const RESIDUAL_LIMIT = 1e-8;

/**
 * Minimises −log L(β0, β, α) + λ Σ_k w_k |β_k| on the total scale (no division by n) along λ falling from
 *
 *     λ_max = max_k |∂(−log L)/∂β_k| / w_k   at the model without covariates
 *
 * to `downTo`·λ_max in log-equal steps, each started from the one before. Only the covariates are penalised.
 * Where no covariate moves the likelihood of the null model at all (no covariates, all rates at their bounds, a null
 * model that fits every interval) λ_max is 0 and every step is the null model.
 * The likelihood is not concave: a residual of 0 proves a stationary point, `agreeingStarts` looks for others.
 * Throws `screen.no-optimum` where a solution does not reach the limit: such a number must not be used.
 */
export function lassoPath(problem: ScreenProblem, weights: Float64Array, options: PathOptions): LassoPath {
  const smooth = cjsLikelihood(problem.data, designWith(problem));
  const positions = covariatePositions(problem);
  const all = fullWeights(problem, smooth.dimension, weights);
  const nothing = solveNull(problem, smooth);
  // a gradient within the tolerance of the null fit is that fit's rounding
  const noise = gradientTolerance(problem.data);
  const lambdaMax = positions.reduce((most, k, i) => {
    const slope = Math.abs(nothing.gradient[k]);
    return slope <= noise ? most : Math.max(most, slope / weights[i]);
  }, 0);
  const lambdas = options.lambdas ?? lambdaGrid(lambdaMax, options.steps, options.downTo);
  if (lambdaMax === 0) {
    const step = (lambda: number) => pathStep(lambda, lambdaMax, nothing, positions, noise);
    return { lambdaMax, weights, steps: lambdas.map(step) };
  }
  const steps: PathStep[] = [];
  let behind: readonly Point[] = [{ lambda: lambdaMax, x: nothing.x }];
  for (const lambda of lambdas) {
    const solution = proximalNewton(smooth, weightedL1(lambda, all), startAt(lambda, behind, all), {
      tolerance: 0.05 * RESIDUAL_LIMIT * lambdaMax,
      iterations: 200,
    });
    behind = [{ lambda, x: solution.x }, ...behind.filter((one) => one.lambda !== lambda).slice(0, 2)];
    const step = pathStep(lambda, lambdaMax, solution, positions, noise);
    if (options.most !== undefined && step.active.length > options.most) break;
    steps.push(step);
  }
  return { lambdaMax, weights, steps };
}

interface Point {
  readonly lambda: number;
  readonly x: Float64Array;
}

/** On the logit scale, in one step of the path. */
const FARTHEST = 2;

/**
 * Where the path will be at λ: each coefficient by the polynomial in λ through up to three solutions, the last first (between
 * coefficients that enter or leave the path is smooth, for a quadratic likelihood straight). Only as many are used as a
 * penalised coefficient has kept its sign in; one that was 0, or would cross 0, stays where it was last, and so does one that
 * would jump: a coefficient without an optimum (a rate at its bound) stops anywhere, and a polynomial through that leads nowhere.
 */
function startAt(lambda: number, behind: readonly Point[], weights: Float64Array): Float64Array {
  const last = behind[0].x;
  const shares = [1, 2, 3].map((count) => lagrange(lambda, behind.slice(0, count)));
  const start = last.slice();
  for (let k = 0; k < start.length; k++) {
    const penalised = weights[k] !== 0;
    if (penalised && last[k] === 0) continue;
    let count = 1;
    while (count < behind.length && (!penalised || last[k] * behind[count].x[k] > 0)) count++;
    const by = shares[count - 1];
    let to = 0;
    for (let i = 0; i < count; i++) to += by[i] * behind[i].x[k];
    if ((!penalised || last[k] * to > 0) && Math.abs(to - last[k]) <= FARTHEST) start[k] = to;
  }
  return start;
}

/** The share of each point in the polynomial through all of them, at λ. */
function lagrange(lambda: number, points: readonly Point[]): readonly number[] {
  return points.map((one, i) =>
    points.reduce(
      (product, other, j) =>
        i === j ? product : (product * (lambda - other.lambda)) / (one.lambda - other.lambda),
      1,
    ),
  );
}

/** log-equal from λ_max to `downTo`·λ_max, both included. */
export function lambdaGrid(lambdaMax: number, steps: number, downTo: number): number[] {
  return Array.from({ length: steps }, (_, i) =>
    steps === 1 ? lambdaMax : lambdaMax * downTo ** (i / (steps - 1)),
  );
}

/** The model without covariates: infinite weights keep them all at 0. */
export function solveNull(problem: ScreenProblem, smooth: Smooth): Solution {
  const weights = new Float64Array(problem.covariates.length).fill(Number.POSITIVE_INFINITY);
  const solution = proximalNewton(
    smooth,
    weightedL1(1, fullWeights(problem, smooth.dimension, weights)),
    new Float64Array(smooth.dimension),
    { tolerance: gradientTolerance(problem.data), iterations: 500 },
  );
  if (solution.stopped !== "optimum") refuseSolution("the model without covariates", solution);
  return solution;
}

function pathStep(
  lambda: number,
  lambdaMax: number,
  solution: Solution,
  positions: Int32Array,
  noise: number,
): PathStep {
  // with λ_max 0 there is nothing to compare with, and the null fit has passed its own tolerance
  const residual = lambdaMax === 0 ? 0 : solution.violation / lambdaMax;
  // a λ_max near 0 (huge weights) asks for less than rounding can give: what counts as a converged fit counts here too
  if (solution.violation > Math.max(RESIDUAL_LIMIT * lambdaMax, noise))
    refuseSolution(`λ = ${lambda}`, solution);
  const coefficients = new Float64Array(positions.length);
  const active: number[] = [];
  for (let k = 0; k < positions.length; k++) {
    coefficients[k] = solution.x[positions[k]];
    if (coefficients[k] !== 0) active.push(k);
  }
  return {
    lambda,
    estimates: solution.x,
    coefficients,
    minus2LogL: 2 * solution.smooth,
    objective: solution.objective,
    active,
    residual,
    stopped: solution.stopped,
  };
}

/** Throws `screen.no-optimum`: a solution that did not reach its optimum must not be used. */
export function refuseSolution(what: string, solution: Solution): never {
  throw new InputError({
    name: "screen.no-optimum",
    expected: `a solution at ${what} that meets the optimality conditions`,
    found: `the solver stopped with "${solution.stopped}" at a violation of ${solution.violation}`,
    where: { cell: "screen" },
    remedy:
      "look for covariates that separate seen from unseen animals, nearly equal columns or empty occasions",
  });
}
