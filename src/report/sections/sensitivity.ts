import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { counted, percent, pText, show } from "../numbers.ts";
import { covariateList, figureBlock, foldedGrid, type Section } from "../parts.ts";
import { influenceBlock } from "./influence.ts";

/** Other ways to do the study, and what each of them selects. */
export function sensitivitySection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const head = { id: "sensitivity", title: "Sensitivity" };
  const sensitivity = input.comparison?.sensitivity;
  if (sensitivity === undefined)
    return {
      ...head,
      body: html`<p>The pipeline file states no other way to do the study.</p>${influenceBlock(input, cast)}`,
    };
  const { analyses, tried, search, sentence } = sensitivity;
  const counts =
    search === undefined
      ? html`<p>Each of the ${counted(tried, "analysis", "analyses")}, the study itself counted in, is a chance to find something that is not there. The pipeline file can have the permutation of years wrapped around all of them (<code>sensitivity: permutations</code>).</p>`
      : html`<p>${counted(tried, "analysis", "analyses")} of the same captures were run, the study itself counted in. The permutation of years was wrapped around all of them: with the years in another order, the best of all analyses found as much in a share that gives the family-wise p of the whole search, ${pText(search.p)} (${counted(search.replicates, "permutation")}); in ${percent(search.falseByYears)} of permutations some analysis chose something.</p>`;
  return {
    ...head,
    body: html`<p>${sentence}</p>${counts}${figureBlock(figures, "sensitivity")}${foldedGrid(
      cast,
      "Analyses and what they select",
      [
        { text: "analysis", look: "w" },
        { text: "chosen, counting years", look: "w" },
        { text: "chosen, counting animals", look: "w" },
        { text: "share of deviance", look: "n" },
        { text: "gain", look: "n" },
        { text: "recapture" },
      ],
      analyses.map((one, i) => ({
        best: i === 0,
        cells: [
          html`${one.name}${one.changes !== "" && html`<br><small>${one.changes}</small>`}`,
          one.failed === undefined
            ? [
                covariateList(cast, one.byYears),
                one.rivals.map(
                  ({ chosen, others }) =>
                    html`<br><small>${chosen}, or ${covariateList(cast, others)}</small>`,
                ),
              ]
            : html`<small>not run: ${one.failed}</small>`,
          covariateList(cast, one.byAnimals),
          percent(one.share),
          show(one.gain),
          one.recapture,
        ],
      })),
    )}${influenceBlock(input, cast)}`,
  };
}
