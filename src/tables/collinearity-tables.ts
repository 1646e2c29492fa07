import type { Diagnosis } from "../collinearity/result.ts";
import type { Components } from "../components/result.ts";
import { number, text, truth, uniqueSlugs, whole } from "./columns.ts";
import type { Table } from "./table.ts";

export function correlationsTable(diagnosis: Diagnosis): Table {
  const { pearson, spearman } = diagnosis;
  const k = pearson.names.length;
  const beside = [diagnosis.partial, diagnosis.partialSpearman, diagnosis.changes];
  const rows = [];
  for (let i = 0; i < k; i++)
    for (let j = i + 1; j < k; j++) {
      const at = i * k + j;
      rows.push([
        pearson.names[i],
        pearson.names[j],
        pearson.n.data[at],
        pearson.r.data[at],
        pearson.p.data[at],
        pearson.holm.data[at],
        spearman.r.data[at],
        spearman.p.data[at],
        spearman.holm.data[at],
        ...beside.flatMap((one) =>
          one === undefined
            ? [Number.NaN, Number.NaN, Number.NaN]
            : [one.r.data[at], one.p.data[at], one.holm.data[at]],
        ),
        diagnosis.changes?.n.data[at],
      ]);
    }
  return {
    name: "correlations",
    title: "Correlations",
    description:
      "Every pair of covariates over the intervals that have both; two-sided p by the t distribution on n − 2 (n − 3 given the year), exact for ranks without ties up to 10 intervals, adjusted over all pairs by Holm's method. Given the year: of the columns with their linear trend taken out. Of changes: from each interval to the next.",
    columns: [
      text("first", "covariate", "first covariate"),
      text("second", "and", "second covariate"),
      whole("n", "n", "intervals", "intervals with both values"),
      number("pearson_r", "Pearson r", "1", "product-moment correlation"),
      number("pearson_p", "p", "1", "two-sided p"),
      number("pearson_p_holm", "p, Holm", "1", "adjusted over all pairs"),
      number("spearman_r", "Spearman r", "1", "rank correlation, ties at average ranks"),
      number("spearman_p", "p (ranks)", "1", "two-sided p"),
      number("spearman_p_holm", "p, Holm (ranks)", "1", "adjusted over all pairs"),
      number("given_year_r", "r given the year", "1", "partial correlation: of the detrended columns"),
      number("given_year_p", "p given the year", "1", "two-sided p"),
      number("given_year_p_holm", "p given the year, Holm", "1", "adjusted over all pairs"),
      number("given_year_spearman_r", "rank r given the year", "1", "partial rank correlation"),
      number("given_year_spearman_p", "p (ranks, given the year)", "1", "two-sided p"),
      number("given_year_spearman_p_holm", "p (ranks, given the year), Holm", "1", "adjusted over all pairs"),
      number("changes_r", "r of changes", "1", "of the differences from each interval to the next"),
      number("changes_p", "p of changes", "1", "two-sided p"),
      number("changes_p_holm", "p of changes, Holm", "1", "adjusted over all pairs"),
      whole("changes_n", "n of changes", "changes", "differences with both values"),
    ],
    rows,
  };
}

export function inflationTable(diagnosis: Diagnosis): Table {
  const clusterOf = (name: string) => diagnosis.clusters.findIndex((one) => one.members.includes(name));
  const step = new Map(diagnosis.pruning.map((one, i) => [one.dropped, { order: i + 1, ...one }]));
  return {
    name: "inflation",
    title: "Variance inflation, clusters and pruning",
    description:
      "An empty inflation with `exact` true means that the other covariates reproduce the column exactly.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      number("inflation", "variance inflation", "1", "diagonal of the inverse correlation matrix"),
      number("tolerance", "tolerance", "1", "1 over the inflation"),
      truth("exact", "exact dependency", "the others reproduce it exactly"),
      whole("cluster", "cluster", "1", "covariates of one number tell the same story"),
      truth("closest", "closest", "the member closest to all others of its cluster"),
      truth("kept", "kept by pruning", "left after stepwise pruning"),
      whole("pruned_step", "dropped at step", "1", "step at which pruning dropped it"),
      text("pruned_because", "dropped because", "the reason of that step"),
    ],
    rows: diagnosis.inflation.map((one) => {
      const finite = Number.isFinite(one.inflation);
      const cluster = clusterOf(one.name);
      return [
        one.name,
        finite ? one.inflation : Number.NaN,
        one.tolerance,
        !finite,
        cluster < 0 ? undefined : cluster + 1,
        cluster >= 0 && diagnosis.clusters[cluster].closest === one.name,
        diagnosis.kept.includes(one.name),
        step.get(one.name)?.order,
        step.get(one.name)?.reason,
      ];
    }),
  };
}

export function conditionTable(diagnosis: Diagnosis): Table {
  const { condition } = diagnosis;
  const slugs = uniqueSlugs(condition.names);
  const k = condition.names.length;
  return {
    name: "condition-indices",
    title: "Condition indices and variance proportions",
    description: "Columns scaled to unit length, intercept included (Belsley, Kuh & Welsch 1980).",
    columns: [
      whole("dimension", "dimension", "1", "1 for the largest singular value"),
      number("singular_value", "singular value", "1", "of the scaled columns"),
      number(
        "condition_index",
        "condition index",
        "1",
        "largest singular value over this one; empty if this one is 0",
      ),
      ...condition.names.map((name, j) =>
        number(`share_${slugs[j]}`, name, "1", "share of the coefficient's variance"),
      ),
    ],
    rows: condition.indices.map((index, d) => [
      d + 1,
      condition.singularValues[d],
      Number.isFinite(index) ? index : Number.NaN,
      ...Array.from({ length: k }, (_, j) => condition.proportions.data[d * k + j]),
    ]),
  };
}

export function componentsTable(components: Components): Table {
  return {
    name: "components",
    title: "Principal components",
    description: `Components of the correlation matrix. Kept: ${components.kept} (${components.keptBecause}).`,
    columns: [
      text("component", "component", "name of the component"),
      number("sd", "sd", "1", "square root of the eigenvalue"),
      number("share", "share", "1", "share of the variance"),
      number("cumulative", "cumulative", "1", "share up to here"),
      number("broken_stick", "broken stick", "1", "share expected under the broken-stick model"),
      truth("kept", "kept", "kept by the rule"),
    ],
    rows: components.labels.map((label, j) => [
      label,
      components.sd[j],
      components.share[j],
      components.cumulative[j],
      components.brokenStick[j],
      j < components.kept,
    ]),
  };
}

export function loadingsTable(components: Components): Table {
  const m = components.labels.length;
  const slugs = uniqueSlugs(components.labels);
  return {
    name: "component-loadings",
    title: "Loadings",
    description: "Unit vectors; in each the loading of largest magnitude is positive.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      ...components.labels.map((label, j) => number(slugs[j], label, "1", `loading on ${label}`)),
    ],
    rows: components.names.map((name, k) => [
      name,
      ...Array.from({ length: m }, (_, j) => components.loadings.data[k * m + j]),
    ]),
  };
}

export function scoresTable(
  components: Pick<Components, "labels" | "scores">,
  intervals: readonly string[],
): Table {
  const m = components.labels.length;
  const slugs = uniqueSlugs(components.labels);
  return {
    name: "component-scores",
    title: "Scores",
    description: "The intervals on the components.",
    columns: [
      text("interval", "interval", "name of the interval"),
      ...components.labels.map((label, j) => number(slugs[j], label, "1", `score on ${label}`)),
    ],
    rows: intervals.map((name, t) => [
      name,
      ...Array.from({ length: m }, (_, j) => components.scores.data[t * m + j]),
    ]),
  };
}
