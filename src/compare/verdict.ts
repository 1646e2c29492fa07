import type { ScreenResult } from "../screen/screen.ts";
import type { Agreement } from "./agreement.ts";
import { listWords, percentWords, pWords } from "./words.ts";

/** How far the data carry, from the family-wise p of the procedure that counts years alone. */
export type Grade = "firm" | "fair" | "faint" | "none" | "not tested";

export interface Verdict {
  readonly grade: Grade;
  /** What stands, counting years. */
  readonly headline: string;
  /** What a criterion that counts animals says, labelled so, and why the two differ if they do. */
  readonly animals: string;
  /** Whether selection and components tell the same story. */
  readonly agreement: string;
  readonly caution: string;
}

/** Bounds of the grades, a convention of this project: p ≤ .01 firm, ≤ .05 fair, ≤ .1 faint. */
function gradeOf(screened: ScreenResult): Grade {
  if (screened.permutation === undefined) return "not tested";
  const { p } = screened.permutation;
  if (screened.byYears.names.length === 0 || p > 0.1) return "none";
  return p <= 0.01 ? "firm" : p <= 0.05 ? "fair" : "faint";
}

/** Four sentences made from the numbers and nothing else, never stronger than they are. */
export function verdict(screened: ScreenResult, agreed: Agreement): Verdict {
  const grade = gradeOf(screened);
  return {
    grade,
    headline: headline(screened, grade),
    animals: animalsSentence(screened),
    agreement: agreementSentence(agreed),
    caution:
      "Apparent survival counts death and permanent emigration together; an association over these years is not a cause, and decisions on a threatened population belong to qualified people and the local authority.",
  };
}

function headline(screened: ScreenResult, grade: Grade): string {
  const { byYears, permutation } = screened;
  const years = `${screened.recapture.intervalFit.survival.length / strataOf(screened)} intervals`;
  if (byYears.names.length === 0)
    return `Counting years, no covariate stands: over ${years}, none of the ${screened.names.length} candidates accounts for the differences in apparent annual survival better than chance would.`;
  const share = percentWords(byYears.deviance.share);
  if (permutation === undefined)
    return `Counting years, ${listWords(byYears.names)} would be chosen over ${years} (${share} of the deviance between years); no permutation was run, so this is not tested.`;
  const test = `family-wise p ${pWords(permutation.p)} over ${permutation.replicates} permutations of years of the whole procedure`;
  const share2 = `${share} of the deviance between years, against a median of ${percentWords(permutation.medianShareByYears)} with years permuted`;
  if (grade === "none")
    return `Counting years, the data do not carry a selection: ${listWords(byYears.names)} came out over ${years}, but so much comes out by chance (${test}).`;
  const lead = { firm: "stands firmly", fair: "stands", faint: "shows faintly" }[
    grade as "firm" | "fair" | "faint"
  ];
  const verb = byYears.names.length > 1 ? lead.replace("stands", "stand").replace("shows", "show") : lead;
  return `Counting years, ${listWords(byYears.names)} ${verb} as going with differences in apparent annual survival over ${years} (${test}; ${share2}).`;
}

function strataOf(screened: ScreenResult): number {
  return new Set(screened.recapture.intervalFit.survival.map((one) => one.stratum)).size;
}

function animalsSentence(screened: ScreenResult): string {
  const { byAnimals, byYears, permutation, options, sampleSize } = screened;
  const chosen = `A criterion that counts animals (${options.chooseBy}, n = ${sampleSize} ${options.sampleSize}) chooses ${listWords(byAnimals.names)}`;
  const same =
    byAnimals.names.length === byYears.names.length &&
    byAnimals.names.every((name) => byYears.names.includes(name));
  const chance =
    permutation === undefined
      ? ""
      : `; with years permuted it still chooses something in ${percentWords(permutation.falseByAnimals)} of runs (counting years: ${percentWords(permutation.falseByYears)})`;
  const why = same
    ? ", the same set"
    : `, which differs because ĉ between years is ${byYears.deviance.betweenYears.toPrecision(3)}: survival varies between years beyond what these covariates explain, and animals of one year share that`;
  return `${chosen}${why}${chance}.`;
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
