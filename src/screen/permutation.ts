import { quantile7 } from "../math/quantile.ts";
import { randomStream } from "../math/random.ts";
import type { ScreenOptions } from "./options.ts";
import type { ScreenProblem } from "./problem.ts";
import {
  type ProcedureSetting,
  runProcedure,
  type WithoutCovariates,
  withoutCovariates,
} from "./procedure.ts";

/** A run of replicates, small enough to send to a worker. */
export interface PermutationChunk {
  readonly problem: ScreenProblem;
  readonly setting: ProcedureSetting;
  readonly options: ScreenOptions;
  readonly seed: number;
  readonly from: number;
  readonly to: number;
}

/** What the procedure found with the years of the covariates permuted. */
export interface PermutationOutcome {
  /** Gain of the choice by years; 0 if nothing stood. */
  readonly gain: number;
  readonly chosenByYears: number;
  readonly chosenByAnimals: number;
  /** R²_dev of the choice by years and by animals; 0 if nothing was chosen. */
  readonly shareByYears: number;
  readonly shareByAnimals: number;
}

export interface PermutationResult {
  readonly replicates: number;
  /**
   * Family-wise p of the whole procedure that counts years: (1 + permutations whose gain is at least the observed
   * one) / (1 + permutations); 1 where nothing stood.
   */
  readonly p: number;
  /** Gain of the study's own choice by years, and of that of each permutation (its null), in their order; 0 if nothing stood. */
  readonly gain: number;
  readonly gains: Float64Array;
  /** Shares of permutations in which something was chosen, though nothing was there to be found. */
  readonly falseByYears: number;
  readonly falseByAnimals: number;
  /** Medians of R²_dev over permutations of what was chosen. */
  readonly medianShareByYears: number;
  readonly medianShareByAnimals: number;
  /** Largest R²_dev that 95 % of permutations stay below. */
  readonly shareByYears95: number;
  readonly shareByAnimals95: number;
}

/**
 * Permutes the rows of the covariate matrix (all covariates together, so their correlations stay) against the
 * intervals and repeats weights, path and both choices. Replicate r uses its own random stream, so the outcome does
 * not depend on how replicates are cut into chunks.
 */
export function permuteYears(chunk: PermutationChunk): PermutationOutcome[] {
  const known = withoutCovariates(chunk.problem);
  return Array.from({ length: chunk.to - chunk.from }, (_, i) => {
    const random = randomStream(chunk.seed, "permutation of years", chunk.from + i);
    return outcomeInOrder(chunk, random.permutation(chunk.problem.frame.intervals), known);
  });
}

/** What the procedure finds when interval t is given the covariates of interval order[t]. */
export function outcomeInOrder(
  { problem, setting, options }: Pick<PermutationChunk, "problem" | "setting" | "options">,
  order: ArrayLike<number>,
  known?: WithoutCovariates,
): PermutationOutcome {
  const n = problem.frame.intervals;
  // values by stratum × interval move together, each within its stratum
  const covariates = problem.covariates.map((one) => ({
    name: one.name,
    values: one.values.map((_, r) => one.values[r - (r % n) + order[r % n]]),
  }));
  const result = runProcedure({ ...problem, covariates }, setting, options, known);
  const share = (set: readonly number[]) =>
    (result.refit([]) - result.refit(set)) / (result.refit([]) - setting.interval.minus2LogL);
  return {
    gain: result.byYears.gain,
    chosenByYears: result.byYears.chosen.length,
    chosenByAnimals: result.byAnimals.length,
    shareByYears: share(result.byYears.chosen),
    shareByAnimals: share(result.byAnimals),
  };
}

/**
 * The n − 1 circular shifts of the years: they keep the autocorrelation of the covariates, which permutation destroys, but are
 * so few that their share, (1 + shifts whose gain is at least the observed one) / n, is no test of its own.
 */
export function shiftYears(
  study: Pick<PermutationChunk, "problem" | "setting" | "options">,
  gain: number,
): number {
  const n = study.problem.frame.intervals;
  const known = withoutCovariates(study.problem);
  let reached = 1;
  for (let shift = 1; shift < n; shift++) {
    const order = Int32Array.from({ length: n }, (_, t) => (t + shift) % n);
    if (outcomeInOrder(study, order, known).gain >= gain) reached++;
  }
  return reached / n;
}

export function summarisePermutations(
  outcomes: readonly PermutationOutcome[],
  gain: number,
): PermutationResult {
  const n = outcomes.length;
  const median = (values: readonly number[]) => quantile7(values, 0.5);
  const chosen = (key: "chosenByYears" | "chosenByAnimals") =>
    outcomes.filter((one) => one[key] > 0).length / n;
  return {
    replicates: n,
    p: (1 + outcomes.filter((one) => one.gain >= gain).length) / (1 + n),
    gain,
    gains: Float64Array.from(outcomes, (one) => one.gain),
    falseByYears: chosen("chosenByYears"),
    falseByAnimals: chosen("chosenByAnimals"),
    medianShareByYears: median(outcomes.map((one) => one.shareByYears)),
    medianShareByAnimals: median(outcomes.map((one) => one.shareByAnimals)),
    shareByYears95: quantile7(
      outcomes.map((one) => one.shareByYears),
      0.95,
    ),
    shareByAnimals95: quantile7(
      outcomes.map((one) => one.shareByAnimals),
      0.95,
    ),
  };
}
