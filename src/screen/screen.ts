import type { RawFinding } from "../data/finding.ts";
import type { Effects } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { randomStream } from "../math/random.ts";
import { type AnalysisOfDeviance, analysisOfDeviance } from "../survival/analysis-of-deviance.ts";
import { fixedSurvivalColumns, occasionIntervals } from "../survival/design.ts";
import { type Fit, fitModel, totalReleases } from "../survival/fit.ts";
import { type PredictedCurve, predictedSurvival } from "../survival/predict.ts";
import { type ProfileInterval, profileInterval } from "../survival/profile-interval.ts";
import type { RecaptureComparison } from "../survival/recapture-choice.ts";
import { survivalAlong } from "./along.ts";
import { chooseOnPath, type PathChoice } from "./choice.ts";
import { type InfluenceRow, leaveOneIntervalOut } from "./influence.ts";
import type { ScreenOptions } from "./options.ts";
import type { LassoPath } from "./path.ts";
import {
  type PermutationOutcome,
  type PermutationResult,
  type permuteYears,
  shiftYears,
  summarisePermutations,
} from "./permutation.ts";
import { type PlainLasso, plainLasso } from "./plain-lasso.ts";
import { designWith, type ScreenProblem } from "./problem.ts";
import { type ProcedureSetting, runProcedure, secondOpinion, type YearsRule } from "./procedure.ts";
import { type RandomIntervalEvidence, randomIntervalEvidence } from "./random-intervals.ts";
import type { RandomYearsChoice } from "./random-years.ts";
import { type RidgePath, ridgePath } from "./ridge-path.ts";
import { agreeingStarts, type StartsReport } from "./starts.ts";
import type { AdaptiveWeights } from "./weights.ts";

/** A set of covariates, refitted without penalty. */
export interface RefittedSet {
  readonly names: readonly string[];
  readonly fit: Fit;
  /** R²_dev and ĉ between years; F and p of a set that was chosen on these data are not to be shown. */
  readonly deviance: AnalysisOfDeviance;
  /** Of the forced covariates and those of the set, in that order; they take the choice as made before looking. */
  readonly profiles: readonly ProfileInterval[];
  readonly predicted: readonly PredictedCurve[];
}

export interface ScreenResult {
  readonly options: ScreenOptions;
  readonly names: readonly string[];
  /** Intervals between occasions, and the parts with a survival of their own: as many, or more where some are split into years. */
  readonly intervals: { readonly between: number; readonly parts: number };
  readonly sampleSize: number;
  readonly releases: number;
  readonly constantFit: Fit;
  readonly intervalFit: Fit;
  readonly recapture: RecaptureComparison;
  readonly weights: AdaptiveWeights;
  readonly path: LassoPath;
  readonly choice: PathChoice;
  /** Apparent annual survival at each step of the path (see `survivalAlong`). */
  readonly survivalAlong: readonly Float64Array[];
  /** Equal weights beside the adaptive ones, and ridge beside both: for comparison, no verdict rests on them. */
  readonly plain: PlainLasso;
  readonly ridge: RidgePath;
  readonly starts: StartsReport;
  /** Distinct sets within 2 units of the criterion's least value. */
  readonly band: readonly (readonly string[])[];
  readonly byAnimals: RefittedSet;
  readonly byYears: RefittedSet;
  readonly years: RandomYearsChoice;
  /** For covariates chosen by years: others the data cannot tell from them. */
  readonly rivals: readonly { readonly chosen: string; readonly others: readonly string[] }[];
  /** Covariates let go because they and survival both run on from year to year, so that n intervals are worth fewer. */
  readonly byMemory: readonly string[];
  /** What the other rule that counts years chooses from the same candidates; undefined where there is no other. */
  readonly secondOpinion: { readonly by: YearsRule; readonly names: readonly string[] } | undefined;
  /** Sets weighed by years, by name. */
  readonly weighed: readonly { readonly names: readonly string[]; readonly gain: number }[];
  /** Undefined if no permutation was asked for. */
  readonly permutation: PermutationResult | undefined;
  /** Share of circular shifts of the years that do as well; a description. Undefined without permutations. */
  readonly shifts: number | undefined;
  /** The choices with one interval left out at a time; empty without permutations. */
  readonly influence: readonly InfluenceRow[];
  /** The rule that the choice by years was made with. */
  readonly yearsBy: YearsRule;
  /** The model with a random effect of each interval, with the covariates chosen by years; undefined where none is to be had. */
  readonly randomIntervals: RandomIntervalEvidence | undefined;
}

const STARTS = 12;
/** Replicates a worker takes at a time: small enough for progress, large enough to be worth sending. */
const CHUNK = 10;

/** The task name under which workers know `permuteYears`. */
export const PERMUTATION_TASK = "screen.permutation";

/** n of the criteria by the rule asked for; animals where they are known, else releases. */
export function sampleSizeOf(problem: ScreenProblem, options: ScreenOptions, animals: number): number {
  if (options.sampleSize === "intervals") return occasionIntervals(problem.frame);
  const releases = totalReleases(problem.data);
  return options.sampleSize === "animals" && Number.isFinite(animals) ? animals : releases;
}

/** Below this many intervals every model with a covariate fits as well as one survival per interval. */
const LEAST_INTERVALS = 3;

/**
 * Weights, path, the two choices, their refits and the permutation of years over all of it.
 * Throws `screen.too-few-intervals`, and what the path and the criterion throw.
 */
export async function screen(
  problem: ScreenProblem,
  recapture: RecaptureComparison,
  options: ScreenOptions,
  animals: number,
  seed: number,
  effects: Pick<Effects, "parallel" | "progress">,
): Promise<{ readonly result: ScreenResult; readonly findings: readonly RawFinding[] }> {
  const intervals = occasionIntervals(problem.frame);
  if (intervals < LEAST_INTERVALS) throw tooFewIntervals(intervals);
  const constantFit = fitModel(problem.data, designWith(problem, []));
  const intervalFit = recapture.intervalFit;
  const setting: ProcedureSetting = {
    intervals,
    covariates: problem.covariates.length,
    interval: { minus2LogL: intervalFit.minus2LogL, parameters: intervalFit.parameters },
    constantParameters: constantFit.parameters,
    sampleSize: sampleSizeOf(problem, options, animals),
  };
  const found = runProcedure(problem, setting, options);
  // once more with refits for every row, which the permutations do without
  const choice = chooseOnPath(
    found.path,
    setting.constantParameters,
    setting.sampleSize,
    options,
    found.refit,
  );
  const names = problem.covariates.map((one) => one.name);
  const named = (set: readonly number[]) => set.map((k) => names[k]);
  const refitted = (set: readonly number[]): RefittedSet => {
    const design = designWith(problem, set);
    const fit = fitModel(problem.data, design);
    const forced = problem.frame.forced.length;
    const from = fixedSurvivalColumns(problem.frame) - forced;
    const inflation = options.betweenAnimals ?? 1;
    return {
      names: named(set),
      fit,
      deviance: analysisOfDeviance(constantFit, fit, intervalFit),
      profiles: Array.from({ length: forced + set.length }, (_, i) =>
        profileInterval(problem.data, design, fit, from + i, inflation),
      ),
      predicted: predictedSurvival(
        problem.frame,
        set.map((k) => problem.covariates[k]),
        fit,
        inflation,
      ),
    };
  };
  const chosen = found.path.steps[choice.index];
  const bandSets = new Map(
    choice.band.map((i) => [found.path.steps[i].active.join(","), named(found.path.steps[i].active)]),
  );
  const byAnimals = refitted(found.byAnimals);
  const byYears = refitted(found.byYears.chosen);
  const second = secondOpinion(problem, found, setting);
  const outcomes = await permutations(problem, setting, options, seed, effects);
  const result: ScreenResult = {
    options,
    names,
    intervals: { between: occasionIntervals(problem.frame), parts: problem.frame.intervals },
    sampleSize: setting.sampleSize,
    releases: totalReleases(problem.data),
    constantFit,
    intervalFit,
    recapture,
    weights: found.weights,
    path: found.path,
    choice,
    survivalAlong: survivalAlong(problem, found.path.steps),
    plain: plainLasso(problem, setting, options, found.refit),
    ridge: ridgePath(problem, setting.sampleSize),
    starts: agreeingStarts(problem, found.path, chosen, STARTS, randomStream(seed, "starts", 0)),
    band: [...bandSets.values()],
    byAnimals,
    byYears,
    years: found.byYears,
    rivals: found.byYears.rivals.map(({ chosen, others }) => ({
      chosen: names[chosen],
      others: named(others),
    })),
    byMemory: named(found.byYears.byMemory),
    secondOpinion: second && { by: second.by, names: named(second.chosen) },
    weighed: found.byYears.weighed.map((one) => ({ names: named(one.set), gain: one.gain })),
    permutation: outcomes.length === 0 ? undefined : summarisePermutations(outcomes, found.byYears.gain),
    shifts: outcomes.length === 0 ? undefined : shiftYears({ problem, setting, options }, found.byYears.gain),
    yearsBy: found.yearsBy,
    randomIntervals:
      second === undefined
        ? undefined
        : settledEvidence(randomIntervalEvidence(problem, found.byYears.chosen), found.unsettled),
    influence: outcomes.length === 0 ? [] : leaveOneIntervalOut(problem, setting, options),
  };
  return { result, findings: screenFindings(result) };
}

/** A fit of the choice that missed its optimum unsettles the evidence as much as one of the model shown. */
function settledEvidence(evidence: RandomIntervalEvidence, unsettled: number): RandomIntervalEvidence {
  return { ...evidence, settled: evidence.settled && unsettled === 0 };
}

async function permutations(
  problem: ScreenProblem,
  setting: ProcedureSetting,
  options: ScreenOptions,
  seed: number,
  effects: Pick<Effects, "parallel" | "progress">,
): Promise<readonly PermutationOutcome[]> {
  if (options.permutations === 0) return [];
  const chunks = Array.from({ length: Math.ceil(options.permutations / CHUNK) }, (_, i) => ({
    problem,
    setting,
    options,
    seed,
    from: i * CHUNK,
    to: Math.min((i + 1) * CHUNK, options.permutations),
  }));
  const step = effects.progress.start("permuting years", chunks.length);
  const parts = await effects.parallel.map<(typeof chunks)[number], ReturnType<typeof permuteYears>>(
    PERMUTATION_TASK,
    chunks,
    step,
  );
  step.done();
  return parts.flat();
}

function screenFindings(result: ScreenResult): RawFinding[] {
  const findings: RawFinding[] = [];
  const fits: readonly (readonly [string, Fit])[] = [
    ["one survival per interval", result.intervalFit],
    ["the covariates chosen by years", result.byYears.fit],
    ["the covariates chosen by animals", result.byAnimals.fit],
  ];
  for (const [subject, fit] of fits) {
    if (fit.atBound.length > 0)
      findings.push({
        kind: "at-bound",
        subject,
        message: `${fit.atBound.join(", ")}: estimated at 0 or 1, so without a standard error`,
        count: fit.atBound.length,
        remedy: "read these as bounds; few animals speak of them",
      });
    for (const set of fit.notSeparable)
      findings.push({
        kind: "not-separable",
        subject,
        message:
          set.length === 1
            ? `the data say nothing of: ${set[0]}`
            : `the data cannot tell apart: ${set.join(" and ")}`,
        count: set.length,
        remedy:
          set.length === 1
            ? "leave it out, or join the stratum with another"
            : "only their product is estimated; hold the recapture part constant to separate them",
      });
  }
  const { recapture } = result;
  const best = recapture.rows.reduce((least, row) => (row.aicc < least.aicc ? row : least));
  const used = recapture.rows.find((row) => row.part === recapture.chosen);
  if (used !== undefined && used.aicc - best.aicc > 2)
    findings.push({
      kind: "recapture-varies",
      subject: "recapture",
      message: `recapture "${best.part}" has an AICc lower by ${(used.aicc - best.aicc).toFixed(2)} than the "${used.part}" in use: an effect on being seen could pass for one on surviving`,
      remedy: "set recapture: choose",
    });
  if (result.starts.agree < result.starts.starts)
    findings.push({
      kind: "not-separable",
      subject: "the screen",
      message: `${result.starts.agree} of ${result.starts.starts} random starts ended at the chosen solution`,
      remedy: "treat the selection with care; look for nearly equal covariates",
    });
  return findings;
}

function tooFewIntervals(intervals: number): InputError {
  return new InputError({
    name: "screen.too-few-intervals",
    expected: `at least ${LEAST_INTERVALS} intervals (${LEAST_INTERVALS + 1} occasions) to screen covariates`,
    found: `${intervals}`,
    where: { cell: "screen" },
    remedy: "add occasions, or stop before the screen",
  });
}
