import { withSensitivity } from "../compare/compare.ts";
import type { Finding, RawFinding } from "../data/finding.ts";
import type { Effects } from "../effects/effects.ts";
import { screen } from "../screen/screen.ts";
import { resample } from "../simulate/resampling.ts";
import type { StudyResult } from "../tables/study-result.ts";
import { buildCovariates, type CovariateSet } from "./covariates.ts";
import { type Ingested, ingest } from "./ingest.ts";
import { stageIngredients } from "./ingredients.ts";
import type { Loaded } from "./load.ts";
import { judge, stopIfAsked } from "./policy.ts";
import { type Steps, withoutReuse } from "./reuse/steps.ts";
import { sensitivityStage } from "./sensitivity.ts";
import { compareStage, diagnoseStage, goodnessStage, inflationOf, reduceStage } from "./stages.ts";
import { type Posed, poseScreen } from "./survival-problem.ts";

/** How far a run goes. Each stage includes those before it; reading is part of the first. */
export const STAGES = ["aggregate", "diagnose", "reduce", "screen", "compare"] as const;
export type Stage = (typeof STAGES)[number];

export interface RunResult {
  readonly study: StudyResult;
  readonly ingested: Ingested;
  readonly set: CovariateSet;
}

/**
 * The stages in order: ingest → aggregate and prepare → diagnose → reduce → screen → compare. Each is a pure function
 * of what came before; effects are handed to those that read files or share work out. Findings are judged by the
 * pipeline's policy after each stage, so that a stop comes before the work that would rest on it. `steps` may hand back
 * the kept result of an earlier run in place of a stage whose ingredients have not changed.
 */
export async function runStages(
  loaded: Loaded,
  effects: Effects,
  through: Stage = "compare",
  steps: Steps = withoutReuse(),
): Promise<RunResult> {
  const { spec } = loaded;
  const goes = (stage: Stage) => STAGES.indexOf(stage) <= STAGES.indexOf(through);
  const findings: Finding[] = [];
  const judged = <Result extends { readonly findings: readonly RawFinding[] }>(result: Result): Result => {
    const next = judge(result.findings, spec.findings);
    findings.push(...next);
    stopIfAsked(next);
    effects.checkInterrupted();
    return result;
  };

  const ingested = judged(await ingest(spec, effects, true, steps));
  const set = judged(await buildCovariates(loaded, ingested, steps));
  const { matrix } = set;
  const from = stageIngredients(spec, ingested, matrix);
  const diagnosis = goes("diagnose")
    ? judged(await steps.once("diagnose", from.diagnose, () => diagnoseStage(spec, ingested, matrix)))
        .diagnosis
    : undefined;
  const components = goes("reduce")
    ? await steps.once("reduce", from.reduce, () => reduceStage(spec, ingested, matrix))
    : undefined;
  const goodness = goes("screen")
    ? judged(await steps.once("goodness of fit", from.goodness, () => goodnessStage(ingested))).goodness
    : undefined;
  const posed = goes("screen")
    ? await steps.once("recapture", from.recapture, () => poseScreen(spec, ingested, matrix))
    : undefined;
  const animals = ingested.captures?.animals ?? Number.NaN;
  const criterion = { ...spec.screen, ...inflationOf(spec, goodness) };
  const screenNow = ({ problem, recapture }: Posed) =>
    screen(problem, recapture, criterion, animals, spec.seed, effects);
  const screened =
    posed &&
    judged(
      await steps.once(
        "screen",
        () => from.screen(posed, criterion),
        () => screenNow(posed),
      ),
    ).result;
  const resampling =
    posed &&
    screened &&
    (await steps.once(
      "resampling",
      () => from.resampling(posed, screened, criterion),
      () => resample(posed.problem, screened, criterion, spec.seed, effects),
    ));
  const compared =
    posed && screened && goes("compare")
      ? await steps.once(
          "compare",
          () => from.compare(posed, screened, components, diagnosis),
          () => compareStage(spec, posed, screened, components, diagnosis, matrix, effects),
        )
      : undefined;

  const asked = { ...loaded, spec: { ...spec, screen: criterion } };
  const comparison =
    compared &&
    withSensitivity(
      compared,
      await steps.once(
        "sensitivity",
        () => from.sensitivity(criterion, set),
        () => sensitivityStage(asked, ingested, set, effects),
      ),
    );

  const study: StudyResult = {
    occasions: ingested.occasions,
    intervals: ingested.intervals,
    caught: ingested.captures?.perOccasion ?? [],
    covariates: set.covariates,
    matrix,
    leftOut: set.leftOut,
    diagnosis,
    components,
    goodness,
    screened,
    resampling,
    comparison,
    findings,
    refusals: ingested.refusals,
  };
  return { study, ingested, set };
}
