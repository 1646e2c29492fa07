import type { Components } from "../components/result.ts";
import type { ScreenOptions } from "../screen/options.ts";
import { oneValuePerInterval, type ScreenProblem } from "../screen/problem.ts";
import type { ProcedureSetting } from "../screen/procedure.ts";
import type { ScreenResult } from "../screen/screen.ts";
import { twoStep } from "../survival/two-step.ts";
import { type Agreement, agreement } from "./agreement.ts";
import { buildCandidates, type Candidate } from "./candidates.ts";
import type { Fold, FoldChunk, FoldRules } from "./fold.ts";
import { CAUTION, paragraph } from "./paragraph.ts";
import { type Prediction, scorePredictions } from "./prediction.ts";
import type { Sensitivity } from "./sensitivity.ts";
import { type Verdict, verdict } from "./verdict.ts";

export interface Comparison {
  readonly candidates: readonly Candidate[];
  readonly agreement: Agreement;
  readonly verdict: Verdict;
  /** Intervals left out one at a time; undefined where that was not done. */
  readonly prediction: Prediction | undefined;
  /** Other ways to do the study; undefined where none were stated. */
  readonly sensitivity?: Sensitivity | undefined;
  /** All of it in one paragraph. */
  readonly paragraph: string;
}

/** The task name under which workers know `predictLeftOut`. */
export const FOLD_TASK = "compare.folds";

/** With fewer intervals a fold has nothing left to choose from. */
const LEAST_INTERVALS = 6;

/** Selection against components on the same data, recapture part and criterion. */
export function compare(
  problem: ScreenProblem,
  screened: ScreenResult,
  components: Components | undefined,
  pruned: readonly string[],
  options: ScreenOptions,
  folds: readonly Fold[] = [],
): Comparison {
  const candidates = buildCandidates(problem, screened, components, pruned, options);
  const agreed = agreement(problem, screened, candidates, components);
  const said = verdict(screened, agreed);
  const prediction =
    folds.length === 0 ? undefined : scorePredictions(folds, twoStep(problem), problem.frame.lengths);
  return {
    candidates,
    agreement: agreed,
    verdict: said,
    prediction,
    paragraph: paragraph(screened, candidates, agreed, said, prediction),
  };
}

/** The comparison with its sensitivity, which the paragraph tells before its caution. */
export function withSensitivity(comparison: Comparison, sensitivity: Sensitivity | undefined): Comparison {
  if (sensitivity === undefined) return comparison;
  const { sentence } = sensitivity;
  const told = comparison.paragraph.replace(CAUTION, () =>
    sentence === "" ? CAUTION : `${sentence} ${CAUTION}`,
  );
  return { ...comparison, sensitivity, paragraph: told };
}

/**
 * The folds of the prediction, one interval each, ready to be shared out to workers under `FOLD_TASK`; none where there are
 * too few intervals or no candidates, or where an interval has more than one survival (time since marking, split years).
 */
export function foldChunks(
  problem: ScreenProblem,
  screened: ScreenResult,
  options: ScreenOptions,
  rules: FoldRules,
): readonly FoldChunk[] {
  const { intervals } = problem.frame;
  if (intervals < LEAST_INTERVALS || problem.covariates.length === 0 || !oneValuePerInterval(problem))
    return [];
  const { intervalFit, constantFit, sampleSize } = screened;
  const setting: ProcedureSetting = {
    intervals,
    covariates: problem.covariates.length,
    interval: { minus2LogL: intervalFit.minus2LogL, parameters: intervalFit.parameters },
    constantParameters: constantFit.parameters,
    sampleSize,
  };
  const two = twoStep(problem);
  return Array.from({ length: intervals }, (_, t) => ({
    problem,
    setting,
    options,
    rules,
    two,
    intervals: [t],
  }));
}
