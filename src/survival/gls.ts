import type { Matrix } from "../data/matrix.ts";
import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { leastOnHalfLine } from "./minimise.ts";
import type { TwoStep } from "./two-step.ts";

/** A Gaussian fit to the interval logits. */
export interface GlsFit {
  readonly coefficients: Float64Array;
  readonly covariance: Matrix;
  /** σ between intervals. */
  readonly sigma: number;
  /** Σ log(1 + σ²λ_i) + weighted residual sum of squares: −2 log L up to a constant that no model changes. */
  readonly minus2LogL: number;
  /** Known directions − coefficients. */
  readonly df: number;
}

/** Columns carried into the coordinates of a two-step result, for many fits on the same quantities. */
export interface RotatedColumns {
  readonly two: TwoStep;
  /** One array per column. */
  readonly columns: readonly Float64Array[];
}

/** The columns (n values each) in the coordinates in which the errors are independent. */
export function rotateColumns(two: TwoStep, columns: readonly ArrayLike<number>[]): RotatedColumns {
  return {
    two,
    columns: columns.map((column) =>
      Float64Array.from(two.rotation, (row) => {
        let sum = 0;
        for (let t = 0; t < row.length; t++) sum += row[t] * column[t];
        return sum;
      }),
    ),
  };
}

/**
 * Generalised least squares y = Xβ + ε + error, ε ~ N(0, σ²D), error ~ N(0, Q⁻¹): in the rotated coordinates a
 * weighted regression with w_i = λ_i/(1 + σ²λ_i), in closed form for a given σ. σ is given or found by
 *
 *     ML:   min Σ log(1 + σ²λ_i) + RSS_w,     REML:  the same + log det(X̃ᵀWX̃)    (Harville 1974).
 */
export function glsFit(
  rotated: RotatedColumns,
  which: readonly number[],
  sigma: number | "ML" | "REML",
): GlsFit {
  const { two, columns } = rotated;
  const used = which.map((k) => columns[k]);
  const k = used.length;
  const m = two.eigenvalues.length;
  const normal = new Float64Array(k * k);
  const beta = new Float64Array(k);
  const weights = new Float64Array(m);

  /** −2 log L, twice the restricted one, at this σ; leaves the factor in `normal` and the coefficients in `beta`. */
  function solve(sd: number): { readonly ml: number; readonly reml: number } {
    let ml = 0;
    // Σ log(1 + σ²λ) as logarithms of products, taken before they could overflow
    let product = 1;
    for (let i = 0; i < m; i++) {
      const grown = 1 + sd * sd * two.eigenvalues[i];
      weights[i] = two.eigenvalues[i] / grown;
      product *= grown;
      if (product > 1e150) {
        ml += Math.log(product);
        product = 1;
      }
    }
    ml += Math.log(product);
    for (let a = 0; a < k; a++) {
      beta[a] = 0;
      for (let i = 0; i < m; i++) beta[a] += weights[i] * used[a][i] * two.rotated[i];
      for (let b = 0; b <= a; b++) {
        let sum = 0;
        for (let i = 0; i < m; i++) sum += weights[i] * used[a][i] * used[b][i];
        normal[a * k + b] = sum;
        normal[b * k + a] = sum;
      }
    }
    if (!choleskyInPlace(normal, k, 1e-13)) return { ml: Number.NaN, reml: Number.NaN };
    choleskySolve(normal, k, beta);
    for (let i = 0; i < m; i++) {
      let residual = two.rotated[i];
      for (let a = 0; a < k; a++) residual -= beta[a] * used[a][i];
      ml += weights[i] * residual * residual;
    }
    let reml = ml;
    for (let a = 0; a < k; a++) reml += 2 * Math.log(normal[a * k + a]);
    return { ml, reml };
  }

  const sd =
    typeof sigma === "number"
      ? sigma
      : leastOnHalfLine((s) => solve(s)[sigma === "ML" ? "ml" : "reml"], 0.04, 1e-6);
  const { ml } = solve(sd);
  const covariance = new Float64Array(k * k);
  for (let a = 0; a < k; a++) {
    const column = covariance.subarray(a * k, (a + 1) * k);
    column[a] = 1;
    choleskySolve(normal, k, column);
  }
  return {
    coefficients: Float64Array.from(beta),
    covariance: { rows: k, columns: k, data: covariance },
    sigma: sd,
    minus2LogL: ml,
    df: m - k,
  };
}
