import type { ScreenResult } from "../../screen/screen.ts";
import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import { percent, show } from "../numbers.ts";
import { covariateList, covariateName, grid } from "../parts.ts";

/** The second opinion: what a model with a random effect of each interval says. */
export function randomIntervalsBlock(
  { randomIntervals, byYears }: ScreenResult,
  cast: Cast,
): Html | undefined {
  if (randomIntervals === undefined) return undefined;
  const { sigmaWithout, sigma, explained, effects, chosen, byMemory, settled } = randomIntervals;
  const head = html`<h3>A second opinion: a random effect of each interval</h3>`;
  if (!settled)
    return html`${head}<p>The model with random interval effects did not reach an optimum on these data, so it says nothing here.</p>`;
  const left =
    byYears.names.length === 0
      ? ""
      : ` Beside the covariates chosen by years ${show(sigma)} is left${Number.isNaN(explained) ? "" : `: they account for ${percent(explained)} of the variance between years`}.`;
  return html`${head}<p>Here survival varies between years by an effect of each interval, normal on the logit scale, and that variation is part of the model instead of being divided out. Without covariates its standard deviation is ${show(sigmaWithout)} (restricted maximum likelihood).${left}</p>
<p>From the same candidates this model chooses: ${covariateList(cast, chosen)}.${byMemory.length > 0 && html` Let go, because covariate and survival both run on from year to year: ${covariateList(cast, byMemory)}.`}</p>
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
