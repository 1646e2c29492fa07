import { type Matrix, zeros } from "../data/matrix.ts";
import { type Decomposition, decompose } from "./decomposition.ts";
import type { ConditionTable } from "./result.ts";

/** Singular values at or below this share of the largest are 0: their index is infinite, not a huge number. */
const ZERO = 1e-10;

/**
 * Condition indices and variance-decomposition proportions (Belsley, Kuh & Welsch 1980, §3.2): an intercept is put
 * before the columns, every column is scaled to unit length and *not* centred, X = U D V'. Index η_j = d_1/d_j;
 * proportion π_jk = (v²_kj/d²_j)/Σ_i(v²_ki/d²_i), so each column of `proportions` sums to 1.
 *
 * The indices depend on where a scale has its zero: hand in columns before centring to learn what the intercept is
 * worth, centred ones to leave it out. Null dimensions have no basis of their own and stand together in one last row
 * (singular value 0, index Infinity), which takes all of the variance of every column that has a part in them.
 */
export function conditionTable(matrix: Matrix, names: readonly string[]): ConditionTable {
  const columns = matrix.columns + 1;
  const scaled = zeros(matrix.rows, columns);
  for (let k = 0; k < columns; k++) {
    const value = (i: number) => (k === 0 ? 1 : matrix.data[i * matrix.columns + k - 1]);
    // Divided by the largest first, so that squares neither overflow nor vanish.
    let largest = 0;
    for (let i = 0; i < matrix.rows; i++) largest = Math.max(largest, Math.abs(value(i)));
    if (largest === 0) continue;
    let squares = 0;
    for (let i = 0; i < matrix.rows; i++) squares += (value(i) / largest) ** 2;
    const length = Math.sqrt(squares);
    for (let i = 0; i < matrix.rows; i++) scaled.data[i * columns + k] = value(i) / largest / length;
  }
  const svd = decompose(scaled, ZERO);
  const dimensions = svd.rank < columns ? svd.rank + 1 : columns;
  const singularValues = Array.from(svd.values.subarray(0, dimensions));
  return {
    names: ["intercept", ...names],
    singularValues,
    indices: singularValues.map((value) => svd.values[0] / value),
    proportions: proportions(svd, dimensions),
  };
}

function proportions({ values, vectors, rank }: Decomposition, dimensions: number): Matrix {
  const K = vectors.columns;
  const out = zeros(dimensions, K);
  for (let k = 0; k < K; k++) {
    let empty = 0;
    for (let j = rank; j < K; j++) empty += vectors.data[k * K + j] ** 2;
    if (empty > ZERO) {
      out.data[rank * K + k] = 1;
      continue;
    }
    let sum = 0;
    for (let j = 0; j < rank; j++) sum += (vectors.data[k * K + j] / values[j]) ** 2;
    for (let j = 0; j < rank; j++) out.data[j * K + k] = (vectors.data[k * K + j] / values[j]) ** 2 / sum;
  }
  return out;
}

/** √(λ_max/λ_min) of the correlation matrix, from the singular values of the unit columns; Infinity if singular. */
export function correlationCondition(svd: Decomposition): number {
  const K = svd.values.length;
  return svd.rank < K ? Number.POSITIVE_INFINITY : svd.values[0] / svd.values[K - 1];
}
