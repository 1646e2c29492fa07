import { withSensitivity } from "../compare/compare.ts";
import type { Finding, RawFinding } from "../data/finding.ts";
import type { Effects } from "../effects/effects.ts";
import { screen } from "../screen/screen.ts";
import { resample } from "../simulate/resampling.ts";
import type { StudyResult } from "../tables/study-result.ts";
import { buildCovariates, type CovariateSet } from "./covariates.ts";
import { type Ingested, ingest } from "./ingest.ts";
import type { Loaded } from "./load.ts";
import { judge, stopIfAsked } from "./policy.ts";
import { sensitivityStage } from "./sensitivity.ts";
import { compareStage, diagnoseStage, goodnessStage, inflationOf, reduceStage } from "./stages.ts";
import { poseScreen } from "./survival-problem.ts";

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
 * pipeline's policy after each stage, so that a stop comes before the work that would rest on it.
 */
export async function runStages(
  loaded: Loaded,
  effects: Effects,
  through: Stage = "compare",
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

  const ingested = judged(await ingest(spec, effects));
  const set = judged(buildCovariates(loaded, ingested));
  const { matrix } = set;
  const diagnosis = goes("diagnose") ? judged(diagnoseStage(spec, ingested, matrix)).diagnosis : undefined;
  const components = goes("reduce") ? reduceStage(spec, ingested, matrix) : undefined;
  const goodness = goes("screen") ? judged(goodnessStage(ingested)).goodness : undefined;
  const posed = goes("screen") ? poseScreen(spec, ingested, matrix) : undefined;
  const animals = ingested.captures?.animals ?? Number.NaN;
  const criterion = { ...spec.screen, ...inflationOf(spec, goodness) };
  const screened =
    posed &&
    judged(await screen(posed.problem, posed.recapture, criterion, animals, spec.seed, effects)).result;
  const resampling =
    posed && screened && (await resample(posed.problem, screened, criterion, spec.seed, effects));
  const compared =
    posed && screened && goes("compare")
      ? await compareStage(spec, posed, screened, components, diagnosis, matrix, effects)
      : undefined;

  const comparison =
    compared &&
    withSensitivity(
      compared,
      await sensitivityStage({ ...loaded, spec: { ...spec, screen: criterion } }, ingested, set, effects),
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
