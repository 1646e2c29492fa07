import { randomStream } from "../math/random.ts";
import type { ScreenOptions } from "../screen/options.ts";
import { designWith, type ScreenProblem } from "../screen/problem.ts";
import type { ScreenResult } from "../screen/screen.ts";
import { fitModel } from "../survival/fit.ts";
import { drawStudy, screenedStudy } from "./replicate.ts";
import { conditionalDesign, randomIntervalDesign } from "./resampled-worlds.ts";
import { type Helpers, shareOut } from "./share-out.ts";
import type { StudyDesign } from "./study-design.ts";

/**
 * Where resamples come from. `new years`: effects of years and fates of animals drawn from the random-interval model with
 * the covariates chosen by years. `null`: the same without covariates, so that whatever is chosen is wrong. `same
 * years`: animals only, under each year's own survival, so that what was special about these years comes back every time.
 */
export const WORLDS = ["new years", "null", "same years"] as const;
export type World = (typeof WORLDS)[number];

/** A covariate chosen in a resample and which way its refitted effect points. */
export interface Pick {
  readonly covariate: number;
  readonly sign: number;
}

export interface Resample {
  readonly byYears: readonly Pick[];
  readonly byAnimals: readonly Pick[];
}

export interface ResamplingChunk {
  readonly design: StudyDesign;
  readonly residual: number;
  readonly options: ScreenOptions;
  readonly seed: number;
  readonly stream: string;
  readonly from: number;
  readonly to: number;
}

/** The task name under which workers know `resampleStudies`. */
export const RESAMPLING_TASK = "simulate.resampling";

/** Draws studies from one world and repeats the whole procedure; replicate r has its own random stream. */
export function resampleStudies(chunk: ResamplingChunk): Resample[] {
  const { design, residual, options, seed, stream } = chunk;
  return Array.from({ length: chunk.to - chunk.from }, (_, i) => {
    const random = randomStream(seed, stream, chunk.from + i);
    const problem = drawStudy(design, { effects: [], residual }, random);
    const { byYears, byAnimals } = screenedStudy(problem, design, options);
    return { byYears: picks(problem, byYears), byAnimals: picks(problem, byAnimals) };
  });
}

function picks(problem: ScreenProblem, chosen: readonly number[]): Pick[] {
  if (chosen.length === 0) return [];
  const fit = fitModel(problem.data, designWith(problem, chosen));
  return chosen.map((covariate) => {
    const k = fit.names.indexOf(problem.covariates[covariate].name);
    return { covariate, sign: Math.sign(fit.estimates[k]) };
  });
}

/** What the resamples of one world came to. */
export interface WorldSummary {
  readonly world: World;
  /** Share of resamples in which something was chosen. */
  readonly anythingByYears: number;
  readonly anythingByAnimals: number;
  /** Share of resamples in which exactly the study's own choice by years came out again. */
  readonly sameByYears: number;
  /** By covariate, K. */
  readonly byYears: Float64Array;
  readonly byAnimals: Float64Array;
  /** Of the resamples that chose it by years, the share in which its effect points as in the study; NaN if none did. */
  readonly sameSign: Float64Array;
  /** K × K, row-major: shares in which both were chosen by years. */
  readonly together: Float64Array;
}

export interface Resampling {
  readonly names: readonly string[];
  readonly replicates: number;
  /** Which way each covariate points in the study: in the refit of the chosen set, else alone. */
  readonly signs: readonly number[];
  /** `new years` is left out where nothing was chosen by years: its model is then the null itself. */
  readonly worlds: readonly WorldSummary[];
}

/**
 * How often the procedure chooses each covariate when the study is drawn again, beside how often it would where nothing
 * acts. Undefined where none are asked for, or where no random effect of the interval is to be had.
 */
export async function resample(
  problem: ScreenProblem,
  screened: ScreenResult,
  options: ScreenOptions,
  seed: number,
  helpers: Helpers,
): Promise<Resampling | undefined> {
  const replicates = options.resamples ?? 0;
  const { randomIntervals } = screened;
  if (replicates === 0 || randomIntervals === undefined || screened.names.length === 0) return undefined;
  const chosen = screened.byYears.names.map((name) => screened.names.indexOf(name));
  const drawn: readonly (readonly [World, StudyDesign, number])[] = [
    ...(chosen.length === 0
      ? []
      : [["new years", randomIntervalDesign(problem, chosen), randomIntervals.sigma] as const]),
    ["null", randomIntervalDesign(problem, []), randomIntervals.sigmaWithout],
    ["same years", conditionalDesign(problem, screened.intervalFit), 0],
  ];
  const runs = drawn.map(([world, design, residual]): Omit<ResamplingChunk, "from" | "to"> => {
    return { design, residual, options, seed, stream: `resampling, ${world}` };
  });
  const resampled = await shareOut<(typeof runs)[number], Resample>(
    helpers,
    { label: "drawing the study again", task: RESAMPLING_TASK, replicates },
    runs,
  );
  const signs = screened.names.map((_, k) => studySign(problem, chosen, k));
  return {
    names: screened.names,
    replicates,
    signs,
    worlds: drawn.map(([world], w) => summarise(world, resampled[w], chosen, signs)),
  };
}

function studySign(problem: ScreenProblem, chosen: readonly number[], k: number): number {
  const set = chosen.includes(k) ? chosen : [k];
  return picks(problem, set).find((one) => one.covariate === k)?.sign ?? 0;
}

/** Counts resamples into shares. */
export function summarise(
  world: World,
  resamples: readonly Resample[],
  chosen: readonly number[],
  signs: readonly number[],
): WorldSummary {
  const K = signs.length;
  const n = resamples.length;
  const [byYears, byAnimals, same] = [0, 1, 2].map(() => new Float64Array(K));
  const together = new Float64Array(K * K);
  for (const one of resamples) {
    for (const { covariate } of one.byAnimals) byAnimals[covariate]++;
    for (const { covariate, sign } of one.byYears) {
      byYears[covariate]++;
      if (sign === signs[covariate]) same[covariate]++;
      for (const other of one.byYears) together[covariate * K + other.covariate]++;
    }
  }
  const key = (set: readonly number[]) => [...set].sort((a, b) => a - b).join(",");
  const wanted = key(chosen);
  const share = (is: (one: Resample) => boolean) => resamples.filter(is).length / n;
  return {
    world,
    anythingByYears: share((one) => one.byYears.length > 0),
    anythingByAnimals: share((one) => one.byAnimals.length > 0),
    sameByYears: share((one) => key(one.byYears.map((pick) => pick.covariate)) === wanted),
    byYears: byYears.map((count) => count / n),
    byAnimals: byAnimals.map((count) => count / n),
    sameSign: byYears.map((count, k) => (count === 0 ? Number.NaN : same[k] / count)),
    together: together.map((count) => count / n),
  };
}
