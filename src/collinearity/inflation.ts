import type { Matrix } from "../data/matrix.ts";
import { type Decomposition, decompose, EXACT, unitColumns } from "./decomposition.ts";
import type { Inflation } from "./result.ts";

/** Least share of a column in the null space (squared) at which it takes part in an exact dependency. */
const NULL_SHARE = EXACT * EXACT;

/** Σ v²_kj over the null space: how far unit vector k lies in it, 0 to 1. */
export function nullShares(svd: Decomposition): Float64Array {
  const { vectors, rank } = svd;
  const K = vectors.columns;
  return Float64Array.from({ length: K }, (_, k) => {
    let share = 0;
    for (let j = rank; j < K; j++) share += vectors.data[k * K + j] ** 2;
    return share;
  });
}

/** True where the other columns reproduce column k exactly. */
export function isExact(nullShare: number): boolean {
  return nullShare > NULL_SHARE;
}

/**
 * VIF_k = 1/(1 − R²_k) = [R⁻¹]_kk = Σ_j v²_kj/d²_j for unit columns with singular values d and right vectors v
 * (Belsley, Kuh & Welsch 1980, §3.2); the cross product is never formed, so no digit is lost by squaring. A column
 * with a part in the null space is a combination of others: Infinity. A column outside it keeps a finite value even
 * where other columns depend on each other.
 */
export function inflationFactors(svd: Decomposition): Float64Array {
  const { vectors, values, rank } = svd;
  const K = vectors.columns;
  const shares = nullShares(svd);
  return Float64Array.from({ length: K }, (_, k) => {
    if (isExact(shares[k])) return Number.POSITIVE_INFINITY;
    let sum = 0;
    // From the smallest term up.
    for (let j = 0; j < rank; j++) sum += (vectors.data[k * K + j] / values[j]) ** 2;
    return Math.max(1, sum);
  });
}

/** Variance inflation and tolerance (1/VIF) of every column of an n × K matrix without missing values. */
export function inflation(matrix: Matrix, names: readonly string[]): Inflation[] {
  const factors = inflationFactors(decompose(unitColumns(matrix).unit, EXACT));
  return names.map((name, k) => ({ name, inflation: factors[k], tolerance: 1 / factors[k] }));
}
