import {
  fitRandomInterval,
  maximiseRandomInterval,
  type RandomIntervalCoefficient,
} from "../survival/random-interval.ts";
import { memoryOf } from "./memory.ts";
import type { ScreenProblem } from "./problem.ts";
import { correlationOf } from "./procedure.ts";
import { chooseByRandomIntervals } from "./random-years.ts";
import { twoStepProblem } from "./two-step-candidates.ts";

/** What a model with a random effect of each interval says of the choice by years. */
export interface RandomIntervalEvidence {
  /** σ of the interval effects by REML, without covariates and with those chosen by years; on the logit scale. */
  readonly sigmaWithout: number;
  readonly sigma: number;
  /** 1 − σ²/σ²_without: the share of the variance between years that they account for; NaN if there is none. */
  readonly explained: number;
  /** Effects of the covariates chosen by years, per sd, with t intervals that allow for variation between years. */
  readonly effects: readonly RandomIntervalCoefficient[];
  /** What the rule by random intervals chooses from the same candidates. */
  readonly chosen: readonly string[];
  /** Terms it let go because covariate and survival both remember from year to year. */
  readonly byMemory: readonly string[];
  /** False if a fit did not reach its optimum: then none of this is to be relied on. */
  readonly settled: boolean;
}

/**
 * A second opinion on the choice by years: the random-interval model of the chosen set, and the choice that the rule by
 * random intervals makes from the same candidate sets, memory from year to year allowed for.
 */
export function randomIntervalEvidence(
  problem: ScreenProblem,
  candidates: readonly (readonly number[])[],
  byYears: readonly number[],
): RandomIntervalEvidence {
  const without = fitRandomInterval(problem, []);
  const withChosen = byYears.length === 0 ? without : fitRandomInterval(problem, byYears);
  const names = problem.covariates.map((one) => one.name);
  const chosenNames = byYears.map((k) => names[k]);
  const second = chooseByRandomIntervals(
    candidates,
    (set) => maximiseRandomInterval(problem, set).minus2LogL,
    {
      intervals: problem.frame.intervals,
      covariates: problem.covariates.length,
      spent: 1 + problem.frame.forced.length,
    },
    correlationOf(problem),
    memoryOf(problem, twoStepProblem(problem)),
  );
  const variance = without.sigmaReml ** 2;
  return {
    sigmaWithout: without.sigmaReml,
    sigma: withChosen.sigmaReml,
    explained: variance > 0 ? 1 - withChosen.sigmaReml ** 2 / variance : Number.NaN,
    effects: withChosen.coefficients.filter((one) => chosenNames.includes(one.name)),
    chosen: second.chosen.map((k) => names[k]),
    byMemory: second.byMemory.map((k) => names[k]),
    settled: without.stopped === "optimum" && withChosen.stopped === "optimum",
  };
}
