import { listWords } from "../data/words.ts";
import { sampleSd } from "../math/quantile.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Agreement } from "./agreement.ts";
import type { Candidate, CandidateKey } from "./candidates.ts";
import type { CandidatePrediction, Prediction } from "./prediction.ts";
import type { Verdict } from "./verdict.ts";
import { percentWords } from "./words.ts";

/** How the paragraph ends. */
export const CAUTION =
  "Apparent survival counts death and permanent emigration together, and an association over these years is not a cause.";

/** A difference counts as clear where it is more than twice its standard error (common practice, no source). */
const CLEAR = 2;

/**
 * One paragraph that a scientist can paste and defend: what was asked of how many intervals and candidates, what stands
 * (the verdict's own sentence, with its grade), what selection and components account for on the same data, how both
 * foretell intervals they have not seen, whether they agree, and what none of it can show. Every clause comes from a
 * number; where the evidence is none or untested the paragraph says so before anything else is told.
 */
export function paragraph(
  screened: ScreenResult,
  candidates: readonly Candidate[],
  agreed: Agreement,
  verdict: Verdict,
  prediction: Prediction | undefined,
): string {
  return [
    askedWords(screened),
    verdict.headline,
    weakWords(verdict),
    accountedWords(screened, candidates),
    predictionWords(prediction),
    verdict.agreement,
    agreed.survival.length === 0 ? "" : sharedWords(verdict),
    CAUTION,
  ]
    .filter((one) => one !== "")
    .join(" ");
}

function askedWords({ names, releases, constantFit }: ScreenResult): string {
  const many = names.length === 1 ? "1 candidate covariate was" : `${names.length} candidate covariates were`;
  return `${many} set against apparent annual survival (${releases} releases; recapture ${constantFit.recaptureWords}).`;
}

/** What the numbers that follow must not be taken for. */
function weakWords({ grade }: Verdict): string {
  if (grade === "none") return "What follows describes these data and is no evidence of an effect.";
  if (grade === "not tested") return "What follows describes these data; nothing was tested.";
  if (grade === "faint") return "This is weak evidence, and what follows should be read in that light.";
  return "";
}

function accountedWords({ permutation }: ScreenResult, candidates: readonly Candidate[]): string {
  const by = new Map(candidates.map((one) => [one.key, one]));
  const [years, kept, first] = [
    by.get("chosen by years"),
    by.get("components kept"),
    by.get("first component"),
  ];
  const parts: string[] = [];
  if (years !== undefined && years.deviance.df1 > 0) {
    const chance =
      permutation === undefined
        ? ""
        : ` (something is chosen in ${percentWords(permutation.falseByYears)} of runs with years permuted)`;
    parts.push(
      `the selection accounts for ${percentWords(years.deviance.share)}, flattered by choosing on the same data${chance}`,
    );
  }
  if (kept !== undefined) {
    const many = kept.deviance.df1 === 1 ? "the component kept" : `the ${kept.deviance.df1} components kept`;
    const verb = kept.deviance.df1 === 1 ? "accounts" : "account";
    parts.push(
      `${many}, made without a look at survival, ${verb} for ${percentWords(kept.deviance.share)} (${testWords(kept)})`,
    );
  }
  if (first !== undefined && kept !== undefined && kept.deviance.df1 > 1)
    parts.push(`the first alone for ${percentWords(first.deviance.share)} (${testWords(first)})`);
  return parts.length === 0 ? "" : `Of the deviance between years on the same captures, ${parts.join("; ")}.`;
}

function testWords({ deviance: { f, df1, df2, p } }: Candidate): string {
  if (Number.isNaN(p)) return "too few intervals for a test";
  return `F(${df1}, ${df2}) = ${f.toPrecision(3)}, p ${p < 0.001 ? "< 0.001" : p.toPrecision(2)}`;
}

/** Names of the ways that are set against each other, as a sentence has them. */
const SAID: Readonly<Partial<Record<CandidateKey, string>>> = {
  "chosen by years": "selection counting years",
  "components kept": "the components kept",
  ridge: "ridge on all covariates",
};

function predictionWords(prediction: Prediction | undefined): string {
  if (prediction === undefined) return "";
  const of = (key: CandidateKey) => prediction.candidates.find((one) => one.key === key);
  const told = (["chosen by years", "components kept", "ridge"] as const).flatMap((key) => of(key) ?? []);
  if (told.length === 0) return "";
  const shares = told.map((one) => `${SAID[one.key]} ${shareWords(one)}`);
  const positive = told.filter((one) => one.share > 0);
  const clear = positive.filter((one) => one.gain > CLEAR * one.gainError);
  const gains =
    positive.length === 0
      ? ""
      : clear.length === 0
        ? "; none of it is clearly more than nothing"
        : clear.length === positive.length
          ? "; all of it is clearly more than nothing"
          : `; clearly more than nothing: ${listWords(clear.map((one) => SAID[one.key] ?? one.key))} alone`;
  const [years, kept] = [of("chosen by years"), of("components kept")];
  const against =
    years === undefined || kept === undefined || Math.max(years.share, kept.share) <= 0
      ? ""
      : ` ${againstWords(years, kept, prediction.intervals)}`;
  return `With each interval left out in turn and everything done again, of what one common survival misses there, ${listWords(shares)}${gains}.${against}`;
}

/** What a candidate foretells beyond a constant survival; whether that is clearly more is said once for all. */
function shareWords({ share, gain, gainError }: CandidatePrediction): string {
  if (share <= 0) return "foretells nothing";
  return `foretells ${percentWords(share)} (log score ${gain < 0 ? "−" : "+"}${Math.abs(gain).toFixed(1)}, s.e. ${gainError.toFixed(1)})`;
}

function againstWords(years: CandidatePrediction, kept: CandidatePrediction, n: number): string {
  const { difference, error } = scoreDifference(years, kept);
  const numbers = `log scores ${Math.abs(difference).toFixed(1)} apart, s.e. ${error.toFixed(1)}, ${n} intervals`;
  if (!(Math.abs(difference) > CLEAR * error))
    return `Neither selection nor components clearly foretell better (${numbers}).`;
  return difference > 0
    ? `Selection foretells better than components (${numbers}).`
    : `Components foretell better than selection (${numbers}).`;
}

/** Sum over intervals of the difference in log score, a above b, and its standard error √n·sd. */
export function scoreDifference(
  a: CandidatePrediction,
  b: CandidatePrediction,
): { readonly difference: number; readonly error: number } {
  const each = a.scores.map((value, i) => value - b.scores[i]);
  return {
    difference: each.reduce((sum, value) => sum + value, 0),
    error: Math.sqrt(each.length) * sampleSd(each),
  };
}

function sharedWords({ grade }: Verdict): string {
  return grade === "firm" || grade === "fair"
    ? "Covariates that rise and fall together stay exchangeable, whichever of them was chosen."
    : "";
}
