import { diagnose } from "../collinearity/diagnose.ts";
import { type Comparison, compare } from "../compare/compare.ts";
import { principalComponents } from "../components/components.ts";
import type { Components } from "../components/result.ts";
import type { CovariateMatrix } from "../covariates/result.ts";
import { yearIndex } from "../covariates/time.ts";
import type { Finding, RawFinding } from "../data/finding.ts";
import { type Matrix, pickColumns } from "../data/matrix.ts";
import type { Effects } from "../effects/effects.ts";
import { randomStream } from "../math/random.ts";
import { screen } from "../screen/screen.ts";
import { goodnessFindings } from "../survival/goodness-findings.ts";
import { goodnessOfFit } from "../survival/goodness-of-fit.ts";
import type { StudyResult } from "../tables/study-result.ts";
import { buildCovariates, type CovariateSet } from "./covariates.ts";
import { type Ingested, ingest } from "./ingest.ts";
import type { Loaded } from "./load.ts";
import { judge, stopIfAsked } from "./policy.ts";
import { candidateColumns, poseScreen } from "./survival-problem.ts";

/** The columns after transform and detrending but in their own units: centre + scale · standardised value. */
function beforeStandardising({ standard, recipes }: CovariateMatrix): Matrix {
  const data = standard.data.map((value, at) => {
    const { centre, scale } = recipes[at % standard.columns];
    return centre + scale * value;
  });
  return { ...standard, data };
}

/** How far a run goes. Each stage includes those before it. */
export const STAGES = ["ingest", "aggregate", "diagnose", "reduce", "screen", "compare"] as const;
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
  const findings: Finding[] = [];
  const judged = (found: readonly RawFinding[]) => {
    const next = judge(found, spec.findings);
    findings.push(...next);
    stopIfAsked(next);
  };
  const goes = (stage: Stage) => STAGES.indexOf(stage) <= STAGES.indexOf(through);

  const ingested = await ingest(spec, effects);
  judged(ingested.findings);

  const set = buildCovariates(loaded, ingested);
  judged(set.findings);
  const { matrix } = set;
  const candidates = candidateColumns(spec, matrix);

  const time = yearIndex(ingested.intervals);
  const enough = matrix.names.length > 0 && ingested.intervals.length >= 3;
  const diagnosed =
    goes("diagnose") && enough
      ? diagnose(matrix.standard, matrix.names, spec.collinearity, {
          time,
          uncentred: beforeStandardising(matrix),
        })
      : undefined;
  judged(diagnosed?.findings ?? []);

  const components: Components | undefined =
    goes("reduce") && candidates.length > 1 && ingested.intervals.length >= 3
      ? principalComponents(
          pickColumns(matrix.standard, candidates),
          candidates.map((k) => matrix.names[k]),
          spec.components.keep,
          randomStream(spec.seed, "components", 0),
        )
      : undefined;

  const { captures } = ingested;
  const goodness =
    goes("screen") && captures !== undefined ? goodnessOfFit(captures.counts, captures.histories) : undefined;
  judged(goodness === undefined ? [] : goodnessFindings(goodness));

  effects.checkInterrupted();
  const posed = goes("screen") ? poseScreen(spec, ingested, matrix) : undefined;
  const animals = ingested.captures?.animals ?? Number.NaN;
  const screened =
    posed === undefined
      ? undefined
      : await screen(posed.problem, posed.recapture, spec.screen, animals, spec.seed, effects);
  judged(screened?.findings ?? []);

  const kept = new Set(diagnosed?.diagnosis.kept ?? matrix.names);
  const pruned = candidates.map((k) => matrix.names[k]).filter((name) => kept.has(name));
  const comparison: Comparison | undefined =
    posed !== undefined && screened !== undefined && goes("compare")
      ? compare(posed.problem, screened.result, components, pruned, spec.screen)
      : undefined;

  return {
    study: {
      occasions: ingested.occasions,
      intervals: ingested.intervals,
      caught: ingested.captures?.perOccasion ?? [],
      covariates: set.covariates,
      matrix,
      leftOut: set.leftOut,
      diagnosis: diagnosed?.diagnosis,
      components,
      goodness,
      screened: screened?.result,
      comparison,
      findings,
    },
    ingested,
    set,
  };
}
