import { bic } from "../survival/criteria.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { chooseOnPath, type PathChoice } from "./choice.ts";
import type { ScreenOptions } from "./options.ts";
import { type LassoPath, lassoPath, solveNull } from "./path.ts";
import { designWith, type ScreenProblem } from "./problem.ts";
import { type Refits, refitsOf } from "./refits.ts";
import { type AdaptiveWeights, adaptiveWeights } from "./weights.ts";
import { chooseByYears, type YearsChoice, type YearsSetting } from "./years.ts";

/** What does not change when years are permuted. */
export interface ProcedureSetting extends YearsSetting {
  readonly sampleSize: number;
}

export interface ProcedureResult {
  readonly weights: AdaptiveWeights;
  readonly path: LassoPath;
  readonly choice: PathChoice;
  /** What the criterion that counts animals chooses. */
  readonly byAnimals: readonly number[];
  readonly byYears: YearsChoice;
  readonly refit: Refits;
}

/**
 * The whole procedure from covariates to the two choices: weights, path, criterion, choice by years. It is what each
 * permutation of years repeats, so nothing in it may look at anything but the problem.
 */
export function runProcedure(
  problem: ScreenProblem,
  setting: ProcedureSetting,
  options: ScreenOptions,
): ProcedureResult {
  const nothing = solveNull(problem, cjsLikelihood(problem.data, designWith(problem)));
  const weights = adaptiveWeights(problem, options.gamma, nothing.x);
  const path = lassoPath(problem, weights.weights, options);
  const refit = refitsOf(problem, nothing.x);
  const choice = chooseOnPath(path, setting.constantParameters, setting.sampleSize, options, (active) =>
    options.fit === "refit" ? refit(active) : Number.NaN,
  );
  const candidates = distinctSets(path);
  return {
    weights,
    path,
    choice,
    byAnimals: path.steps[choice.index].active,
    byYears: chooseByYears(candidates, refit, setting),
    refit,
  };
}

/** The distinct active sets of a path, in the order in which they appear. */
export function distinctSets(path: LassoPath): (readonly number[])[] {
  const sets = new Map<string, readonly number[]>();
  for (const step of path.steps) sets.set(step.active.join(","), step.active);
  return [...sets.values()];
}

/** BIC at a refit, for the small table of candidates. */
export function refitBic(refit: Refits, active: readonly number[], setting: ProcedureSetting): number {
  return bic(refit(active), setting.constantParameters + active.length, setting.sampleSize);
}
