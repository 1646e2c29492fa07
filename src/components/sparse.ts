import { type Matrix, zeros } from "../data/matrix.ts";

/** Sparse principal axes, found one after the other. */
export interface SparseAxes {
  /** K × k unit vectors; what is zero is exactly zero. */
  readonly axes: Matrix;
  /** Of each axis: the penalty on the scale of Z'u (columns of Z of unit length) and how many loadings are not zero. */
  readonly lambdas: readonly number[];
  readonly counts: readonly number[];
  /** Share of the variance that the span of the first j axes holds, k. */
  readonly cumulative: readonly number[];
}

/** A sparse axis must hold at least this share of what the full one would hold (convention of this project). */
export const SPARSE_HOLDS = 0.9;

const ITERATIONS = 2000;
const STILL = 1e-13;

/**
 * Sparse principal components by regularised rank-one approximation (Shen & Huang 2008, J. Multivariate Anal.
 * 99:1015–1034, algorithm 1, soft thresholding): with Z the n × K columns of unit length, each axis minimises
 *
 *     ‖Z − u ṽ'‖² + 2 λ Σ_k |ṽ_k|,   ‖u‖ = 1,
 *
 * by turns ṽ = S(Z'u, λ), S(y, λ) = sign(y)(|y| − λ)₊, and u = Zṽ/‖Zṽ‖, started from the first singular vectors; then
 * v = ṽ/‖ṽ‖ and Z is deflated by u ṽ'. Their tuning parameter is the number of loadings that are not zero: with m of them
 * λ is the (m + 1)-th largest |Z'u| at every turn. m is the least number whose axis holds 90 % of the variance that the
 * axis of the full first singular vector holds, counted on the deflated columns. `counts` sets m instead.
 *
 * The variance held by several axes, which are neither orthogonal nor uncorrelated, is that of the projection on their
 * span, ‖Z V(V'V)⁻¹V'‖²/‖Z‖² (their §2.3).
 */
export function sparseAxes(unit: Matrix, k: number, counts?: readonly number[]): SparseAxes {
  const { rows, columns: K } = unit;
  const left = Float64Array.from(unit.data);
  const axes = zeros(K, k);
  const lambdas: number[] = [];
  const used: number[] = [];
  for (let j = 0; j < k; j++) {
    const full = rankOne(left, rows, K, K);
    const most = heldBy(left, rows, K, full.v);
    const wanted = counts?.[j];
    let best = full;
    if (wanted !== undefined) best = rankOne(left, rows, K, wanted, full.v);
    else
      for (let m = 1; m < K; m++) {
        const tried = rankOne(left, rows, K, m, full.v);
        // equal loadings can all fall to the threshold at once: then no axis is left with so few
        if (!(heldBy(left, rows, K, tried.v) >= SPARSE_HOLDS * most)) continue;
        best = tried;
        break;
      }
    const length = norm(best.v);
    for (let i = 0; i < K; i++) axes.data[i * k + j] = length > 0 ? best.v[i] / length : 0;
    for (let r = 0; r < rows; r++) for (let i = 0; i < K; i++) left[r * K + i] -= best.u[r] * best.v[i];
    lambdas.push(best.lambda);
    used.push(best.v.reduce((sum, value) => sum + (value === 0 ? 0 : 1), 0));
  }
  return { axes, lambdas, counts: used, cumulative: spanned(unit, axes) };
}

interface RankOne {
  readonly u: Float64Array;
  /** Not of unit length: S(Z'u, λ). */
  readonly v: Float64Array;
  readonly lambda: number;
}

/** The alternating minimisation with m loadings that are not zero, from direction v (or a start of its own). */
function rankOne(z: Float64Array, rows: number, K: number, m: number, from?: Float64Array): RankOne {
  let v = from === undefined ? longest(z, rows, K) : Float64Array.from(from);
  let u: Float64Array = new Float64Array(rows);
  let lambda = 0;
  for (let turn = 0; turn < ITERATIONS; turn++) {
    const next = times(z, rows, K, v);
    const length = norm(next);
    if (!(length > 0)) return { u: new Float64Array(rows), v: new Float64Array(K), lambda };
    for (let r = 0; r < rows; r++) next[r] /= length;
    const y = crossed(z, rows, K, next);
    lambda = m >= K ? 0 : Array.from(y, Math.abs).sort((a, b) => b - a)[m];
    const thin = y.map((value) => (Math.abs(value) > lambda ? value - Math.sign(value) * lambda : 0));
    const moved = next.reduce((most, value, r) => Math.max(most, Math.abs(value - u[r])), 0);
    u = next;
    v = thin;
    if (moved < STILL) break;
  }
  return { u, v, lambda };
}

/** Variance along v, ‖Zv‖²/‖v‖². */
function heldBy(z: Float64Array, rows: number, K: number, v: Float64Array): number {
  const length = norm(v);
  return length > 0 ? (norm(times(z, rows, K, v)) / length) ** 2 : 0;
}

/** A start that rounding cannot make orthogonal to the first axis: the row with the largest sum of squares, n × K. */
function longest(z: Float64Array, rows: number, K: number): Float64Array {
  let best = 0;
  let most = -1;
  for (let r = 0; r < rows; r++) {
    const size = norm(z.subarray(r * K, (r + 1) * K));
    if (size > most * (1 + 1e-12)) {
      most = size;
      best = r;
    }
  }
  return z.slice(best * K, (best + 1) * K);
}

function times(z: Float64Array, rows: number, K: number, v: Float64Array): Float64Array {
  const out = new Float64Array(rows);
  for (let r = 0; r < rows; r++) for (let i = 0; i < K; i++) out[r] += z[r * K + i] * v[i];
  return out;
}

function crossed(z: Float64Array, rows: number, K: number, u: Float64Array): Float64Array {
  const out = new Float64Array(K);
  for (let r = 0; r < rows; r++) for (let i = 0; i < K; i++) out[i] += z[r * K + i] * u[r];
  return out;
}

function norm(v: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < v.length; i++) sum += v[i] * v[i];
  return Math.sqrt(sum);
}

/** Share of ‖Z‖² in the span of the first j axes, j = 1 … k, by Gram–Schmidt on the axes. */
function spanned(unit: Matrix, axes: Matrix): number[] {
  const { rows, columns: K, data } = unit;
  const basis: Float64Array[] = [];
  const total = norm(data) ** 2;
  let held = 0;
  return Array.from({ length: axes.columns }, (_, j) => {
    const v = Float64Array.from({ length: K }, (_v, i) => axes.data[i * axes.columns + j]);
    for (let pass = 0; pass < 2; pass++)
      for (const one of basis) {
        const dot = one.reduce((sum, value, i) => sum + value * v[i], 0);
        for (let i = 0; i < K; i++) v[i] -= dot * one[i];
      }
    const length = norm(v);
    if (length > 1e-9) {
      for (let i = 0; i < K; i++) v[i] /= length;
      basis.push(v);
      held += norm(times(data, rows, K, v)) ** 2;
    }
    return held / total;
  });
}
