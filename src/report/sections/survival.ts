import type { Candidate, CandidateKey } from "../../compare/candidates.ts";
import { listWords } from "../../data/words.ts";
import { recipeNamed } from "../../tables/recipe-named.ts";
import { type Cast, unitText } from "../cast.ts";
import type { Figure } from "../figure.ts";
import { type Html, html, type Piece } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, percent, pText, show } from "../numbers.ts";
import {
  caution,
  covariateList,
  covariateName,
  figureBlock,
  foldedGrid,
  grid,
  type Section,
} from "../parts.ts";
import { predictionBlock } from "./prediction.ts";
import { refitsBlock } from "./refits.ts";
import { switchBlock } from "./switch.ts";

const NAMES: Readonly<Record<CandidateKey, string>> = {
  constant: "one survival for all intervals",
  "each interval": "a survival of its own for each interval",
  "all covariates": "all covariates",
  "pruned covariates": "covariates left after pruning",
  "chosen by animals": "chosen by the lasso, counting animals",
  "best small subset": "best of all small subsets, by animals",
  ridge: "all covariates, shrunken by ridge",
  "chosen by years": "chosen from the path, counting years",
  "first component": "first component",
  "components kept": "components kept",
  "components screened": "components chosen by the same screen",
};

export function survivalSection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const head = { id: "survival", title: "Survival by interval" };
  const figure = figureBlock(figures, "survival");
  if (figure === undefined) return { ...head, body: html`<p>No survival was modelled in this run.</p>` };
  const animals = figureBlock(figures, "survival-by-animals");
  const drivers = (name: string) =>
    figureBlock(figures, name) ?? html`<p>No covariate stands, so nothing here drives survival.</p>`;
  const ways = [{ key: "years", text: "years", body: html`${figure}${drivers("survival-drivers")}` }];
  if (animals !== undefined)
    ways.push({
      key: "animals",
      text: "animals",
      body: html`${animals}${drivers("survival-drivers-by-animals")}`,
    });
  return {
    ...head,
    body: html`<p>What the captures say of each interval on its own, what the chosen model makes of it, and what in that model moves it.</p>${switchBlock("counting", "Chosen counting", ways)}${refitsBlock(input, cast)}${caution("Apparent survival", "An animal that moves away for good looks like one that died. Where emigration changes with the weather, so does apparent survival.")}${caution("No forecast", rangeWords(input))}`,
  };
}

/** Beyond the range of what was seen nothing is said; the range itself is. */
function rangeWords({ screened, matrix }: ReportInput): string {
  const names = screened?.byYears.names ?? [];
  const ranges = names.flatMap((name) => {
    const range = recipeNamed(matrix, name)?.range;
    if (range === undefined) return [];
    const [low, high] = range;
    const unit = unitText(recipeNamed(matrix, name)?.unit ?? "");
    return [`${name} ${show(low)} to ${show(high)}${unit === "" ? "" : ` ${unit}`}`];
  });
  const seen = ranges.length === 0 ? "" : ` (${listWords(ranges)})`;
  return `The relations hold, if they hold, within the range seen here${seen}. Beyond it, and for coming years, this page says nothing.`;
}

export function comparisonSection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const head = { id: "comparison", title: "Comparison" };
  if (input.comparison === undefined)
    return { ...head, body: html`<p>Nothing was compared in this run.</p>` };
  const { candidates } = input.comparison;
  const least = (key: "aicc" | "bic") =>
    Math.min(...candidates.map((one) => one[key]).filter(Number.isFinite));
  const [aicc, bic] = [least("aicc"), least("bic")];
  return {
    ...head,
    body: html`<p>Ways to model survival, on the same captures, with the same recapture part. Share of deviance: how much of the difference between one survival for all intervals and one for each the model accounts for. AICc and BIC count animals and so flatter covariates wherever years differ for reasons of their own.</p>
${grid(
  cast,
  "Ways to model survival",
  [
    { text: "survival", look: "w" },
    { text: "parameters", look: "n" },
    { text: "−2 log L", look: "n" },
    { text: "AICc", look: "n" },
    { text: "above the least", look: "n" },
    { text: "BIC", look: "n" },
    { text: "above the least", look: "n" },
    { text: "share of deviance between years", look: "n" },
    { text: "F", unit: "(df)", look: "n" },
    { text: "p", look: "n" },
  ],
  candidates.map((one) => ({
    best: one.key === "chosen by years",
    cells: [
      html`${NAMES[one.key]}${termWords(one)}`,
      brief(one.fit.parameters),
      show(one.fit.minus2LogL),
      show(one.aicc),
      show(one.aicc - aicc),
      show(one.bic),
      show(one.bic - bic),
      Number.isFinite(one.deviance.share) ? percent(one.deviance.share) : "–",
      ...tested(one),
    ],
  })),
)}
<p>F and p stand only where the terms were fixed before survival was looked at. What was chosen on these data is tested by the permutation of years alone, in the section on the screen.</p>${predictionBlock(input, cast, NAMES)}
${agreementBlock(input, cast, figures)}`,
  };
}

/** Terms in full only where they are few; the tables hold the rest. */
function termWords(one: Candidate): Html | undefined {
  if (one.key === "constant" || one.key === "each interval" || one.key === "first component")
    return undefined;
  const terms = one.words.split(" + ");
  return html`<br><small>${terms.length <= 8 ? one.words : `${terms.length} terms`}</small>`;
}

/** F and p of a candidate that was chosen on these data do not exist, whatever the numbers are. */
function tested(one: Candidate): readonly Piece[] {
  if (one.chosenOnData) return ["–", html`<small>chosen on these data</small>`];
  const { f, df1, df2, p } = one.deviance;
  return Number.isFinite(f) ? [html`${show(f)} <small>(${df1}, ${df2})</small>`, pText(p)] : ["–", "–"];
}

/** Whether selection and components tell the same story. */
function agreementBlock(input: ReportInput, cast: Cast, figures: readonly Figure[]): Html | undefined {
  if (input.comparison === undefined) return undefined;
  const { agreement, verdict } = input.comparison;
  return html`<h3>Do selection and components agree?</h3><p>${verdict.agreement}</p>
<h3>In one paragraph</h3><p>Made from the numbers of this page; to be pasted and defended, and no stronger than they are.</p><blockquote id="paragraph"><p>${input.comparison.paragraph}</p></blockquote>
${
  agreement.survival.length > 0 &&
  foldedGrid(
    cast,
    "Do the fitted survivals agree?",
    [
      { text: "one way", look: "w" },
      { text: "another way", look: "w" },
      { text: "correlation of fitted survivals", look: "n" },
    ],
    agreement.survival.map((one) => ({
      cells: [NAMES[one.a], NAMES[one.b], Number.isNaN(one.r) ? "– (one is flat)" : show(one.r)],
    })),
  )
}
${figureBlock(figures, "effects")}
${foldedGrid(
  cast,
  "Effects by selection, by components and by ridge",
  [
    { text: "covariate" },
    { text: "lasso", unit: "per sd", look: "n" },
    { text: "refit of its selection", unit: "per sd", look: "n" },
    { text: "components carried back", unit: "per sd", look: "n" },
    { text: "ridge", unit: "per sd", look: "n" },
  ],
  agreement.effects.map((one) => ({
    covariate: one.name,
    cells: [
      covariateName(cast, one.name),
      brief(one.lasso),
      brief(one.refit),
      show(one.components),
      show(one.ridge),
    ],
  })),
)}
<p>Of ${agreement.chosen === 1 ? "the 1 covariate" : `the ${agreement.chosen} covariates`} the lasso chose (${covariateList(
    cast,
    agreement.effects.filter((one) => one.lasso !== 0).map((one) => one.name),
  )}), ${agreement.sameSign} ${agreement.sameSign === 1 ? "has" : "have"} the same sign by components.</p>`;
}
