import type { Diagnosis } from "../collinearity/result.ts";
import { number, text, truth, whole } from "./columns.ts";
import type { Table } from "./table.ts";

/** What keeping each member of each cluster would keep of the others. */
export function clustersTable(diagnosis: Diagnosis): Table {
  return {
    name: "clusters",
    title: "Clusters and what each choice would keep",
    description:
      "Average linkage on 1 − |r| (Pearson), cut at the pipeline's limit. Covariates that stand alone are clusters of one.",
    columns: [
      whole("cluster", "cluster", "1", "number of the cluster"),
      whole("members", "members", "1", "covariates in it"),
      text("keep", "if one kept", "the covariate that would be kept for all"),
      number("mean_r", "mean |r|", "1", "mean absolute correlation with the others"),
      number("least_r", "least |r|", "1", "least absolute correlation with another member"),
      truth("closest", "closest", "the member closest to all the others"),
    ],
    rows: diagnosis.clusters.flatMap((one, c) =>
      (one.choices ?? []).map(({ keep, meanR, leastR }) => [
        c + 1,
        one.members.length,
        keep,
        meanR,
        leastR,
        keep === one.closest,
      ]),
    ),
  };
}

/** The tree of clusters, merge by merge, so that another cut can be tried. */
export function mergesTable(diagnosis: Diagnosis): Table {
  const { merges, pearson } = diagnosis;
  const below = (one: number): readonly number[] =>
    one < 0 ? [-1 - one] : [...below(merges[one].left), ...below(merges[one].right)];
  const words = (one: number) =>
    below(one)
      .map((k) => pearson.names[k])
      .join(", ");
  return {
    name: "cluster-tree",
    title: "The tree of clusters",
    description:
      "Merges from the closest to the farthest; a cut at some mean |r| keeps those at or above it.",
    columns: [
      whole("merge", "merge", "1", "in order"),
      text("left", "one side", "covariates on one side"),
      text("right", "other side", "covariates on the other side"),
      number("mean_r", "mean |r| between", "1", "mean absolute correlation between the two sides"),
    ],
    rows: merges.map(({ left, right, height }, i) => [i + 1, words(left), words(right), 1 - height]),
  };
}
