import type { Components } from "../components/result.ts";
import { column } from "../data/matrix.ts";
import { sampleSd } from "../math/quantile.ts";
import type { ScreenOptions } from "../screen/options.ts";
import { solveNull } from "../screen/path.ts";
import { designWith, type ScreenProblem } from "../screen/problem.ts";
import { type ProcedureSetting, runProcedure } from "../screen/procedure.ts";
import { refitsOf } from "../screen/refits.ts";
import type { ScreenResult } from "../screen/screen.ts";
import { bestSmallSubset } from "../screen/subsets.ts";
import { type AnalysisOfDeviance, analysisOfDeviance } from "../survival/analysis-of-deviance.ts";
import { aicc, bic } from "../survival/criteria.ts";
import { type NamedColumn, occasionIntervals } from "../survival/design.ts";
import { type Fit, fitModel, inverseLogit } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { ridgeChoice, ridgeFit } from "./ridge.ts";

export type CandidateKey =
  | "constant"
  | "each interval"
  | "all covariates"
  | "pruned covariates"
  | "chosen by animals"
  | "chosen by years"
  | "best small subset"
  | "ridge"
  | "first component"
  | "components kept"
  | "components screened";

/** One way to model survival, fitted with the same data and recapture part as all the others. */
export interface Candidate {
  readonly key: CandidateKey;
  /** Survival in plain words. */
  readonly words: string;
  /** True where these survival data chose the terms, or how far they are shrunken: then no F and no p of its own may be shown. */
  readonly chosenOnData: boolean;
  readonly fit: Fit;
  readonly deviance: AnalysisOfDeviance;
  readonly aicc: number;
  readonly bic: number;
}

/** Component scores at sd 1, so that the same screen can be run on them. */
export function componentCovariates(components: Components): readonly NamedColumn[] {
  return components.labels.map((name, j) => {
    const scores = column(components.scores, j);
    const sd = sampleSd(scores);
    return { name, values: scores.map((value) => value / sd) };
  });
}

/**
 * The candidates on equal terms (methods §10). Components and pruned covariates were fixed without looking at survival;
 * what the screens chose was not. A candidate that would use up the intervals is left out.
 */
export function buildCandidates(
  problem: ScreenProblem,
  screened: ScreenResult,
  components: Components | undefined,
  pruned: readonly string[],
  options: ScreenOptions,
): readonly Candidate[] {
  const { constantFit, intervalFit, sampleSize } = screened;
  const room = intervalFit.parameters - constantFit.parameters - 2;
  const out: Candidate[] = [];
  const add = (key: CandidateKey, fit: Fit, chosenOnData: boolean, words = fit.survivalWords) =>
    out.push({
      key,
      words,
      chosenOnData,
      fit,
      deviance: analysisOfDeviance(constantFit, fit, intervalFit),
      aicc: aicc(fit.minus2LogL, fit.parameters, sampleSize),
      bic: bic(fit.minus2LogL, fit.parameters, sampleSize),
    });
  add("constant", constantFit, false);
  add("each interval", intervalFit, false);
  const names = problem.covariates.map((one) => one.name);
  const fitOf = (which: readonly number[]) => fitModel(problem.data, designWith(problem, which));
  if (names.length <= room) add("all covariates", fitOf(names.map((_, k) => k)), false);
  if (pruned.length <= room && pruned.length < names.length)
    add("pruned covariates", fitOf(pruned.map((name) => names.indexOf(name))), false);
  add("chosen by animals", screened.byAnimals.fit, true);
  add("chosen by years", screened.byYears.fit, true);
  const setting: ProcedureSetting = {
    intervals: occasionIntervals(problem.frame),
    covariates: names.length,
    interval: { minus2LogL: intervalFit.minus2LogL, parameters: intervalFit.parameters },
    constantParameters: constantFit.parameters,
    sampleSize,
  };
  const nothing = solveNull(problem, cjsLikelihood(problem.data, designWith(problem)));
  const subset = bestSmallSubset(refitsOf(problem, nothing.x), setting, options);
  if (subset !== undefined) add("best small subset", fitOf(subset.set), true);
  // one covariate has nothing to share with another, and room for one term leaves no strength to choose
  if (names.length >= 2 && room >= 2) {
    const ridge = ridgeChoice(screened.ridge, options, sampleSize);
    const full = designWith(problem);
    const rows = problem.frame.strata.length * problem.frame.intervals;
    add(
      "ridge",
      ridgeFit(
        ridge,
        inverseLogit(full.survival.columns, ridge.estimates, rows),
        constantFit,
        full.survival.names,
      ),
      true,
    );
  }
  if (components === undefined) return out;

  const scores: ScreenProblem = { ...problem, covariates: componentCovariates(components) };
  const fitScores = (which: readonly number[]) => fitModel(problem.data, designWith(scores, which));
  const kept = Array.from({ length: components.kept }, (_, j) => j);
  if (components.labels.length > 0) add("first component", fitScores([0]), false);
  if (kept.length > 0 && kept.length <= room) add("components kept", fitScores(kept), false);
  if (scores.covariates.length > 0)
    add(
      "components screened",
      fitScores(
        runProcedure(scores, { ...setting, covariates: scores.covariates.length }, options).byAnimals,
      ),
      true,
    );
  return out;
}
