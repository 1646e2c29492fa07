import { type Random, randomStream } from "../math/random.ts";
import type { ScreenOptions } from "../screen/options.ts";
import { designWith, type ScreenProblem } from "../screen/problem.ts";
import { type ProcedureSetting, runProcedure } from "../screen/procedure.ts";
import { sampleSizeOf } from "../screen/screen.ts";
import { closedYears, intervalSurvival, occasionIntervals } from "../survival/design.ts";
import { fitModel } from "../survival/fit.ts";
import { designOf } from "../survival/recapture-choice.ts";
import { drawStrata } from "./draw.ts";
import { actingPerSd, type StudyDesign } from "./study-design.ts";

/** What is true in a simulated world. */
export interface Scenario {
  /** Positions of the covariates that act, and by how much: logit of annual survival per sd. */
  readonly effects: readonly { readonly covariate: number; readonly perSd: number }[];
  /** sd of the variation between years that no covariate tells, on the logit, for an interval of one year. */
  readonly residual: number;
}

/** What the procedure chose in one replicate, by positions. */
export interface Replicate {
  readonly byYears: readonly number[];
  /** Covariates named as rivals of those chosen by years. */
  readonly rivals: readonly number[];
  readonly byAnimals: readonly number[];
}

/** A run of replicates of one scenario, small enough to send to a worker. */
export interface ReplicateChunk {
  readonly design: StudyDesign;
  readonly scenario: Scenario;
  readonly options: ScreenOptions;
  readonly seed: number;
  readonly stream: string;
  readonly from: number;
  readonly to: number;
}

/** The task name under which workers know `simulateReplicates`. */
export const REPLICATES_TASK = "simulate.replicates";

/** Replicate r has its own random stream, so what it gives does not depend on how replicates are cut into chunks. */
export function simulateReplicates(chunk: ReplicateChunk): Replicate[] {
  const { design, scenario, options, seed, stream } = chunk;
  return Array.from({ length: chunk.to - chunk.from }, (_, i) =>
    screenedStudy(drawStudy(design, scenario, randomStream(seed, stream, chunk.from + i)), design, options),
  );
}

/**
 * Captures of one replicate: with ε_t ~ N(0, σ²/Δ_t) shared by the strata and x in sd (a value per interval, or per
 * stratum and interval; the years of a split interval count as intervals),
 *
 *     logit s_gt = baseline_gt + Σ_k β_k x_kgt + ε_t,   φ_gt = s_gt^Δ_t.
 */
export function drawStudy(design: StudyDesign, scenario: Scenario, random: Random): ScreenProblem {
  const { frame, recapture, covariates, strata } = design;
  const n = frame.intervals;
  const rows = n * strata.length;
  const between = frame.lengths.map((length) => (scenario.residual * random.normal()) / Math.sqrt(length));
  const shift = Float64Array.from({ length: rows }, (_, r) => between[r % n]);
  for (const { covariate, perSd: effect } of scenario.effects)
    actingPerSd(design, covariates[covariate].values).forEach((x, i, { length }) => {
      // a value per interval holds in all strata
      if (length === rows) shift[i] += effect * x;
      else for (let r = i; r < rows; r += length) shift[r] += effect * x;
    });
  const truths = strata.map(({ baseline, recapture: seen, ...one }, g) => ({
    ...one,
    survival: baseline.map((logit, t) => (1 + Math.exp(-logit - shift[g * n + t])) ** -frame.lengths[t]),
    recapture: seen,
  }));
  return { data: drawStrata(truths, random, closedYears(frame)), frame, recapture, covariates };
}

/** The whole procedure on drawn captures, under the recapture part that the study chose. */
export function screenedStudy(
  problem: ScreenProblem,
  design: StudyDesign,
  options: ScreenOptions,
): Replicate {
  const { frame, recapture, data } = problem;
  const interval = fitModel(data, designOf(frame, intervalSurvival(frame), recapture));
  const animals = design.strata.reduce((sum, one) => one.marked.reduce((total, m) => total + m, sum), 0);
  const setting: ProcedureSetting = {
    intervals: occasionIntervals(frame),
    covariates: problem.covariates.length,
    interval: { minus2LogL: interval.minus2LogL, parameters: interval.parameters },
    constantParameters: fitModel(data, designWith(problem, [])).parameters,
    sampleSize: sampleSizeOf(problem, options, animals),
  };
  const { byYears, byAnimals } = runProcedure(problem, setting, options);
  const rivals = new Set(byYears.rivals.flatMap((one) => one.others));
  return { byYears: byYears.chosen, rivals: [...rivals], byAnimals };
}
