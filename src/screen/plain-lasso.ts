import { chooseOnPath, type PathChoice } from "./choice.ts";
import type { ScreenOptions } from "./options.ts";
import { type LassoPath, lassoPath } from "./path.ts";
import type { ScreenProblem } from "./problem.ts";
import type { ProcedureSetting } from "./procedure.ts";
import type { Refits } from "./refits.ts";

export interface PlainLasso {
  readonly path: LassoPath;
  readonly choice: PathChoice;
  /** Positions of the covariates at the chosen λ, ascending. */
  readonly chosen: readonly number[];
}

/**
 * The lasso with equal weights (Tibshirani 1996), beside the adaptive one: same steps, criterion and sample size, so
 * that what the weights do can be seen. Throws what the path and the criterion throw.
 */
export function plainLasso(
  problem: ScreenProblem,
  setting: Pick<ProcedureSetting, "constantParameters" | "sampleSize">,
  options: ScreenOptions,
  refit: Refits,
): PlainLasso {
  const path = lassoPath(problem, new Float64Array(problem.covariates.length).fill(1), options);
  const choice = chooseOnPath(path, setting.constantParameters, setting.sampleSize, options, refit);
  return { path, choice, chosen: path.steps[choice.index].active };
}
