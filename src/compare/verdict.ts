import { intervalWords } from "../data/occasion.ts";
import { listWords } from "../data/words.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Agreement } from "./agreement.ts";
import { percentWords, pWords } from "./words.ts";

/** How far the data carry, from the family-wise p of the procedure that counts years alone. */
export type Grade = "firm" | "fair" | "faint" | "none" | "not tested";

export interface Verdict {
  readonly grade: Grade;
  /** The test the grade rests on, in few words; undefined if there is none. */
  readonly tested: string | undefined;
  /** What stands, counting years. */
  readonly headline: string;
  /** What a criterion that counts animals says, labelled so, and why the two differ if they do. */
  readonly animals: string;
  /** Whether selection and components tell the same story. */
  readonly agreement: string;
  readonly caution: string;
}

/** Grades from weak to strong, so that a doubt can take one off. */
const GRADES: readonly Grade[] = ["none", "faint", "fair", "firm"];

/** What the choice by years is tested by. */
interface Test {
  readonly p: number;
  readonly short: string;
  readonly words: string;
}

/**
 * A lone candidate was not chosen from anything, so its analysis of deviance is the test; what was chosen from several is
 * tested by permuting years through the whole procedure. Undefined where neither is to be had.
 */
function testOf({ names, byYears, permutation }: ScreenResult): Test | undefined {
  const { f, df1, df2, p } = byYears.deviance;
  if (names.length === 1 && byYears.names.length === 1 && !Number.isNaN(p))
    return {
      p,
      short: `F(${df1}, ${df2}) = ${f.toPrecision(4)}, p ${pWords(p)}, the only candidate`,
      words: `analysis of deviance F(${df1}, ${df2}) = ${f.toPrecision(4)}, p ${pWords(p)}; it was the only candidate, so nothing was chosen`,
    };
  if (permutation === undefined) return undefined;
  return {
    p: permutation.p,
    short: `family-wise p ${pWords(permutation.p)}, ${permutation.replicates} permutations of years`,
    words: `family-wise p ${pWords(permutation.p)} over ${permutation.replicates} permutations of years of the whole procedure`,
  };
}

/**
 * Bounds of the grades, a convention of this project: p ≤ .01 firm, ≤ .05 fair, ≤ .1 faint; one less where the other
 * rule that counts years does not confirm every covariate chosen, or a fit missed its optimum. Permutation takes years for
 * exchangeable; where what runs on from year to year does as well by chance (`runsOn`), the grade is faint at most.
 */
function gradeOf(screened: ScreenResult): Grade {
  const test = testOf(screened);
  if (test === undefined) return "not tested";
  if (screened.byYears.names.length === 0 || test.p > 0.1) return "none";
  const grade = test.p <= 0.01 ? 3 : test.p <= 0.05 ? 2 : 1;
  const doubted = unconfirmed(screened).length > 0 || unsettled(screened);
  return GRADES[Math.min(doubted ? grade - 1 : grade, runsOn(screened) ? 1 : 3)];
}

/**
 * Whether more circular shifts of the years do as well than one of twenty (of n where there are fewer intervals): shifts keep
 * the memory of covariates and survival, so a choice that memory alone brings about is reached by others of them.
 */
function runsOn({ names, byYears, intervals, shifts }: ScreenResult): boolean {
  if (shifts === undefined || (names.length === 1 && byYears.names.length === 1)) return false;
  return shifts > Math.max(0.05, 1 / intervals.parts) + 1e-9;
}

function unsettled({ randomIntervals }: ScreenResult): boolean {
  return randomIntervals !== undefined && !randomIntervals.settled;
}

/** Covariates chosen by years of which neither they nor a rival is chosen by the second opinion. */
function unconfirmed({ byYears, rivals, secondOpinion }: ScreenResult): readonly string[] {
  if (secondOpinion === undefined) return [];
  return byYears.names.filter((name) => {
    const others = rivals.find((one) => one.chosen === name)?.others ?? [];
    return ![name, ...others].some((one) => secondOpinion.names.includes(one));
  });
}

/** Four sentences made from the numbers and nothing else, never stronger than they are. */
export function verdict(screened: ScreenResult, agreed: Agreement): Verdict {
  const grade = gradeOf(screened);
  return {
    grade,
    tested: testOf(screened)?.short,
    headline: headline(screened, grade),
    animals: animalsSentence(screened),
    agreement: agreementSentence(agreed),
    caution:
      "Apparent survival counts death and permanent emigration together; an association over these years is not a cause, and decisions on a threatened population belong to qualified people and the local authority.",
  };
}

function headline(screened: ScreenResult, grade: Grade): string {
  const { byYears, permutation } = screened;
  const years = intervalWords(screened.intervals.between, screened.intervals.parts);
  if (byYears.names.length === 0)
    return `Counting years, no covariate stands: over ${years}, none of the ${screened.names.length} candidates accounts for the differences in apparent annual survival better than chance would.`;
  const chosen = chosenWords(screened);
  const share = percentWords(byYears.deviance.share);
  const test = testOf(screened);
  if (test === undefined)
    return `Counting years, ${chosen} would be chosen over ${years} (${share} of the deviance between years); no permutation was run, so this is not tested.`;
  const doubtful = unconfirmed(screened);
  const doubt = [
    doubtful.length === 0
      ? ""
      : ` ${screened.secondOpinion?.by === "random intervals" ? "A model with a random effect of each interval" : "An analysis of deviance"} does not confirm ${listWords(doubtful)}.`,
    runsOn(screened)
      ? ` With the years shifted, so that what runs on from year to year stays, ${percentWords(screened.shifts ?? 0)} of shifts do as well; permutation alone would say too much.`
      : "",
    unsettled(screened) ? " A fit behind this choice did not reach its optimum." : "",
  ].join("");
  if (grade === "none" && test.p <= 0.1)
    return `Counting years, the data hardly carry a selection: ${chosen} came out over ${years} (${test.words}).${doubt}`;
  if (grade === "none")
    return `Counting years, the data do not carry a selection: ${chosen} came out over ${years}, but so much comes out by chance (${test.words}).`;
  const verb = { firm: "firmly goes with", fair: "goes with", faint: "may go with" }[
    grade as "firm" | "fair" | "faint"
  ];
  const median =
    permutation === undefined
      ? ""
      : `, against a median of ${percentWords(permutation.medianShareByYears)} with years permuted`;
  const plural = byYears.names.length > 1 ? verb.replace("goes", "go") : verb;
  return `Counting years, ${chosen} ${plural} differences in apparent annual survival over ${years} (${test.words}; ${share} of the deviance between years${median}).${doubt}`;
}

/** The chosen covariates, each with those the data cannot tell from it. */
function chosenWords({ byYears, rivals }: ScreenResult): string {
  return listWords(
    byYears.names.map((name) => {
      const others = rivals.find((one) => one.chosen === name)?.others ?? [];
      return others.length === 0 ? name : `${name} (or ${others.join(" or ")})`;
    }),
  );
}

function animalsSentence(screened: ScreenResult): string {
  const { byAnimals, permutation, options, sampleSize } = screened;
  const chosen = `A criterion that counts animals (${options.chooseBy}, n = ${sampleSize} ${options.sampleSize}) chooses ${listWords(byAnimals.names)}`;
  const chance =
    permutation === undefined
      ? ""
      : `; with years permuted it still chooses something in ${percentWords(permutation.falseByAnimals)} of runs`;
  return `${chosen}, ${differenceWords(screened)}${chance}.`;
}

/** Why the two choices differ, if they do. */
function differenceWords({ byAnimals, byYears, rivals }: ScreenResult): string {
  const only = byAnimals.names.filter((name) => !byYears.names.includes(name));
  const missed = byYears.names.filter((name) => !byAnimals.names.includes(name));
  if (only.length === 0 && missed.length === 0) return "the same set";
  const exchanged = only.every((name) =>
    rivals.some((one) => missed.includes(one.chosen) && one.others.includes(name)),
  );
  if (only.length === missed.length && exchanged)
    return `which differs only by covariates the data cannot tell apart (${listWords(only)} for ${listWords(missed)})`;
  const between = byYears.deviance.betweenYears;
  if (between > 1.5)
    return `which differs because survival varies between years beyond these covariates (ĉ between years ${between.toPrecision(3)}) and all animals of a year share that`;
  return "which differs because years, not animals, are the sample of the weather, and there are few of them";
}

function agreementSentence(agreed: Agreement): string {
  const pair = agreed.survival.find((one) => one.a === "chosen by animals" && one.b === "components kept");
  if (pair === undefined)
    return "There is no component-based model to set beside the selection: the rule kept no component, or too many for these intervals.";
  if (Number.isNaN(pair.r))
    return "Selection and components cannot be set side by side: one of them leaves survival the same in every interval.";
  const story =
    pair.r >= 0.9
      ? "tell the same story"
      : pair.r >= 0.6
        ? "tell partly the same story"
        : "tell different stories";
  return `Selection and components ${story}: their fitted survivals correlate at ${pair.r.toFixed(2)}, and ${agreed.sameSign} of ${agreed.chosen} selected covariates keep their sign when the components are carried back to covariates.`;
}
