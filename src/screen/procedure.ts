import { mean } from "../math/quantile.ts";
import { fixedSurvivalColumns, survivalContrasts } from "../survival/design.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { maximiseRandomInterval } from "../survival/random-interval.ts";
import { type TwoStep, twoStep } from "../survival/two-step.ts";
import { chooseOnPath, type PathChoice } from "./choice.ts";
import { memoryOf } from "./memory.ts";
import type { ScreenOptions } from "./options.ts";
import { type LassoPath, lassoPath, solveNull } from "./path.ts";
import { designWith, oneValuePerInterval, type ScreenProblem } from "./problem.ts";
import { chooseByRandomIntervals, type RandomYearsChoice } from "./random-years.ts";
import { type Refits, refitsOf } from "./refits.ts";
import {
  type TwoStepProblem,
  twoStepCandidates,
  twoStepEvidence,
  twoStepProblem,
} from "./two-step-candidates.ts";
import { type AdaptiveWeights, adaptiveWeights, ridgeEstimates, weightsFrom } from "./weights.ts";
import { chooseByYears, largestSet, type YearsSetting } from "./years.ts";

/** What does not change when years are permuted. */
export interface ProcedureSetting extends YearsSetting {
  readonly sampleSize: number;
}

/** What can be worked out once for all orders of years: no covariate speaks in it. */
export interface WithoutCovariates {
  readonly two: TwoStep;
  /** D of the empty set by random intervals. */
  readonly evidence: number;
}

/** Undefined where no random effect of the interval is to be had. */
export function withoutCovariates(problem: ScreenProblem): WithoutCovariates | undefined {
  if (!oneValuePerInterval(problem) || problem.covariates.length < 2) return undefined;
  const fit = maximiseRandomInterval(problem, [], PRECISION);
  // one that missed its optimum is to be counted as such every time
  return fit.stopped === "optimum" ? { two: twoStep(problem), evidence: fit.minus2LogL } : undefined;
}

/**
 * How years are counted: by random interval effects; by analysis of deviance where those are not written yet (time since
 * marking, years of split intervals, covariates by stratum) and for a lone candidate, which is not chosen from anything
 * and has that as its published test.
 */
export type YearsRule = "random intervals" | "analysis of deviance";

export interface ProcedureResult {
  readonly weights: AdaptiveWeights;
  readonly path: LassoPath;
  readonly choice: PathChoice;
  /** What the criterion that counts animals chooses. */
  readonly byAnimals: readonly number[];
  /** What stands when years are counted, by the rule named; memory is allowed for with random intervals. */
  readonly yearsBy: YearsRule;
  readonly byYears: RandomYearsChoice;
  /** Random-interval fits of the choice that did not end at an optimum; above 0 it is not to be relied on. */
  readonly unsettled: number;
  readonly refit: Refits;
  /** The sets that were weighed by years. */
  readonly candidates: readonly (readonly number[])[];
}

/**
 * The whole procedure from covariates to the two choices: weights, paths, criterion, choice by years. It is what each
 * permutation of years repeats, so nothing in it may look at anything but the problem.
 */
export function runProcedure(
  problem: ScreenProblem,
  setting: ProcedureSetting,
  options: ScreenOptions,
  known?: WithoutCovariates,
): ProcedureResult {
  const nothing = solveNull(problem, cjsLikelihood(problem.data, designWith(problem)));
  const weights = adaptiveWeights(problem, options.gamma, nothing.x);
  const path = lassoPath(problem, weights.weights, options);
  const refit = refitsOf(problem, nothing.x);
  const choice = chooseOnPath(path, setting.constantParameters, setting.sampleSize, options, (active) =>
    options.fit === "refit" ? refit(active) : Number.NaN,
  );
  // those that ask only what counts animals are spared the other paths and fits
  let made: ChoiceByYears | undefined;
  const years = () => {
    made ??= choiceByYears(problem, setting, options, { weights, path, refit, nothing: nothing.x }, known);
    return made;
  };
  return {
    weights,
    path,
    choice,
    byAnimals: path.steps[choice.index].active,
    refit,
    get yearsBy() {
      return years().yearsBy;
    },
    get byYears() {
      return years().byYears;
    },
    get unsettled() {
      return years().unsettled;
    },
    get candidates() {
      return years().candidates;
    },
  };
}

/** What the other rule that counts years chooses from the same candidates; undefined where there is no other. */
export function secondOpinion(
  problem: ScreenProblem,
  { candidates, refit, yearsBy }: ProcedureResult,
  setting: ProcedureSetting,
): { readonly by: YearsRule; readonly chosen: readonly number[] } | undefined {
  if (!oneValuePerInterval(problem)) return undefined;
  const other =
    yearsBy === "random intervals"
      ? byDeviance(problem, candidates, refit, setting)
      : byRandomIntervals(problem, candidates, twoStepProblem(problem));
  return { by: other.yearsBy, chosen: other.byYears.chosen };
}

/** Share of the releases that a derivative of the evidence may reach: it leaves D(S) exact to some 1e-7. */
const PRECISION = 1e-6;

type Chosen = Pick<ProcedureResult, "yearsBy" | "byYears" | "unsettled">;
type ChoiceByYears = Chosen & Pick<ProcedureResult, "candidates">;

/** Candidates from three paths, and the choice among them by the rule that can be had. */
function choiceByYears(
  problem: ScreenProblem,
  setting: ProcedureSetting,
  options: ScreenOptions,
  first: Pick<ProcedureResult, "weights" | "path" | "refit"> & { readonly nothing: Float64Array },
  known: WithoutCovariates | undefined,
): ChoiceByYears {
  const { weights, path, refit, nothing } = first;
  // With nearly as many covariates as intervals maximum-likelihood weights are noise; ridge weights then lead to better
  // candidates, and so does a path on the interval logits that knows about years; what is weighed may come from any.
  const ridge = weights.by === "ridge" ? weights.first : ridgeEstimates(problem, nothing);
  const most = largestSet(setting.intervals);
  const second =
    weights.by === "ridge"
      ? path
      : lassoPath(problem, weightsFrom(ridge, options.gamma), {
          steps: options.steps,
          downTo: options.downTo,
          most,
        });
  const quick = oneValuePerInterval(problem) ? twoStepProblem(problem, known?.two) : undefined;
  const third = quick === undefined ? [] : twoStepCandidates(quick, options).map((active) => ({ active }));
  const candidates = distinctSets([...path.steps, ...second.steps, ...third]);
  const chosen =
    quick === undefined || problem.covariates.length < 2
      ? byDeviance(problem, candidates, refit, setting)
      : byRandomIntervals(problem, candidates, quick, known?.evidence);
  return { ...chosen, candidates };
}

function byDeviance(
  problem: ScreenProblem,
  candidates: readonly (readonly number[])[],
  refit: Refits,
  setting: ProcedureSetting,
): Chosen {
  const choice = chooseByYears(candidates, refit, setting, correlationOf(problem));
  return { yearsBy: "analysis of deviance", byYears: { ...choice, byMemory: [] }, unsettled: 0 };
}

/** The choice by random interval effects among the candidates (`chooseByRandomIntervals`). */
function byRandomIntervals(
  problem: ScreenProblem,
  candidates: readonly (readonly number[])[],
  quick: TwoStepProblem,
  nothing?: number,
): Chosen {
  let unsettled = 0;
  const byYears = chooseByRandomIntervals(
    candidates,
    (set) => {
      if (set.length === 0 && nothing !== undefined) return nothing;
      const fit = maximiseRandomInterval(problem, set, PRECISION);
      if (fit.stopped !== "optimum") unsettled++;
      return fit.minus2LogL;
    },
    {
      intervals: problem.frame.intervals,
      covariates: problem.covariates.length,
      spent: fixedSurvivalColumns(problem.frame) - survivalContrasts(problem.frame),
    },
    correlationOf(problem),
    memoryOf(problem, quick),
    twoStepEvidence(quick),
  );
  return { yearsBy: "random intervals", byYears, unsettled };
}

/** The distinct active sets among steps, in the order in which they appear. */
function distinctSets(steps: readonly { readonly active: readonly number[] }[]): (readonly number[])[] {
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
