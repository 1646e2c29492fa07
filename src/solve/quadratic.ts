import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import type { Penalty } from "./penalty.ts";

/** The model around x on the coordinates `which`: ∇fᵀd + ½ dᵀHd + Σ g_k(x_k + d_k). */
export interface QuadraticModel {
  readonly which: Int32Array;
  readonly x: Float64Array;
  readonly gradient: Float64Array;
  /** m × m, positive definite. */
  readonly curvature: Float64Array;
}

/** Sweeps of coordinate descent between two tries of a direct solve; few, since only the signs must come right. */
const SWEEPS = 3;
const ROUNDS = 200;

/**
 * Minimises the model; returns the new values of the m coordinates. Coarse coordinate descent finds which
 * coordinates are zero and the signs of the others; a Cholesky solve on that support then gives the exact minimiser,
 * which is kept if signs and optimality hold, else the descent goes on from where it was.
 */
export function minimiseQuadratic(model: QuadraticModel, penalty: Penalty): Float64Array {
  const { which, x, gradient, curvature } = model;
  const m = which.length;
  const z = new Float64Array(m);
  for (let a = 0; a < m; a++) z[a] = x[which[a]];
  // slope[a] = ∂/∂z_a of the smooth part of the model at z
  const slope = new Float64Array(m);
  for (let a = 0; a < m; a++) slope[a] = gradient[which[a]];

  for (let round = 0; round < ROUNDS; round++) {
    const solved = solveOnSupport(model, penalty, z);
    if (solved !== undefined) return solved;
    let moved = 0;
    for (let sweep = 0; sweep < SWEEPS; sweep++) {
      moved = 0;
      for (let a = 0; a < m; a++) {
        const bend = curvature[a * m + a];
        const next = penalty.prox(which[a], z[a] - slope[a] / bend, bend);
        const step = next - z[a];
        if (step === 0) continue;
        z[a] = next;
        for (let b = 0; b < m; b++) slope[b] += curvature[a * m + b] * step;
        moved = Math.max(moved, Math.abs(step) * Math.sqrt(bend));
      }
    }
    if (moved < 1e-13) break;
  }
  return z;
}

/** The exact minimiser with the zeros and signs of z, or undefined if it does not keep them or is not optimal. */
function solveOnSupport(model: QuadraticModel, penalty: Penalty, z: Float64Array): Float64Array | undefined {
  const { which, x, gradient, curvature } = model;
  const m = which.length;
  const support: number[] = [];
  for (let a = 0; a < m; a++) if (z[a] !== 0 || !penalty.penalised(which[a])) support.push(a);
  const s = support.length;
  const reduced = new Float64Array(s * s);
  const right = new Float64Array(s);
  for (let i = 0; i < s; i++) {
    const a = support[i];
    for (let j = 0; j < s; j++) reduced[i * s + j] = curvature[a * m + support[j]];
    // H_SS z_S = H_SA x_A − ∇f_S − slopes, since the coordinates outside the support go to 0
    let sum = -gradient[which[a]] - penalty.slope(which[a], Math.sign(z[a]));
    for (let b = 0; b < m; b++) sum += curvature[a * m + b] * x[which[b]];
    right[i] = sum;
  }
  if (!choleskyInPlace(reduced, s)) return undefined;
  choleskySolve(reduced, s, right);
  const out = new Float64Array(m);
  for (let i = 0; i < s; i++) {
    const a = support[i];
    if (penalty.penalised(which[a]) && Math.sign(right[i]) !== Math.sign(z[a])) return undefined;
    out[a] = right[i];
  }
  for (let a = 0; a < m; a++) {
    if (out[a] !== 0 || !penalty.penalised(which[a])) continue;
    let slope = gradient[which[a]];
    for (let b = 0; b < m; b++) slope += curvature[a * m + b] * (out[b] - x[which[b]]);
    if (penalty.distance(which[a], 0, slope) > 1e-10 * (1 + Math.abs(slope))) return undefined;
  }
  return out;
}
