import type { RefittedSet, ScreenResult } from "../../screen/screen.ts";
import { recipeNamed } from "../../tables/recipe-named.ts";
import type { Cast } from "../cast.ts";
import { unitText } from "../cast.ts";
import type { Figure } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, percent, pText, show } from "../numbers.ts";
import { covariateList, covariateName, figureBlock, foldedGrid, grid, type Section } from "../parts.ts";
import { randomIntervalsBlock } from "./random-intervals.ts";
import { resamplingBlock } from "./resampling.ts";
import { switchBlock } from "./switch.ts";
import { walkBlock } from "./walk.ts";

export function screenSection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const { screened } = input;
  const head = { id: "screen", title: "The screen" };
  if (screened === undefined)
    return { ...head, body: html`<p>No screen was run: this pipeline ends with the covariates.</p>` };
  const { byYears, byAnimals, options, choice, path, starts, weights } = screened;
  const worst = Math.max(...path.steps.map((one) => one.residual));
  return {
    ...head,
    body: html`<p>An adaptive lasso walks from a penalty under which no covariate stands (λ = ${show(path.lambdaMax)}) down to ${brief(options.downTo)} of it, in ${counted(path.steps.length, "step")}. Two choices are made from that path. One counts animals, and takes every animal for a witness of its own; the other counts years, because animals of one year share that year's weather and all else that went with it. The verdict rests on the years.</p>
<dl class="said"><div><dt>Counting years</dt><dd>${covariateList(cast, byYears.names)}</dd></div><div><dt>Counting animals</dt><dd>${covariateList(cast, byAnimals.names)}</dd></div></dl>
${figureBlock(figures, "criterion")}${figureBlock(figures, "coefficient-paths")}${walkBlock(input, cast)}
${band(screened, cast)}
${apart(screened, cast)}
<h3>Evidence: by years beside by animals</h3>
${evidenceTable(screened, cast)}
${permutationWords(screened)}
${figureBlock(figures, "evidence")}${figureBlock(figures, "chance")}
${
  byAnimals.names.join("\n") === byYears.names.join("\n")
    ? effectsTable(input, cast, byYears, "What both choices say, refitted without penalty")
    : switchBlock("counting", "Counting", [
        {
          key: "years",
          text: "years",
          body:
            effectsTable(input, cast, byYears, "What the choice by years says, refitted without penalty") ??
            html`<p>Counting years, no covariate stands.</p>`,
        },
        {
          key: "animals",
          text: "animals",
          body:
            effectsTable(
              input,
              cast,
              byAnimals,
              "What the choice by animals says, refitted without penalty",
            ) ?? html`<p>Counting animals, no covariate stands.</p>`,
        },
      ])
}
<p>These intervals take the choice as if it had been made before looking, and so are too narrow; they show size and direction. No F and no p is given for what was chosen on these data.</p>
${randomIntervalsBlock(input, screened, cast)}
${weighedTable(screened, cast)}
${resamplingBlock(input, cast)}
<h3>Certificates</h3>
<ul><li>Largest violation of the optimality conditions over the path: ${show(worst)} of λ<sub>max</sub>.</li><li>${starts.agree} of ${starts.starts} random starts ended at the solution at the chosen penalty (λ = ${show(choice.rows[choice.index].lambda)}).</li><li>Weights from ${weights.by === "ridge" ? "a ridge fit, since the maximum is too ill-conditioned to be trusted" : "the maximum-likelihood fit"}; condition number of its information ${show(weights.condition)}.</li></ul>`,
  };
}

/** What the data cannot tell apart, and what was let go for it. */
function apart(screened: ScreenResult, cast: Cast): Html | undefined {
  const rivals = screened.rivals.filter((one) => one.others.length > 0);
  const gone = screened.years.ambiguous.map((k) => screened.names[k]);
  if (rivals.length === 0 && gone.length === 0) return undefined;
  return html`<ul>${rivals.map((one) => html`<li>${covariateName(cast, one.chosen)} cannot be told from ${covariateList(cast, one.others)}: an exchange would cost next to nothing, and they tell much the same story.</li>`)}${gone.length > 0 && html`<li>Let go, because an unrelated covariate would have done as well: ${covariateList(cast, gone)}.</li>`}</ul>`;
}

function band(screened: ScreenResult, cast: Cast): Html | undefined {
  if (screened.band.length < 2) return undefined;
  return html`<p>Within 2 units of the least ${screened.options.chooseBy} there ${screened.band.length === 1 ? "is" : "are"} ${counted(screened.band.length, "set")}:</p><ul>${screened.band.map((names) => html`<li>${covariateList(cast, names)}</li>`)}</ul>`;
}

function evidenceTable(screened: ScreenResult, cast: Cast): Html {
  const { permutation, byYears, byAnimals } = screened;
  const row = (
    words: string,
    set: RefittedSet,
    median: number | undefined,
    wrong: number | undefined,
    p: string,
  ) => ({
    cells: [
      words,
      covariateList(cast, set.names),
      set.names.length === 0 ? "–" : percent(set.deviance.share),
      median === undefined ? "–" : percent(median),
      show(set.deviance.betweenYears),
      wrong === undefined ? "–" : percent(wrong),
      p,
    ],
  });
  return grid(
    cast,
    "Two ways to count",
    [
      { text: "counting" },
      { text: "chosen", look: "w" },
      { text: "share of deviance between years", look: "n" },
      { text: "its median, years permuted", look: "n" },
      { text: "ĉ between years", look: "n" },
      { text: "chooses something, years permuted", look: "n" },
      { text: "family-wise p", look: "n" },
    ],
    [
      row(
        "years",
        byYears,
        permutation?.medianShareByYears,
        permutation?.falseByYears,
        permutation === undefined ? "not tested" : pText(permutation.p),
      ),
      row("animals", byAnimals, permutation?.medianShareByAnimals, permutation?.falseByAnimals, "–"),
    ],
  );
}

function permutationWords({ permutation, shifts }: ScreenResult): Html {
  if (permutation === undefined)
    return html`<p class="note">No permutation of years was run, so nothing above is tested.</p>`;
  return html`<p>Each of ${counted(permutation.replicates, "permutation")} gave the intervals each other's covariates and repeated everything: weights, path, both choices. The family-wise p is the share of permutations that found at least as much, the study itself counted in. ĉ between years above 1 says that survival varies between years beyond what the chosen covariates explain.${shifts !== undefined && ` Of the circular shifts of the years, which keep whatever runs on from year to year, ${percent(shifts)} do as well, the study itself counted in; they are too few for a test, but where another one does as well the verdict is faint at most.`}</p>`;
}

/** Effects per sd and, where the recipe allows, per unit of the covariate as it was recorded. */
function effectsTable(input: ReportInput, cast: Cast, set: RefittedSet, caption: string): Html | undefined {
  if (set.names.length === 0) return undefined;
  const rows = set.names.map((name) => {
    const k = set.fit.names.indexOf(name);
    const [value, se] = [set.fit.estimates[k], set.fit.se[k]];
    const half = 1.959963984540054 * se;
    return {
      covariate: name,
      cells: [
        covariateName(cast, name),
        show(value),
        show(se),
        `${show(value - half)} to ${show(value + half)}`,
        show(Math.exp(value)),
        perUnit(input, name, value),
      ],
    };
  });
  return grid(
    cast,
    caption,
    [
      { text: "covariate" },
      { text: "effect on logit survival", unit: "per sd", look: "n" },
      { text: "standard error", look: "n" },
      { text: "95 % interval", look: "n" },
      { text: "odds of surviving times", unit: "per sd", look: "n" },
      { text: "effect per unit", look: "n" },
    ],
    rows,
  );
}

function perUnit(input: ReportInput, name: string, value: number): string {
  const recipe = recipeNamed(input.matrix, name);
  if (recipe === undefined) return "–";
  const unit = unitText(recipe.unit) || "unit";
  if (recipe.transform === undefined) return `${show(value / recipe.scale)} per ${unit}`;
  if (recipe.transform === "log") return `${show((value / recipe.scale) * Math.LN2)} per doubling`;
  return `– (after ${recipe.transform})`;
}

function weighedTable(screened: ScreenResult, cast: Cast): Html | undefined {
  const rows = screened.weighed.filter((one) => one.names.length > 0).slice(0, 12);
  if (rows.length === 0) return undefined;
  return foldedGrid(
    cast,
    "Sets weighed by years, after pruning",
    [
      { text: "set", look: "w" },
      { text: "gain over no covariate, after its price", look: "n" },
    ],
    rows.map((one, i) => ({
      best: i === 0 && one.gain > 0,
      cells: [covariateList(cast, one.names), show(one.gain)],
    })),
  );
}
