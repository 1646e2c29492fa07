import type { Random } from "../math/random.ts";
import { weightedL1 } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import type { LassoPath, PathStep } from "./path.ts";
import { RESIDUAL_LIMIT } from "./path.ts";
import { designWith, fullWeights, type ScreenProblem } from "./problem.ts";

export interface StartsReport {
  readonly starts: number;
  /** How many ended at the chosen solution. */
  readonly agree: number;
  /** The least objective found minus the chosen solution's; negative if a start found a better one. */
  readonly best: number;
}

/**
 * Solves the chosen λ again from random starts (standard normal coefficients): the likelihood is not concave, so
 * only agreement of many starts speaks for a global optimum.
 */
export function agreeingStarts(
  problem: ScreenProblem,
  path: LassoPath,
  chosen: PathStep,
  starts: number,
  random: Random,
): StartsReport {
  const smooth = cjsLikelihood(problem.data, designWith(problem));
  const penalty = weightedL1(chosen.lambda, fullWeights(problem, smooth.dimension, path.weights));
  let agree = 0;
  let best = 0;
  for (let i = 0; i < starts; i++) {
    const start = Float64Array.from({ length: smooth.dimension }, () => random.normal());
    const options = { tolerance: 0.05 * RESIDUAL_LIMIT * path.lambdaMax, iterations: 500 };
    const solution = proximalNewton(smooth, penalty, start, options);
    const away = solution.objective - chosen.objective;
    best = Math.min(best, away);
    if (solution.stopped === "optimum" && Math.abs(away) <= 1e-8 * (1 + Math.abs(chosen.objective))) agree++;
  }
  return { starts, agree, best };
}
