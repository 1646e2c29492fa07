import type { Components } from "../components/result.ts";
import { number, text, uniqueSlugs } from "./columns.ts";
import type { Table } from "./table.ts";

/** Loadings of the components kept with their resampled intervals; nothing where none were asked for. */
export function loadingIntervalsTable({ names, labels, loadings, intervals }: Components): readonly Table[] {
  if (intervals === undefined) return [];
  const k = intervals.congruence.length;
  const m = labels.length;
  return [
    {
      name: "loading-intervals",
      title: "Loadings with resampled intervals",
      description: `Percentile intervals (${100 * intervals.level} %) over ${intervals.replicates} resamples of the study's intervals, axes matched to the original ones (Peres-Neto, Jackson & Somers 2003).`,
      columns: [
        text("component", "component", "name of the component"),
        text("covariate", "covariate", "name of the covariate"),
        number("loading", "loading", "1", "loading on all intervals"),
        number("low", "low", "1", "lower end"),
        number("high", "high", "1", "upper end"),
        number("congruence", "congruence", "1", "mean congruence of the component's axis over resamples"),
      ],
      rows: Array.from({ length: k }, (_, j) => j).flatMap((j) =>
        names.map((name, i) => [
          labels[j],
          name,
          loadings.data[i * m + j],
          intervals.lower.data[i * k + j],
          intervals.upper.data[i * k + j],
          intervals.congruence[j],
        ]),
      ),
    },
  ];
}

/** Varimax or sparse loadings and the scores on them; nothing where none were asked for. */
export function simplifiedTables(
  { names, simplified }: Components,
  intervals: readonly string[],
): readonly Table[] {
  if (simplified === undefined) return [];
  const { by, labels, loadings, scores } = simplified;
  const k = labels.length;
  const slugs = uniqueSlugs(labels);
  const what =
    by === "varimax"
      ? "Correlations of covariates with the components kept after a varimax rotation (Kaiser 1958)."
      : "Sparse loadings by regularised rank-one approximation (Shen & Huang 2008): unit vectors, zeros exact.";
  return [
    {
      name: "simple-loadings",
      title: by === "varimax" ? "Loadings after varimax" : "Sparse loadings",
      description: what,
      columns: [
        text("covariate", "covariate", "name of the covariate"),
        ...labels.map((label, j) => number(slugs[j], label, "1", `loading on ${label}`)),
      ],
      rows: names.map((name, i) => [name, ...Array.from({ length: k }, (_, j) => loadings.data[i * k + j])]),
    },
    {
      name: "simple-scores",
      title: by === "varimax" ? "Scores after varimax" : "Scores on the sparse loadings",
      description: "The intervals on the simple components.",
      columns: [
        text("interval", "interval", "name of the interval"),
        ...labels.map((label, j) => number(slugs[j], label, "1", `score on ${label}`)),
      ],
      rows: intervals.map((name, t) => [
        name,
        ...Array.from({ length: k }, (_, j) => scores.data[t * k + j]),
      ]),
    },
  ];
}
