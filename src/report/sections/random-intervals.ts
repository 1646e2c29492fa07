import { listWords } from "../../data/words.ts";
import type { ScreenResult } from "../../screen/screen.ts";
import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { percent, show } from "../numbers.ts";
import { covariateList, covariateName, grid } from "../parts.ts";

/** What varies between years, what the covariates account for of it, and what another rule that counts years says. */
export function randomIntervalsBlock(input: ReportInput, screened: ScreenResult, cast: Cast): Html {
  const { randomIntervals, byYears, yearsBy, secondOpinion, byMemory } = screened;
  if (randomIntervals === undefined)
    return html`<p class="note">With time since marking, split intervals or covariates by stratum the choice by years is made by analysis of deviance; a random effect of each interval is not to be had there.</p>`;
  const { sigmaWithout, sigma, explained, effects, atBound, settled } = randomIntervals;
  const head = html`<h3>What varies between years</h3>`;
  const opinion = html`<p>${byMemory.length > 0 && html`Let go, because covariate and survival both run on from year to year, so that these years are worth fewer: ${covariateList(cast, byMemory)}. `}A second opinion: from the same candidates ${secondOpinion?.by === "random intervals" ? "the rule by random intervals" : "an analysis of deviance"} chooses ${covariateList(cast, secondOpinion?.names ?? [])}.</p>`;
  if (!settled)
    return html`${head}<p>The model with random interval effects did not reach an optimum on these data, so the choice by years is not to be relied on.</p>${opinion}`;
  const none =
    sigmaWithout === 0
      ? " It is at its bound, 0: these captures show no variation between years beyond chance, which few animals a year cannot either."
      : "";
  const left =
    byYears.names.length === 0
      ? ""
      : ` Beside the covariates chosen by years ${sigma === 0 ? "none is left (0)" : `${show(sigma)} is left`}${Number.isNaN(explained) ? "" : explained < 0 ? ": they account for none of the variance between years" : `: they account for ${percent(explained)} of the variance between years`}.`;
  const bound =
    atBound.length === 0
      ? ""
      : ` In ${listWords(atBound.map((t) => input.intervals[t].name))} survival on its own runs to 0 or 1; here ${atBound.length === 1 ? "it is" : "they are"} drawn back towards the other years and still ${atBound.length === 1 ? "speaks" : "speak"}.`;
  return html`${head}<p>${yearsBy === "random intervals" ? "The choice by years rests on a model in which" : "A lone candidate is tested by its analysis of deviance. Beside it stands a model in which"} survival varies between years by an effect of each interval, normal on the logit scale, so that this variation is part of the model. Without covariates its standard deviation is ${show(sigmaWithout)} (restricted maximum likelihood).${none}${left}${bound}</p>
${opinion}
${
  effects.length > 0 &&
  grid(
    cast,
    "Effects with variation between years allowed for",
    [
      { text: "covariate" },
      { text: "effect on logit survival", unit: "per sd", look: "n" },
      { text: "standard error", look: "n" },
      { text: "95 % interval", look: "n" },
    ],
    effects.map((one) => ({
      covariate: one.name,
      cells: [
        covariateName(cast, one.name),
        show(one.estimate),
        show(one.se),
        `${show(one.low)} to ${show(one.high)}`,
      ],
    })),
  )
}<p class="note">These intervals allow for years; they still take the choice as made before looking.</p>`;
}
