import { type Matrix, pickColumns, zeros } from "../data/matrix.ts";
import type { Random } from "../math/random.ts";
import { principalComponents } from "./components.ts";
import type { KeepRule } from "./options.ts";
import type { Components } from "./result.ts";

interface Part {
  readonly theme: string;
  readonly columns: readonly number[];
  readonly own: Components;
  readonly kept: number;
  readonly because: string;
}

/**
 * Components of each theme by itself, put together as one set over all covariates: a component has loadings on its
 * own theme only. The kept ones of all themes stand first (so `kept` counts as it does elsewhere), themes in the order of
 * their first covariate. Shares and broken sticks are shares of the variance of all covariates. Scores of different themes
 * may correlate. A theme of a single covariate keeps it, since there is nothing to reduce.
 *
 * `themes`: one per column. Errors are those of `principalComponents`.
 */
export function componentsWithin(
  standard: Matrix,
  names: readonly string[],
  themes: readonly string[],
  keep: KeepRule,
  random?: Random,
): Components {
  const K = names.length;
  const parts = [...new Set(themes)].map((theme): Part => {
    const columns = names.map((_, k) => k).filter((k) => themes[k] === theme);
    const own = principalComponents(
      pickColumns(standard, columns),
      columns.map((k) => names[k]),
      keep,
      random,
    );
    const single = columns.length === 1;
    const because = single ? "a single covariate, kept as it is" : own.keptBecause;
    return { theme, columns, own, kept: single ? 1 : own.kept, because };
  });
  const axes = parts.flatMap((part) => part.own.sd.map((_, j) => ({ part, j })));
  const ordered = [
    ...axes.filter(({ part, j }) => j < part.kept),
    ...axes.filter(({ part, j }) => j >= part.kept),
  ];
  const m = ordered.length;
  const out = { loadings: zeros(K, m), correlations: zeros(K, m), scores: zeros(standard.rows, m) };
  const recipe = { centre: new Array<number>(K), scale: new Array<number>(K) };
  ordered.forEach(({ part: { columns, own }, j }, at) => {
    columns.forEach((k, i) => {
      out.loadings.data[k * m + at] = own.loadings.data[i * own.sd.length + j];
      out.correlations.data[k * m + at] = own.correlations.data[i * own.sd.length + j];
      recipe.centre[k] = own.centre?.[i] ?? 0;
      recipe.scale[k] = own.scale?.[i] ?? 1;
    });
    for (let i = 0; i < standard.rows; i++)
      out.scores.data[i * m + at] = own.scores.data[i * own.sd.length + j];
  });
  const ofAll = ({ part }: { part: Part }) => part.columns.length / K;
  const share = ordered.map((axis) => axis.part.own.share[axis.j] * ofAll(axis));
  let sum = 0;
  return {
    names,
    labels: ordered.map(({ part, j }) => `${part.theme} ${j + 1}`),
    themes: ordered.map(({ part }) => part.theme),
    sd: ordered.map(({ part, j }) => part.own.sd[j]),
    share,
    cumulative: share.map((value) => {
      sum += value;
      return sum;
    }),
    brokenStick: ordered.map((axis) => axis.part.own.brokenStick[axis.j] * ofAll(axis)),
    ...out,
    ...recipe,
    kept: parts.reduce((count, part) => count + part.kept, 0),
    keptBecause: parts.map(({ theme, because }) => `${theme}: ${because}`).join("; "),
  };
}
