import type { Window } from "../aggregate/options.ts";
import {
  type Analysis,
  failedAnalysis,
  type PosedAnalysis,
  poseAnalysis,
  runAnalysis,
  type Sensitivity,
  summariseSensitivity,
} from "../compare/sensitivity.ts";
import { prepareCovariates } from "../covariates/prepare.ts";
import type { CovariateMatrix } from "../covariates/result.ts";
import type { Effects } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { PermutationChunk, PermutationOutcome } from "../screen/permutation.ts";
import { PERMUTATION_TASK } from "../screen/screen.ts";
import type { Alternative, CovariateSpec, Spec } from "../spec/spec.ts";
import { type CovariateSet, makeCovariates, prepareMade } from "./covariates.ts";
import type { Ingested } from "./ingest.ts";
import type { Loaded } from "./load.ts";
import { poseScreen } from "./survival-problem.ts";

/** Replicates a worker takes at a time. */
const CHUNK = 10;

/**
 * The study as it stands and every stated alternative: covariates made again where their window or statistic changes,
 * everything prepared, posed and screened again, and the permutation of years wrapped around all of them together.
 * Undefined where the pipeline states no alternatives or has no captures.
 */
export async function sensitivityStage(
  loaded: Loaded,
  found: Ingested,
  set: CovariateSet,
  effects: Pick<Effects, "parallel" | "progress" | "checkInterrupted">,
): Promise<Sensitivity | undefined> {
  const { spec } = loaded;
  if (spec.sensitivity === undefined || found.captures === undefined) return undefined;
  const { alternatives, permutations } = spec.sensitivity;
  const { animals } = found.captures;
  const analyses: Analysis[] = [];
  const posed: PosedAnalysis[] = [];
  const run = (name: string, changes: string, own: Spec, matrix: CovariateMatrix) => {
    const screened = poseScreen(own, found, matrix);
    if (screened === undefined) return;
    const { problem, recapture } = screened;
    const one = poseAnalysis(problem, recapture, own.screen, animals);
    analyses.push(runAnalysis(one, { name, changes, recapture: recapture.chosen }));
    posed.push(one);
  };
  const step = effects.progress.start("other ways to do the study", alternatives.length + 1);
  run("the study as it stands", "", spec, set.matrix);
  step.tick();
  for (const alternative of alternatives) {
    effects.checkInterrupted();
    const own = changedSpec(spec, alternative);
    try {
      const { matrix, leftOut } = changedSet({ ...loaded, spec: own }, found, set, alternative);
      const gone = leftOut
        .filter(({ name }) => !set.leftOut.some((before) => before.name === name))
        .map(({ name }) => `${name} left out for missing values`);
      run(alternative.name, [changeWords(alternative, own, matrix), ...gone].join("; "), own, matrix);
    } catch (error) {
      // an alternative that these data cannot be put through is told of, and does not take the study with it
      if (!(error instanceof InputError)) throw error;
      const { expected, found: seen } = error.facts;
      analyses.push(
        failedAnalysis(
          alternative.name,
          changeWords(alternative, own, set.matrix),
          `expected ${expected}, found ${seen}`,
        ),
      );
    }
    step.tick();
  }
  step.done();
  return summariseSensitivity(analyses, await permuted(posed, permutations, spec.seed, effects));
}

/** For each analysis the outcomes of the same orders of years. */
async function permuted(
  posed: readonly PosedAnalysis[],
  permutations: number,
  seed: number,
  effects: Pick<Effects, "parallel" | "progress">,
): Promise<readonly (readonly PermutationOutcome[])[]> {
  if (permutations === 0) return [];
  const cuts = Array.from({ length: Math.ceil(permutations / CHUNK) }, (_, i) => i * CHUNK);
  const chunks = posed.flatMap((one) =>
    cuts.map((from): PermutationChunk => ({ ...one, seed, from, to: Math.min(from + CHUNK, permutations) })),
  );
  const step = effects.progress.start("permuting years over all of them", chunks.length);
  const parts = await effects.parallel.map<PermutationChunk, readonly PermutationOutcome[]>(
    PERMUTATION_TASK,
    chunks,
    step,
  );
  step.done();
  return posed.map((_, a) => parts.slice(a * cuts.length, (a + 1) * cuts.length).flat());
}

/** The spec with what the alternative changes. */
export function changedSpec(spec: Spec, alternative: Alternative): Spec {
  const { of, standardise, detrend, chooseBy, sampleSize, recapture, yearTrend } = alternative;
  // covariates that recapture was to go by do not go with another recapture part
  const { recaptureCovariates: _, ...rest } = spec;
  return {
    ...(recapture === undefined ? spec : rest),
    covariates: spec.covariates.map((one) => (one.name === of ? changedCovariate(one, alternative) : one)),
    prepare: {
      ...spec.prepare,
      ...(standardise === undefined ? {} : { standardise }),
      ...(detrend === undefined ? {} : { detrend }),
    },
    survival: { ...spec.survival, ...(yearTrend === undefined ? {} : { yearTrend }) },
    screen: {
      ...spec.screen,
      ...(chooseBy === undefined ? {} : { chooseBy }),
      ...(sampleSize === undefined ? {} : { sampleSize }),
    },
    ...(recapture === undefined ? {} : { recapture }),
  };
}

function changedCovariate(one: CovariateSpec, { window, lag, statistic }: Alternative): CovariateSpec {
  if (one.source === "ready-made") return one;
  const changed: Window = window ?? one.window;
  return {
    ...one,
    window: lag === undefined ? changed : { ...changed, lag },
    statistic: statistic ?? one.statistic,
  };
}

/** The matrix of an alternative; covariates that did not change are not made again. */
function changedSet(
  loaded: Loaded,
  found: Ingested,
  set: CovariateSet,
  { of }: Alternative,
): Pick<CovariateSet, "matrix" | "leftOut"> {
  const { spec } = loaded;
  // a base period needs the base years of every covariate
  if (spec.prepare.standardise.type === "base")
    return prepareMade(
      loaded,
      found,
      makeCovariates(loaded, found, () => true),
    );
  const made = makeCovariates(loaded, found, (one) => one.name === of);
  const covariates = set.covariates.map(
    (one) => made.find(({ covariate }) => covariate.name === one.name)?.covariate ?? one,
  );
  return prepareCovariates(covariates, found.intervals, spec.prepare);
}

/** What an alternative changes, in words. */
function changeWords(alternative: Alternative, spec: Spec, matrix: CovariateMatrix): string {
  const { of, standardise, detrend, chooseBy, sampleSize, recapture, yearTrend } = alternative;
  const recipe = matrix.recipes.find((one) => one.name === of);
  const words: (string | undefined)[] = [
    of === undefined ? undefined : `${of}: ${recipe?.definition ?? "changed"}`,
    standardise === undefined
      ? undefined
      : `standardised by ${standardise.type === "base" ? `${standardise.from} to ${standardise.to}` : standardise.type}`,
    detrend === undefined ? undefined : `detrended: ${detrend}`,
    chooseBy === undefined ? undefined : `criterion ${chooseBy}`,
    sampleSize === undefined ? undefined : `counting ${sampleSize}`,
    recapture === undefined ? undefined : `recapture: ${spec.recapture}`,
    yearTrend === undefined ? undefined : yearTrend ? "with a year trend" : "without a year trend",
  ];
  return words.filter((one) => one !== undefined).join("; ");
}
