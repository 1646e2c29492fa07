import type { Matrix } from "../data/matrix.ts";
import { mean } from "../math/quantile.ts";
import { decompose, EXACT, unitColumns } from "./decomposition.ts";
import { inflationFactors } from "./inflation.ts";

/** Ordinary least squares with an intercept. */
export interface Regression {
  readonly intercept: number;
  readonly coefficients: Float64Array;
  readonly interceptError: number;
  /** Standard errors; Infinity where the other columns reproduce the column. */
  readonly errors: Float64Array;
  readonly residuals: Float64Array;
  /** √(Σ residual²/(n − 1 − rank)); NaN without degrees of freedom. */
  readonly residualSd: number;
  readonly rSquared: number;
}

/** Passes of refinement: each solves again for what the last left over. */
const REFINEMENTS = 2;

/**
 * Minimises Σ_i (y_i − a − Σ_k b_k x_ik)². The columns Z are centred and of unit length, Z = U D V'; b = V D⁻² V'Z'y,
 * refined on the residuals (Björck 1996, *Numerical Methods for Least Squares Problems*, §2.9 on iterative
 * refinement, from memory), and the shortest b where columns depend on each other. se(b_k) = s·√VIF_k/length_k.
 */
export function leastSquares(x: Matrix, y: ArrayLike<number>): Regression {
  const { rows, columns: K } = x;
  const { unit, centre, length } = unitColumns(x);
  const svd = decompose(unit, EXACT);
  const { values, vectors, rank } = svd;
  const factors = inflationFactors(svd);
  const yMean = mean(y);
  const b = new Float64Array(K);
  const residuals = Float64Array.from({ length: rows }, (_, i) => y[i] - yMean);
  const total = residuals.reduce((sum, value) => sum + value * value, 0);
  for (let pass = 0; pass <= REFINEMENTS; pass++) {
    const step = solve(crossWith(unit, residuals));
    for (let k = 0; k < K; k++) b[k] += step[k];
    for (let i = 0; i < rows; i++) {
      let fitted = yMean;
      for (let k = 0; k < K; k++) fitted += unit.data[i * K + k] * b[k];
      residuals[i] = y[i] - fitted;
    }
  }
  const left = residuals.reduce((sum, value) => sum + value * value, 0);
  const free = rows - 1 - rank;
  const residualSd = free > 0 ? Math.sqrt(left / free) : Number.NaN;
  // A constant column is zero among the unit columns: nothing is explained by it.
  const coefficients = b.map((value, k) => (length[k] === 0 ? 0 : value / length[k]));
  const shift = centre.map((value, k) => (length[k] === 0 ? 0 : value / length[k]));
  const spread = solve(shift).reduce((sum, value, k) => sum + value * shift[k], 0);
  return {
    intercept: yMean - coefficients.reduce((sum, value, k) => sum + value * centre[k], 0),
    coefficients,
    interceptError: residualSd * Math.sqrt(1 / rows + spread),
    errors: factors.map((factor, k) => (residualSd * Math.sqrt(factor)) / length[k]),
    residuals,
    residualSd,
    rSquared: 1 - left / total,
  };

  /** V D⁻² V' w over the dimensions that are not null. */
  function solve(w: Float64Array): Float64Array {
    const out = new Float64Array(K);
    for (let j = 0; j < rank; j++) {
      let dot = 0;
      for (let k = 0; k < K; k++) dot += vectors.data[k * K + j] * w[k];
      dot /= values[j] ** 2;
      for (let k = 0; k < K; k++) out[k] += vectors.data[k * K + j] * dot;
    }
    return out;
  }
}

/** Z'w. */
function crossWith(z: Matrix, w: Float64Array): Float64Array {
  const out = new Float64Array(z.columns);
  for (let i = 0; i < z.rows; i++)
    for (let k = 0; k < z.columns; k++) out[k] += z.data[i * z.columns + k] * w[i];
  return out;
}
