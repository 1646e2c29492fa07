import type { Components } from "../../components/result.ts";
import type { Cast } from "../cast.ts";
import { shortR } from "../figures/signed.ts";
import { type Html, html } from "../html.ts";
import { counted, percent, show } from "../numbers.ts";
import { covariateName, foldedGrid, grid } from "../parts.ts";

/** Loadings of the components kept with their resampled intervals. */
export function intervalsBlock(components: Components, cast: Cast): Html | undefined {
  const { names, labels, loadings, intervals } = components;
  if (intervals === undefined) return undefined;
  const k = Math.min(intervals.congruence.length, 8);
  const m = labels.length;
  const wide = intervals.congruence.length;
  return html`${foldedGrid(
    cast,
    "Loadings with resampled intervals",
    [{ text: "covariate" }, ...labels.slice(0, k).map((text) => ({ text, look: "n" as const }))],
    names.map((name, i) => ({
      covariate: name,
      cells: [
        covariateName(cast, name),
        ...Array.from(
          { length: k },
          (_, j) =>
            html`${shortR(loadings.data[i * m + j])} <small>${shortR(intervals.lower.data[i * wide + j])} to ${shortR(intervals.upper.data[i * wide + j])}</small>`,
        ),
      ],
    })),
  )}<p>Intervals of ${percent(intervals.level)} over ${counted(intervals.replicates, "resample")} of the study's intervals, axes matched before they are counted so that an exchange of axes is not taken for doubt about loadings. Mean congruence with the original axis: ${labels
    .slice(0, k)
    .map((text, j) => `${text} ${show(intervals.congruence[j])}`)
    .join(", ")}; near 1 is a component that is well defined.</p>`;
}

/** What the components kept can be named after. */
export function simpleBlock({ simplified, kept }: Components, cast: Cast): Html | undefined {
  if (simplified === undefined) return undefined;
  const { by, labels, share, ledBy } = simplified;
  const how =
    by === "varimax"
      ? `The ${counted(kept, "component")} kept, turned by varimax so that each goes with few covariates; together they hold what the unturned ones hold, and a model on all of them fits the same. Named are covariates with |r| of 0.6 or more.`
      : "Sparse axes in place of the components kept: each has loadings on few covariates and none on the others, and holds at least nine tenths of the variance that the full axis would. Their scores may correlate.";
  return html`<h3>Components that can be named</h3><p>${how}</p>${grid(
    cast,
    by === "varimax" ? "After varimax" : "Sparse loadings",
    [
      { text: "component" },
      { text: "share of variance", look: "n" },
      { text: by === "varimax" ? "goes with (r)" : "made of (loading)", look: "w" },
    ],
    labels.map((text, j) => ({
      cells: [
        text,
        percent(share[j]),
        ledBy[j].length === 0
          ? "no single covariate"
          : ledBy[j].map(({ name, r }, i) => [i > 0 && ", ", covariateName(cast, name), ` ${shortR(r)}`]),
      ],
    })),
  )}`;
}
