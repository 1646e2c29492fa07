import type { Design, Frame, NamedColumn, Part } from "../survival/design.ts";
import { covariateSurvival, fixedSurvivalColumns } from "../survival/design.ts";
import { designOf } from "../survival/recapture-choice.ts";
import type { SufficientStatistics } from "../survival/statistics.ts";

/** A screen to be run: the data, the shape of the models, the recapture part and the standardised covariates. */
export interface ScreenProblem {
  readonly data: readonly SufficientStatistics[];
  readonly frame: Frame;
  readonly recapture: Part | { readonly known: number };
  readonly covariates: readonly NamedColumn[];
}

/**
 * Whether every covariate has one value per interval between occasions, the same for all animals: not so with time
 * since marking, years of split intervals and covariates by stratum.
 */
export function oneValuePerInterval({ data, frame, covariates }: ScreenProblem): boolean {
  return (
    frame.yearsOf === undefined &&
    data.every((one) => one.becomes === undefined) &&
    [...frame.forced, ...covariates].every((one) => one.values.length === frame.intervals)
  );
}

/** The design with all covariates, or with those at the positions given. */
export function designWith(problem: ScreenProblem, which?: readonly number[]): Design {
  const covariates = which === undefined ? problem.covariates : which.map((k) => problem.covariates[k]);
  return designOf(problem.frame, covariateSurvival(problem.frame, covariates), problem.recapture);
}

/** Where in the coefficient vector the K covariates stand: they follow intercept, strata and forced covariates. */
export function covariatePositions(problem: ScreenProblem): Int32Array {
  const first = fixedSurvivalColumns(problem.frame);
  return Int32Array.from({ length: problem.covariates.length }, (_, k) => first + k);
}

/** Weights over all d coefficients: those given at the covariates, 0 (unpenalised) elsewhere. */
export function fullWeights(problem: ScreenProblem, dimension: number, weights: Float64Array): Float64Array {
  const out = new Float64Array(dimension);
  out.set(weights, fixedSurvivalColumns(problem.frame));
  return out;
}
