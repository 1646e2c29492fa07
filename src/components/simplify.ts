import { unitColumns } from "../collinearity/decomposition.ts";
import { type Matrix, zeros } from "../data/matrix.ts";
import { signOf } from "./components.ts";
import type { Components, SimplifiedComponents } from "./result.ts";
import { rotateComponents } from "./rotate.ts";
import { sparseAxes } from "./sparse.ts";

/**
 * The components kept of one set of columns, made simple: turned by varimax, or replaced by as many sparse axes.
 * `standard`: n × K, the matrix the components were made from. Undefined where none was kept.
 */
export function simplifyComponents(
  standard: Matrix,
  components: Components,
  by: "varimax" | "sparse",
): SimplifiedComponents | undefined {
  const { names, kept } = components;
  if (kept === 0) return undefined;
  if (by === "varimax") {
    const { labels, correlations, scores, share, ledBy } = rotateComponents(components);
    return { by, names, labels, loadings: correlations, scores, share, ledBy };
  }
  const { unit } = unitColumns(standard);
  const { axes, cumulative } = sparseAxes(unit, kept);
  const K = names.length;
  for (let j = 0; j < kept; j++) {
    const sign = signOf(axes, j, names);
    for (let k = 0; k < K; k++) axes.data[k * kept + j] *= sign;
  }
  const scores = zeros(standard.rows, kept);
  const freedom = Math.sqrt(standard.rows - 1);
  for (let i = 0; i < standard.rows; i++)
    for (let k = 0; k < K; k++)
      for (let j = 0; j < kept; j++)
        scores.data[i * kept + j] += unit.data[i * K + k] * freedom * axes.data[k * kept + j];
  return {
    by,
    names,
    labels: Array.from({ length: kept }, (_, j) => `sparse ${j + 1}`),
    loadings: axes,
    scores,
    share: cumulative.map((value, j) => value - (j === 0 ? 0 : cumulative[j - 1])),
    ledBy: Array.from({ length: kept }, (_, j) =>
      names
        .map((name, k) => ({ name, r: axes.data[k * kept + j] }))
        .filter(({ r }) => r !== 0)
        .sort((a, b) => Math.abs(b.r) - Math.abs(a.r) || (a.name < b.name ? -1 : 1)),
    ),
  };
}
