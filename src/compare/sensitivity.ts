import { listWords } from "../data/words.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { PermutationOutcome } from "../screen/permutation.ts";
import { designWith, type ScreenProblem } from "../screen/problem.ts";
import { type ProcedureSetting, runProcedure } from "../screen/procedure.ts";
import { sampleSizeOf } from "../screen/screen.ts";
import { occasionIntervals } from "../survival/design.ts";
import { fitModel } from "../survival/fit.ts";
import type { RecaptureComparison } from "../survival/recapture-choice.ts";
import { pWords } from "./words.ts";

/** What one analysis of the same captures selects. */
export interface Analysis {
  readonly name: string;
  /** What differs from the study as it stands, in words; empty for the study itself. */
  readonly changes: string;
  /** Why it could not be run; then nothing below is known. */
  readonly failed: string | undefined;
  readonly candidates: readonly string[];
  readonly byYears: readonly string[];
  readonly rivals: readonly { readonly chosen: string; readonly others: readonly string[] }[];
  readonly byAnimals: readonly string[];
  /** Gain of the choice by years after its price; 0 where nothing stands. */
  readonly gain: number;
  /** Share of the deviance between years of the choice by years. */
  readonly share: number;
  readonly recapture: string;
}

/** The permutation of years wrapped around all analyses. */
export interface WholeSearch {
  readonly replicates: number;
  /** (1 + permutations whose best gain over all analyses reaches the best one found) / (1 + permutations). */
  readonly p: number;
  /** Share of permutations in which some analysis chose something. */
  readonly falseByYears: number;
}

export interface Sensitivity {
  /** The study as it stands first. */
  readonly analyses: readonly Analysis[];
  /** Analyses that were run, the study itself counted in: as many chances to find something. */
  readonly tried: number;
  readonly search: WholeSearch | undefined;
  /** In how many analyses each covariate was chosen by years, or could stand for one that was. */
  readonly stands: readonly { readonly name: string; readonly chosen: number; readonly rival: number }[];
  readonly sentence: string;
}

/** A screen that was posed, and what every permutation of it holds fixed. */
export interface PosedAnalysis {
  readonly problem: ScreenProblem;
  readonly setting: ProcedureSetting;
  readonly options: ScreenOptions;
}

/** The setting of the procedure for a posed problem; `animals` as for `sampleSizeOf`. */
export function poseAnalysis(
  problem: ScreenProblem,
  recapture: RecaptureComparison,
  options: ScreenOptions,
  animals: number,
): PosedAnalysis {
  const { minus2LogL, parameters } = recapture.intervalFit;
  return {
    problem,
    options,
    setting: {
      intervals: occasionIntervals(problem.frame),
      covariates: problem.covariates.length,
      interval: { minus2LogL, parameters },
      constantParameters: fitModel(problem.data, designWith(problem, [])).parameters,
      sampleSize: sampleSizeOf(problem, options, animals),
    },
  };
}

/** Runs the whole procedure once on a posed problem. */
export function runAnalysis(
  posed: PosedAnalysis,
  said: Pick<Analysis, "name" | "changes" | "recapture">,
): Analysis {
  const { problem, setting, options } = posed;
  const { byYears, byAnimals, refit } = runProcedure(problem, setting, options);
  const names = problem.covariates.map((one) => one.name);
  const named = (set: readonly number[]) => set.map((k) => names[k]);
  const none = refit([]);
  return {
    ...said,
    failed: undefined,
    candidates: names,
    byYears: named(byYears.chosen),
    rivals: byYears.rivals.map(({ chosen, others }) => ({ chosen: names[chosen], others: named(others) })),
    byAnimals: named(byAnimals),
    gain: byYears.gain,
    share: (none - refit(byYears.chosen)) / (none - setting.interval.minus2LogL),
  };
}

/** An analysis that could not be run. */
export function failedAnalysis(name: string, changes: string, failed: string): Analysis {
  const nothing = { candidates: [], byYears: [], rivals: [], byAnimals: [] };
  return { name, changes, failed, ...nothing, gain: Number.NaN, share: Number.NaN, recapture: "" };
}

/**
 * All analyses side by side. `outcomes`: for each analysis that was run the outcomes of its permutations, replicate r of
 * each with the same order of years, so that the largest gain over analyses is what the whole search found by chance.
 */
export function summariseSensitivity(
  analyses: readonly Analysis[],
  outcomes: readonly (readonly PermutationOutcome[])[],
): Sensitivity {
  const run = analyses.filter((one) => one.failed === undefined);
  const replicates = outcomes.length === 0 ? 0 : Math.min(...outcomes.map((one) => one.length));
  const found = Math.max(0, ...run.map((one) => one.gain));
  const best = Array.from({ length: replicates }, (_, r) => Math.max(...outcomes.map((one) => one[r].gain)));
  const search =
    replicates === 0
      ? undefined
      : {
          replicates,
          p: (1 + best.filter((gain) => gain >= found).length) / (1 + replicates),
          falseByYears: best.filter((gain) => gain > 0).length / replicates,
        };
  const names = [...new Set(run.flatMap((one) => one.candidates))];
  const stands = names.map((name) => ({
    name,
    chosen: run.filter((one) => one.byYears.includes(name)).length,
    rival: run.filter((one) => one.rivals.some(({ others }) => others.includes(name))).length,
  }));
  return { analyses, tried: run.length, search, stands, sentence: sentenceOf(run, stands, search) };
}

function sentenceOf(
  run: readonly Analysis[],
  stands: Sensitivity["stands"],
  search: WholeSearch | undefined,
): string {
  const [base] = run;
  if (base === undefined || run.length < 2) return "";
  const others = run.length - 1;
  const same = run.slice(1).filter((one) => tellsTheSame(base, one)).length;
  const start =
    base.byYears.length === 0
      ? `In ${run.length} analyses (the study and ${others} stated ${others === 1 ? "alternative" : "alternatives"}), nothing stands counting years in ${run.filter((one) => one.byYears.length === 0).length}`
      : `Of ${others} stated ${others === 1 ? "alternative" : "alternatives"} ${same} choose${same === 1 ? "s" : ""} the same covariates counting years, or ones that the data cannot tell from them`;
  const most = [...stands]
    .filter((one) => one.chosen > 0)
    .sort((a, b) => b.chosen - a.chosen || (a.name < b.name ? -1 : 1))
    .slice(0, 4)
    .map((one) => `${one.name} in ${one.chosen}`);
  const counts = most.length === 0 ? "" : `; of ${run.length} analyses chosen: ${listWords(most)}`;
  const tested =
    search === undefined
      ? `. No p of a single analysis allows for ${run.length} having been tried`
      : `. Over the whole search the family-wise p is ${pWords(search.p)} (${search.replicates} permutations of years through all ${run.length} analyses)`;
  return `${start}${counts}${tested}.`;
}

/** Whether every covariate chosen in one analysis is chosen, or has a rival that is, in the other, and the other way round. */
function tellsTheSame(a: Analysis, b: Analysis): boolean {
  const covered = (from: Analysis, by: Analysis) =>
    from.byYears.every((name) => {
      const exchangeable = [name, ...othersOf(from, name)];
      return (
        by.byYears.some((one) => exchangeable.includes(one)) ||
        by.rivals.some(({ others }) => others.includes(name))
      );
    });
  return covered(a, b) && covered(b, a);
}

function othersOf({ rivals }: Analysis, name: string): readonly string[] {
  return rivals.find((one) => one.chosen === name)?.others ?? [];
}
