import type { RecapturePart } from "../../survival/options.ts";
import type { Cast } from "../cast.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, show } from "../numbers.ts";
import { caution, grid, type Section } from "../parts.ts";
import { goodnessBlock } from "./goodness.ts";

const WORDS: Readonly<Record<RecapturePart, string>> = {
  constant: "the same at every occasion",
  effort: "by effort",
  covariates: "by covariates of the interval before",
  strata: "by stratum",
  "effort and strata": "by effort and stratum",
  "each occasion and strata": "its own at each occasion, shifted by stratum",
  "each occasion": "its own at each occasion",
};

export function recaptureSection({ screened, goodness }: ReportInput, cast: Cast): Section {
  const head = { id: "recapture", title: "Recapture" };
  if (screened === undefined) return { ...head, body: html`<p>No captures were modelled in this run.</p>` };
  const { rows, chosen, because, intervalFit } = screened.recapture;
  const least = Math.min(...rows.map((one) => one.aicc).filter(Number.isFinite));
  const rates = intervalFit.recapture;
  const first = rates[0];
  const constant = chosen === "constant" && first !== undefined;
  return {
    ...head,
    body: html`<p>The chance of being seen is settled before any covariate is looked at: weather that keeps animals from being seen would otherwise pass for weather that kills them. All ways below have one survival per interval, so that survival is left free while recapture is settled. The bias is not small: in simulated studies where weather moved recapture alone, a recapture wrongly held constant made the weather look like a cause of death in more than half of them.</p>
${grid(
  cast,
  "Recapture compared",
  [
    { text: "recapture", look: "w" },
    { text: "parameters", look: "n" },
    { text: "−2 log L", look: "n" },
    { text: "AICc", look: "n" },
    { text: "AICc above the least", look: "n" },
    { text: "in use" },
  ],
  rows.map((one) => ({
    best: one.part === chosen,
    cells: [
      WORDS[one.part],
      String(one.parameters),
      show(one.minus2LogL),
      show(one.aicc),
      show(one.aicc - least),
      one.part === chosen ? "yes" : "",
    ],
  })),
)}
<p>In use: recapture ${WORDS[chosen]} (${because}).${constant && ` Under one survival per interval it is ${show(first.value)} (95 % interval ${show(first.low)} to ${show(first.high)}).`}${!constant && rates.length > 0 && ` Over ${counted(rates.length, "occasion and stratum", "occasions and strata")} it runs from ${show(Math.min(...rates.map((one) => one.value)))} to ${show(Math.max(...rates.map((one) => one.value)))}.`}</p>
${goodnessBlock(goodness, cast)}
${caution("Animals first", "Catching and marking animals and visiting roosts, nests or dens needs permits, training and care for their welfare. A low chance of being seen is not a reason to disturb a site once more.")}`,
  };
}
