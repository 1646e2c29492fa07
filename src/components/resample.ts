import { Matrix as Dense, SVD } from "ml-matrix";
import { unitColumns } from "../collinearity/decomposition.ts";
import { type Matrix, zeros } from "../data/matrix.ts";
import { dot } from "../math/products.ts";
import { quantile7 } from "../math/quantile.ts";
import type { Random } from "../math/random.ts";
import type { Components, LoadingIntervals } from "./result.ts";

/**
 * Percentile intervals of the kept components' loadings over bootstrap samples of the rows. In each sample the axes are
 * matched to the original ones and turned to the same side before they are counted, so that an exchange or reversal of
 * axes is not taken for uncertainty of loadings (Peres-Neto, Jackson & Somers 2003, Ecology 84:2347–2363; matching by
 * congruence, the pair with the largest |u'v| first). A sample in which a covariate is constant is left out and counted.
 *
 * `standard`: n × K, the matrix the components were made from; `level` e.g. 0.95; quantiles of type 7.
 */
export function loadingIntervals(
  standard: Matrix,
  components: Components,
  options: { readonly replicates: number; readonly level: number; readonly count?: number },
  random: Random,
): LoadingIntervals {
  const { names, loadings, sd } = components;
  const K = names.length;
  const k = Math.min(options.count ?? components.kept, sd.length);
  const original = Array.from({ length: k }, (_, j) =>
    Float64Array.from({ length: K }, (_, i) => loadings.data[i * sd.length + j]),
  );
  const draws: Float64Array[][] = [];
  for (let replicate = 0; replicate < options.replicates; replicate++) {
    const axes = resampledAxes(standard, random);
    if (axes !== undefined) draws.push(matchAxes(original, axes));
  }
  const tail = (1 - options.level) / 2;
  const lower = zeros(K, k);
  const upper = zeros(K, k);
  for (let i = 0; i < K; i++)
    for (let j = 0; j < k; j++) {
      const values = draws.map((draw) => draw[j][i]);
      lower.data[i * k + j] = quantile7(values, tail);
      upper.data[i * k + j] = quantile7(values, 1 - tail);
    }
  const congruence = original.map(
    (axis, j) => draws.reduce((sum, draw) => sum + dot(axis, draw[j]), 0) / draws.length,
  );
  return {
    level: options.level,
    replicates: draws.length,
    leftOut: options.replicates - draws.length,
    lower,
    upper,
    congruence,
  };
}

/** Principal axes of a bootstrap sample of the rows; undefined if a column does not vary in it. */
function resampledAxes(standard: Matrix, random: Random): Float64Array[] | undefined {
  const { rows, columns: K, data } = standard;
  const sample = zeros(rows, K);
  for (let i = 0; i < rows; i++) {
    const from = random.below(rows);
    sample.data.set(data.subarray(from * K, (from + 1) * K), i * K);
  }
  const { unit, length } = unitColumns(sample);
  if (length.includes(0)) return undefined;
  const dense = Dense.from1DArray(rows, K, unit.data);
  const { rightSingularVectors: vectors } = new SVD(dense, {
    computeLeftSingularVectors: false,
    computeRightSingularVectors: true,
    autoTranspose: true,
  });
  const m = Math.min(rows - 1, K);
  return Array.from({ length: m }, (_, j) => Float64Array.from({ length: K }, (_, i) => vectors.get(i, j)));
}

/** One axis for each original one, turned to its side; an original axis without a partner left gets zeros. */
export function matchAxes(original: readonly Float64Array[], axes: readonly Float64Array[]): Float64Array[] {
  const pairs = original.flatMap((axis, j) => axes.map((other, at) => ({ j, at, cos: dot(axis, other) })));
  pairs.sort((a, b) => Math.abs(b.cos) - Math.abs(a.cos) || a.j - b.j || a.at - b.at);
  const out: Float64Array[] = original.map((axis) => new Float64Array(axis.length));
  const [done, taken] = [new Set<number>(), new Set<number>()];
  for (const { j, at, cos } of pairs) {
    if (done.has(j) || taken.has(at)) continue;
    done.add(j);
    taken.add(at);
    out[j] = cos < 0 ? axes[at].map((value) => -value) : axes[at];
  }
  return out;
}
