import type { CandidateKey } from "../../compare/candidates.ts";
import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, percent, show } from "../numbers.ts";
import { grid } from "../parts.ts";

/** How each way of modelling survival foretells an interval that it has not seen. */
export function predictionBlock(
  { comparison, intervals }: ReportInput,
  cast: Cast,
  names: Readonly<Record<CandidateKey, string>>,
): Html | undefined {
  if (comparison === undefined) return undefined;
  const { prediction } = comparison;
  if (prediction === undefined)
    return html`<p>No interval was left out and foretold: that needs at least one candidate, enough intervals, and one survival for each of them, which models with time since marking, split years or covariates by stratum do not have.</p>`;
  const best = Math.max(...prediction.candidates.map((one) => one.gain));
  const unscored = prediction.unscored.map((t) => intervals[t]?.name ?? String(t + 1));
  return html`<h3>Foretelling an interval that was left out</h3><p>Each of ${counted(prediction.intervals, "interval")} was left out in turn and everything was done again without it: standardising, pruning, components, weights, paths, choices and refits. What was foretold is set against the logit of survival by that interval's own captures, with its sampling variance and the variation between years that the candidate leaves unexplained. This counts years and not animals.${unscored.length > 0 && ` Not scored, since the data do not determine their survival: ${unscored.join(", ")}.`}</p>${grid(
    cast,
    "Left-out intervals",
    [
      { text: "survival", look: "w" },
      { text: "foretold of what one survival for all misses", look: "n" },
      { text: "log score above that of one survival for all", look: "n" },
      { text: "standard error", look: "n" },
    ],
    prediction.candidates.map((one) => ({
      best: one.gain === best && best > 0,
      cells: [
        names[one.key],
        percent(one.share),
        one.key === "constant" ? "0" : show(one.gain),
        one.key === "constant" ? "–" : show(one.gainError),
      ],
    })),
  )}<p>Below 0: worse than foretelling the same survival every time. A gain that is less than about twice its standard error is not clearly one.${best > 0 && " The row with the greatest gain is shaded."}</p>`;
}
