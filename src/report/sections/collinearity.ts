import { largeWords } from "../../data/words.ts";
import type { Cast } from "../cast.ts";
import type { Figure } from "../figure.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted, percent, sentence, show } from "../numbers.ts";
import { caution, covariateList, covariateName, figureBlock, foldedGrid, type Section } from "../parts.ts";
import { clustersBlock, trendBlock } from "./clusters.ts";
import { intervalsBlock, simpleBlock } from "./loadings.ts";
import { switchBlock } from "./switch.ts";

const ABSENT = "was not asked for in this run.";

export function storySection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const { diagnosis, warn } = input;
  const head = { id: "same-story", title: "Same story" };
  if (diagnosis === undefined) return { ...head, body: html`<p>A diagnosis of collinearity ${ABSENT}</p>` };
  const groups = diagnosis.clusters.filter((one) => one.members.length > 1);
  const { indices, names, proportions } = diagnosis.condition;
  const rows = indices.flatMap((index, i) => {
    const involved = names.filter((_, k) => proportions.data[i * proportions.columns + k] > 0.5);
    const marked = index > warn.condition && involved.length >= 2;
    // where there are many, those that say nothing are left to the tables
    if (indices.length > 16 && index <= warn.condition && involved.length < 2) return [];
    return {
      best: marked,
      cells: [
        String(i + 1),
        show(index),
        involved.length === 0 ? "–" : covariateList(cast, involved),
        marked ? "yes" : "no",
      ],
    };
  });
  return {
    ...head,
    body: html`<p>Correlations rest on the intervals that both covariates have; all else on the ${diagnosis.completeRows ?? input.intervals.length} intervals without a missing cell.</p><p>Covariates that rise and fall together cannot be told apart by any screen: what one of them is chosen for, its companions may have done. ${groups.length === 0 ? "No two covariates stand close enough to form a cluster." : `${counted(groups.length, "cluster")} of two or more:`}</p>
${groups.length > 0 && html`<ul>${groups.map((one) => html`<li>${covariateList(cast, one.members)}; closest to all the others: ${covariateName(cast, one.closest)}</li>`)}</ul>`}
${diagnosis.allDepend ? html`<p class="note">There are as many covariates as intervals, or more, so every covariate is an exact sum of the others and all inflation is infinite.</p>` : diagnosis.dependencies.length > 0 && html`<p class="note">Exact dependencies:</p><ul>${diagnosis.dependencies.map((one) => html`<li>${one.relation ?? covariateList(cast, one.names)}</li>`)}</ul>`}
${correlations(figures)}${trendBlock(input, cast)}${clustersBlock(input, cast)}${figureBlock(figures, "inflation")}
<p>${warningWords(rows.filter((one) => one.best).length, rows.length)}</p>
${foldedGrid(cast, "Condition indices", [{ text: "dimension", look: "n" }, { text: "condition index", look: "n" }, { text: "more than half the variance of", look: "w" }, { text: "warning" }], rows)}
<p>Condition indices are those of the columns scaled to unit length, with the intercept; above ${brief(warn.condition)} with two or more proportions above 0.5 is the usual warning. The condition number of the correlation matrix, which is another thing, is ${largeWords(diagnosis.correlationCondition)}.</p>
${diagnosis.pruning.length === 0 && html`<p>Nothing was pruned: no inflation is above ${brief(warn.inflation)} and no decision drops a covariate.</p>`}
${caution("Association is not cause", "A covariate that goes with survival over these years may stand for any covariate of its cluster, and for another that was never measured.")}
${diagnosis.pruning.length > 0 && html`<h3>Pruning</h3><ol>${diagnosis.pruning.map((one) => html`<li>${covariateName(cast, one.dropped)} (inflation ${largeWords(one.inflation)}): ${one.reason.replace(/= -/g, "= −")}</li>`)}</ol><p>Left after pruning: ${covariateList(cast, diagnosis.kept)}.</p>`}`,
  };
}

function warningWords(warned: number, shown: number): string {
  return warned === 0
    ? "No dimension of the table below ties two or more covariates together so closely that a warning is due."
    : `${counted(warned, "dimension")} of the ${shown} below ${warned === 1 ? "ties" : "tie"} covariates together closely enough for a warning.`;
}

/** As the covariates are, and with shared trends taken out. */
function correlations(figures: readonly Figure[]): Html | undefined {
  const [plain, detrended] = ["correlation", "correlation-detrended"].map((name) =>
    figureBlock(figures, name),
  );
  if (plain === undefined || detrended === undefined) return plain;
  return switchBlock("trend", "Correlation", [
    { key: "plain", text: "as they are", body: plain },
    { key: "detrended", text: "without shared trends", body: detrended },
  ]);
}

export function componentsSection(input: ReportInput, cast: Cast, figures: readonly Figure[]): Section {
  const { components } = input;
  const head = { id: "components", title: "Components" };
  if (components === undefined) return { ...head, body: html`<p>A component analysis ${ABSENT}</p>` };
  const together = components.kept > 0 ? components.cumulative[components.kept - 1] : 0;
  return {
    ...head,
    body: html`<p>Principal components of the correlation matrix sum up the covariates without a look at survival. ${counted(components.kept, "component")} of ${components.labels.length} kept, carrying ${percent(together)} of the variance together. ${sentence(components.keptBecause)}.</p>${figureBlock(figures, "component-variance")}${figureBlock(figures, "component-loadings")}${intervalsBlock(components, cast)}${simpleBlock(components, cast)}`,
  };
}
