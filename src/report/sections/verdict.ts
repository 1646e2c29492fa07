import type { Grade } from "../../compare/verdict.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted } from "../numbers.ts";
import type { Section } from "../parts.ts";

const GRADES: Readonly<Record<Grade, string>> = {
  firm: "firm: p at most 0.01",
  fair: "fair: p at most 0.05, or a firmer one with a doubt",
  faint: "faint: p at most 0.1, or a fair one with a doubt",
  none: "none: the data do not carry a selection",
  "not tested": "not tested: no permutation of years was run",
};

/** The answer first: four sentences made from the numbers, and how far they carry. */
export function verdictSection(input: ReportInput): Section {
  const verdict = input.comparison?.verdict;
  if (verdict === undefined)
    return {
      id: "verdict",
      title: "Verdict",
      body: html`<p class="headline">This run builds the covariate set: ${counted(input.matrix.names.length, "covariate")} over ${counted(input.intervals.length, "interval")}. No survival was modelled, so there is no verdict on what goes with it.</p>`,
    };
  return {
    id: "verdict",
    title: "Verdict",
    body: html`<p class="grade"><span>How far the data carry</span><b>${verdict.grade}</b><span>${GRADES[verdict.grade].split(": ")[1]}</span></p>
<p class="headline">${verdict.headline}</p>
<dl class="said"><div><dt>Counting animals</dt><dd>${verdict.animals}</dd></div><div><dt>Selection and components</dt><dd>${verdict.agreement}</dd></div><div><dt>Caution</dt><dd>${verdict.caution}</dd></div></dl>`,
  };
}
