import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import { fixedSurvivalColumns } from "../survival/design.ts";
import { gradientTolerance } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { designWith, type ScreenProblem } from "./problem.ts";

/** −2 log L of the unpenalised model with the covariates at the positions given. */
export type Refits = (active: readonly number[]) => number;

/**
 * Unpenalised fits by set of covariates, each done once. Started from the model without covariates (`nothing`: all d
 * coefficients of the full design), which is where most of each fit already is.
 */
export function refitsOf(problem: ScreenProblem, nothing: Float64Array): Refits {
  const known = new Map<string, number>();
  const fixed = fixedSurvivalColumns(problem.frame);
  const recapture = fixed + problem.covariates.length;
  const tolerance = gradientTolerance(problem.data);
  return (active) => {
    const sorted = [...active].sort((a, b) => a - b);
    const key = sorted.join(",");
    const before = known.get(key);
    if (before !== undefined) return before;
    const smooth = cjsLikelihood(problem.data, designWith(problem, sorted));
    const start = new Float64Array(smooth.dimension);
    start.set(nothing.subarray(0, fixed));
    start.set(nothing.subarray(recapture), fixed + sorted.length);
    const value = 2 * proximalNewton(smooth, noPenalty, start, { tolerance, iterations: 500 }).smooth;
    known.set(key, value);
    return value;
  };
}
