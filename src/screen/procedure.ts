import { mean } from "../math/quantile.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { chooseOnPath, type PathChoice } from "./choice.ts";
import type { ScreenOptions } from "./options.ts";
import { type LassoPath, lassoPath, solveNull } from "./path.ts";
import { designWith, type ScreenProblem } from "./problem.ts";
import { type Refits, refitsOf } from "./refits.ts";
import { type AdaptiveWeights, adaptiveWeights, ridgeEstimates, weightsFrom } from "./weights.ts";
import { chooseByYears, largestSet, type YearsChoice, type YearsSetting } from "./years.ts";

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
  /** The sets that were weighed by years. */
  readonly candidates: readonly (readonly number[])[];
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
  // With nearly as many covariates as intervals maximum-likelihood weights are noise; ridge weights then lead to better
  // candidates, and what is weighed by years may come from either path.
  const ridge = weights.by === "ridge" ? weights.first : ridgeEstimates(problem, nothing.x);
  const most = largestSet(setting.intervals);
  const second =
    weights.by === "ridge"
      ? path
      : lassoPath(problem, weightsFrom(ridge, options.gamma), {
          steps: options.steps,
          downTo: options.downTo,
          most,
        });
  const candidates = distinctSets([...path.steps, ...second.steps]);
  return {
    weights,
    path,
    choice,
    byAnimals: path.steps[choice.index].active,
    byYears: chooseByYears(candidates, refit, setting, correlationOf(problem)),
    refit,
    candidates,
  };
}

/** The distinct active sets among steps, in the order in which they appear. */
function distinctSets(steps: LassoPath["steps"]): (readonly number[])[] {
  const sets = new Map<string, readonly number[]>();
  for (const step of steps) sets.set(step.active.join(","), step.active);
  return [...sets.values()];
}

/** Pearson correlation of two covariates over the intervals. */
export function correlationOf({ covariates }: ScreenProblem): (a: number, b: number) => number {
  return (a, b) => {
    const [x, y] = [covariates[a].values, covariates[b].values];
    const [mx, my] = [mean(x), mean(y)];
    let [xy, xx, yy] = [0, 0, 0];
    for (let t = 0; t < x.length; t++) {
      xy += (x[t] - mx) * (y[t] - my);
      xx += (x[t] - mx) ** 2;
      yy += (y[t] - my) ** 2;
    }
    return xy / Math.sqrt(xx * yy);
  };
}
