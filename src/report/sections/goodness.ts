import type { GoodnessOfFit } from "../../survival/goodness-of-fit.ts";
import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import { pText, show } from "../numbers.ts";
import { grid } from "../parts.ts";

/** Whether the general model, which all others lean on, fits the histories. */
export function goodnessBlock(goodness: GoodnessOfFit | undefined, cast: Cast): Html | undefined {
  if (goodness === undefined) return undefined;
  const strata = new Set(goodness.components.map((one) => one.stratum).filter((one) => one !== undefined))
    .size;
  const shown = goodness.components.filter((one) => (strata > 1 ? one.stratum === undefined : true));
  const { overall, missing } = goodness;
  return html`<h3>Does the general model fit?</h3>
<p>All models here rest on one in which survival and recapture differ for every interval and animals are alike. Four tables at each occasion ask whether animals are: ĉ between animals is χ² over its degrees of freedom, and near 1 where they are.</p>
${grid(
  cast,
  "Fit of the general model",
  [
    { text: "question", look: "w" },
    { text: "χ²", look: "n" },
    { text: "degrees of freedom", look: "n" },
    { text: "p", look: "n" },
  ],
  [
    ...shown.map((one) => ({
      cells: [one.component, show(one.chiSquare), String(one.df), one.df === 0 ? "–" : pText(one.p)],
    })),
    {
      cells: [
        "all together",
        show(overall.chiSquare),
        String(overall.df),
        overall.df === 0 ? "–" : pText(overall.p),
      ],
    },
  ],
)}
<p>ĉ between animals: ${Number.isNaN(overall.betweenAnimals) ? "not to be had from these data" : show(overall.betweenAnimals)}. QAICc and QBIC divide by it, where the pipeline file asks for one of them; AICc and BIC do not.${missing.map((one) => ` ${one.component}: ${one.reason}.`)}</p>`;
}
