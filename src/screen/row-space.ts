import { Matrix as Dense, EigenvalueDecomposition } from "ml-matrix";
import { covariatePositions, type ScreenProblem } from "./problem.ts";

/** A problem with at most as many covariates as rows that has the same ridge solutions, and the way back. */
export interface RowSpace {
  readonly problem: ScreenProblem;
  /** A vector over all coefficients of the problem given, as a start for the smaller one: its covariates at 0. */
  shorten(estimates: Float64Array): Float64Array;
  /** All coefficients of a solution of the smaller problem. */
  lengthen(solution: Float64Array): Float64Array;
}

/** Directions with less than this share of the largest eigenvalue of XXᵀ are rounding. */
const NEGLIGIBLE = 1e-13;

/**
 * With more covariates than rows (strata × intervals) a ridge solution lies in the row space of X, since what is
 * orthogonal to it moves the penalty alone (Hastie, Tibshirani & Friedman 2009, §18.3.5). With XXᵀ = U D² Uᵀ, r ≤ rows
 * directions, and V = Xᵀ U D⁻¹, which has orthonormal columns,
 *
 *     β = Vγ,   Xβ = (UD)γ,   Σ_k β_k² = Σ_i γ_i²,
 *
 * so the same likelihood and penalty are minimised over r coefficients γ with the columns of UD instead of over K. With no more
 * covariates than rows the problem stays as it is.
 */
export function inRowSpace(problem: ScreenProblem): RowSpace {
  const { covariates, frame } = problem;
  const size = covariates.length;
  const positions = covariatePositions(problem);
  const rows = frame.strata.length * frame.intervals;
  if (size <= rows) return { problem, shorten: (x) => x, lengthen: (x) => x };
  // one value per interval is repeated over strata
  const at = (k: number, r: number) => covariates[k].values[r % covariates[k].values.length];
  const products = Dense.zeros(rows, rows);
  for (let i = 0; i < rows; i++)
    for (let j = 0; j <= i; j++) {
      let sum = 0;
      for (let k = 0; k < size; k++) sum += at(k, i) * at(k, j);
      products.set(i, j, sum);
      products.set(j, i, sum);
    }
  const { realEigenvalues, eigenvectorMatrix } = new EigenvalueDecomposition(products, {
    assumeSymmetric: true,
  });
  const largest = Math.max(...realEigenvalues);
  const kept = realEigenvalues.flatMap((value, i) => (value > NEGLIGIBLE * largest ? [i] : []));
  const roots = kept.map((i) => Math.sqrt(realEigenvalues[i]));
  const directions = kept.map((i) =>
    Float64Array.from({ length: rows }, (_, r) => eigenvectorMatrix.get(r, i)),
  );
  const short = directions.map((direction, i) => ({
    name: `direction ${i + 1}`,
    values: direction.map((value) => value * roots[i]),
  }));
  return {
    problem: { ...problem, covariates: short },
    shorten: (estimates) => {
      const from = positions[0];
      const out = new Float64Array(estimates.length - size + short.length);
      out.set(estimates.subarray(0, from));
      out.set(estimates.subarray(from + size), from + short.length);
      return out;
    },
    lengthen: (solution) => {
      const from = positions[0];
      // β = Xᵀθ with θ = U D⁻¹ γ
      const theta = new Float64Array(rows);
      directions.forEach((direction, i) => {
        for (let r = 0; r < rows; r++) theta[r] += (direction[r] / roots[i]) * solution[from + i];
      });
      const out = new Float64Array(solution.length - short.length + size);
      out.set(solution.subarray(0, from));
      for (let k = 0; k < size; k++) for (let r = 0; r < rows; r++) out[from + k] += at(k, r) * theta[r];
      out.set(solution.subarray(from + short.length), from + size);
      return out;
    },
  };
}
