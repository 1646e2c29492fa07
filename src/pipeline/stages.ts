import { diagnose } from "../collinearity/diagnose.ts";
import type { Diagnosis } from "../collinearity/result.ts";
import { type Comparison, compare, FOLD_TASK, foldChunks } from "../compare/compare.ts";
import type { Fold, FoldChunk } from "../compare/fold.ts";
import { groupsOf, reduceColumns } from "../components/reduce.ts";
import type { Components } from "../components/result.ts";
import type { CovariateMatrix } from "../covariates/result.ts";
import { yearIndex } from "../covariates/time.ts";
import type { RawFinding } from "../data/finding.ts";
import { type Matrix, pickColumns } from "../data/matrix.ts";
import type { Effects } from "../effects/effects.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Spec } from "../spec/spec.ts";
import { goodnessFindings } from "../survival/goodness-findings.ts";
import { type GoodnessOfFit, goodnessOfFit } from "../survival/goodness-of-fit.ts";
import type { Ingested } from "./ingest.ts";
import { candidateColumns, type Posed } from "./survival-problem.ts";

/** With fewer intervals no correlation, inflation or component means anything. */
const LEAST_INTERVALS = 3;

/** The columns after transform and detrending but in their own units: centre + scale · standardised value. */
function beforeStandardising({ standard, recipes }: CovariateMatrix): Matrix {
  const data = standard.data.map((value, at) => {
    const { centre, scale } = recipes[at % standard.columns];
    return centre + scale * value;
  });
  return { ...standard, data };
}

/** Which covariates tell the same story, those the user decided to drop included. */
export function diagnoseStage(
  spec: Spec,
  found: Ingested,
  matrix: CovariateMatrix,
): { readonly diagnosis: Diagnosis | undefined; readonly findings: readonly RawFinding[] } {
  if (matrix.names.length === 0 || found.intervals.length < LEAST_INTERVALS)
    return { diagnosis: undefined, findings: [] };
  return diagnose(matrix.standard, matrix.names, spec.collinearity, {
    time: yearIndex(found.intervals),
    uncentred: beforeStandardising(matrix),
  });
}

/** Components of the candidates; undefined for fewer than two. */
export function reduceStage(spec: Spec, found: Ingested, matrix: CovariateMatrix): Components | undefined {
  const candidates = candidateColumns(spec, matrix);
  if (candidates.length < 2 || found.intervals.length < LEAST_INTERVALS) return undefined;
  return reduceColumns(
    pickColumns(matrix.standard, candidates),
    candidates.map((k) => matrix.names[k]),
    candidateGroups(spec, matrix),
    spec.components,
    spec.seed,
  );
}

/** The group of each candidate within which components are made; undefined where all are taken together. */
function candidateGroups(spec: Spec, matrix: CovariateMatrix): readonly string[] | undefined {
  const candidates = candidateColumns(spec, matrix);
  return groupsOf(
    candidates.map((k) => matrix.names[k]),
    candidates.map((k) => matrix.recipes[k].theme),
    spec.components.within,
  );
}

/** Whether the general model fits the histories; undefined without captures. */
export function goodnessStage({ captures }: Ingested): {
  readonly goodness: GoodnessOfFit | undefined;
  readonly findings: readonly RawFinding[];
} {
  if (captures === undefined) return { goodness: undefined, findings: [] };
  const goodness = goodnessOfFit(captures.counts, captures.histories);
  return { goodness, findings: goodnessFindings(goodness) };
}

/**
 * ĉ between animals for the criteria (methods §7): of the sum of all components, or without transience where the models
 * have time since marking; left out where the captures cannot give it.
 */
export function inflationOf(
  spec: Spec,
  goodness: GoodnessOfFit | undefined,
): Pick<ScreenOptions, "betweenAnimals"> {
  const marking = spec.survival.sinceMarking === "first interval apart";
  const overall = goodness?.overall;
  const value = marking ? overall?.betweenAnimalsAfterMarking : overall?.betweenAnimals;
  return value === undefined || Number.isNaN(value) ? {} : { betweenAnimals: value };
}

/** Selection beside components, on the data and the recapture part of the screen. */
export async function compareStage(
  spec: Spec,
  posed: Posed,
  screened: ScreenResult,
  components: Components | undefined,
  diagnosis: Diagnosis | undefined,
  matrix: CovariateMatrix,
  effects: Pick<Effects, "parallel" | "progress">,
): Promise<Comparison> {
  const names = posed.problem.covariates.map((one) => one.name);
  const kept = diagnosis?.kept ?? names;
  const apart = new Set(matrix.byStratum?.map((one) => one.recipe.name));
  const pruned = names.filter((name) => apart.has(name) || kept.includes(name));
  const chunks = foldChunks(posed.problem, screened, screened.options, {
    collinearity: spec.collinearity,
    components:
      components === undefined
        ? undefined
        : { keep: spec.components.keep, groups: candidateGroups(spec, matrix) },
    seed: spec.seed,
  });
  const step = effects.progress.start("leaving one interval out", chunks.length);
  const folds = await effects.parallel.map<FoldChunk, readonly Fold[]>(FOLD_TASK, chunks, step);
  step.done();
  return compare(posed.problem, screened, components, pruned, screened.options, folds.flat());
}
