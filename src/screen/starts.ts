import type { Random } from "../math/random.ts";
import { weightedL1 } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import { gradientTolerance } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import type { LassoPath, PathStep } from "./path.ts";
import { RESIDUAL_LIMIT } from "./path.ts";
import { covariatePositions, designWith, fullWeights, type ScreenProblem } from "./problem.ts";

export interface StartsReport {
  readonly starts: number;
  /** How many ended at the chosen solution. */
  readonly agree: number;
  /** The least objective found minus the chosen solution's; negative if a start found a better one. */
  readonly best: number;
}

/**
 * Solves the chosen λ again from random starts (standard normal coefficients): the likelihood is not concave, so
 * only agreement of many starts speaks for a global optimum. No start has more covariates off zero than there are
 * rows (strata × intervals), which are chosen at random: more would span the same predictors, at a much higher price.
 * Where λ_max is 0 only the unpenalised coefficients vary.
 */
export function agreeingStarts(
  problem: ScreenProblem,
  path: LassoPath,
  chosen: PathStep,
  starts: number,
  random: Random,
): StartsReport {
  const smooth = cjsLikelihood(problem.data, designWith(problem));
  const positions = covariatePositions(problem);
  const covariates = Int32Array.from(positions, (_, k) => k);
  const rows = problem.frame.strata.length * problem.frame.intervals;
  const nothingMoves = path.lambdaMax === 0;
  const weights = nothingMoves ? path.weights.map(() => Number.POSITIVE_INFINITY) : path.weights;
  const penalty = weightedL1(
    nothingMoves ? 1 : chosen.lambda,
    fullWeights(problem, smooth.dimension, weights),
  );
  const tolerance = nothingMoves ? gradientTolerance(problem.data) : 0.05 * RESIDUAL_LIMIT * path.lambdaMax;
  const options = { tolerance, iterations: 500 };
  let agree = 0;
  let best = 0;
  for (let i = 0; i < starts; i++) {
    const start = Float64Array.from({ length: smooth.dimension }, () => random.normal());
    const order = covariates.length > rows ? random.permutation(covariates.length) : covariates;
    order.forEach((k, place) => {
      const fixedAtZero = weights[k] === Number.POSITIVE_INFINITY;
      if (place >= rows || fixedAtZero) start[positions[k]] = 0;
    });
    const solution = proximalNewton(smooth, penalty, start, options);
    const away = solution.objective - chosen.objective;
    best = Math.min(best, away);
    if (solution.stopped === "optimum" && Math.abs(away) <= 1e-8 * (1 + Math.abs(chosen.objective))) agree++;
  }
  return { starts, agree, best };
}
