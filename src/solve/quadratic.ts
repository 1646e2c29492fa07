import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import type { Penalty } from "./penalty.ts";
import type { Rooms } from "./room.ts";

/** The model around x on the coordinates `which`: ∇fᵀd + ½ dᵀHd + Σ g_k(x_k + d_k). */
export interface QuadraticModel {
  readonly which: Int32Array;
  readonly x: Float64Array;
  readonly gradient: Float64Array;
  /** m × m in its first m² places, positive definite. */
  readonly curvature: Float64Array;
  /** Its Cholesky factor, where it has been worked out already. */
  readonly factor?: Float64Array;
}

/** Zero coordinates further than this from optimal (relative to their slope) join the support. */
const SLACK = 1e-10;

/**
 * Minimises the model; returns the new values of the m coordinates (in `rooms.target`, if rooms are handed in).
 * Mostly all coordinates stay on their side of zero and those at zero go downhill: then one solve with the factor is the
 * minimum (`settled`). Else feature-sign search (Lee, Battle, Raina & Ng 2007,
 * algorithm 1): solve exactly on the support with the present signs; where that would carry a coordinate across zero,
 * stop at the crossing with the least objective and let the coordinate go; when the support is settled, add the zero
 * coordinate whose optimality condition is violated most. The objective falls at every step, so no set of signs comes
 * back and the search ends; nearly equal columns, on which coordinate descent crawls, cost nothing extra.
 */
export function minimiseQuadratic(
  model: QuadraticModel,
  penalty: Penalty,
  rooms?: Pick<Rooms, "target" | "sign">,
): Float64Array {
  const { which, x, gradient, curvature } = model;
  const m = which.length;
  if (rooms !== undefined && settled(model, penalty, rooms)) return rooms.target;
  const search: Search = {
    which,
    curvature,
    ...(model.factor === undefined ? {} : { factor: model.factor }),
    penalty,
    c: new Float64Array(m),
    z: new Float64Array(m),
    sign: new Float64Array(m),
  };
  for (let a = 0; a < m; a++) {
    search.z[a] = x[which[a]];
    search.sign[a] = Math.sign(search.z[a]);
  }
  for (let a = 0; a < m; a++) {
    search.c[a] = gradient[which[a]];
    for (let b = 0; b < m; b++) search.c[a] -= curvature[a * m + b] * search.z[b];
  }
  for (let step = 0; step < 50 + 10 * m; step++) if (solveOnSupport(search) && !admitWorst(search)) break;
  return search.z;
}

/**
 * Writes the minimum into `target` where it has the signs that x has, or where x is 0 those of descent: there the model is
 * smooth, and no coordinate is left at zero whose condition could be violated. False where the signs do not hold.
 */
function settled(
  { which, x, gradient, factor }: QuadraticModel,
  penalty: Penalty,
  { target, sign }: Pick<Rooms, "target" | "sign">,
): boolean {
  if (factor === undefined) return false;
  const m = which.length;
  for (let a = 0; a < m; a++) {
    const k = which[a];
    sign[a] = x[k] !== 0 ? Math.sign(x[k]) : -Math.sign(gradient[k]);
    target[a] = -gradient[k] - penalty.slope(k, sign[a]);
  }
  choleskySolve(factor, m, target);
  for (let a = 0; a < m; a++) {
    const k = which[a];
    target[a] += x[k];
    if (penalty.penalised(k) && !(target[a] * sign[a] > 0)) return false;
  }
  return true;
}

interface Search {
  readonly which: Int32Array;
  readonly curvature: Float64Array;
  readonly factor?: Float64Array;
  readonly penalty: Penalty;
  /** ∇f − Hx: the smooth part of the model is cᵀz + ½ zᵀHz. */
  readonly c: Float64Array;
  /** The m coordinates, changed in place. */
  readonly z: Float64Array;
  /** −1, 0, 1: the side of zero a coordinate is on or is about to go to; changed in place. */
  readonly sign: Float64Array;
}

/** One exact solve on the support; true if no coordinate had to be let go at zero on the way. */
function solveOnSupport(search: Search): boolean {
  const { which, c, z, sign, penalty } = search;
  const m = which.length;
  const support: number[] = [];
  for (let a = 0; a < m; a++) if (sign[a] !== 0 || !penalty.penalised(which[a])) support.push(a);
  const s = support.length;
  const target = new Float64Array(s);
  for (let i = 0; i < s; i++) target[i] = -c[support[i]] - penalty.slope(which[support[i]], sign[support[i]]);
  const factor = factorOn(search, support);
  if (factor === undefined) return true;
  choleskySolve(factor, s, target);

  // Where on the way from z to the target each penalised coordinate would change sides; 2 where it does not.
  const crossings = new Float64Array(s).fill(2);
  let crossed = false;
  for (let i = 0; i < s; i++) {
    const a = support[i];
    if (!penalty.penalised(which[a]) || target[i] * sign[a] >= 0) continue;
    crossings[i] = z[a] === 0 ? 0 : z[a] / (z[a] - target[i]);
    crossed = true;
  }
  const step = crossed ? bestStep(search, support, target, crossings) : 1;
  for (let i = 0; i < s; i++) {
    const a = support[i];
    // exactly zero where it is let go, exactly the target after a whole step
    z[a] = crossings[i] === step ? 0 : step === 1 ? target[i] : z[a] + step * (target[i] - z[a]);
    if (penalty.penalised(which[a])) sign[a] = Math.sign(z[a]);
  }
  return !crossed;
}

/** Cholesky factor of the curvature on the support; undefined where it is not positive definite. */
function factorOn(
  { which, curvature, factor }: Search,
  support: readonly number[],
): Float64Array | undefined {
  const m = which.length;
  const s = support.length;
  if (s === m && factor !== undefined) return factor;
  const reduced = new Float64Array(s * s);
  for (let i = 0; i < s; i++)
    for (let j = 0; j < s; j++) reduced[i * s + j] = curvature[support[i] * m + support[j]];
  return choleskyInPlace(reduced, s) ? reduced : undefined;
}

/** Of the whole step and the crossings, the one with the least objective. */
function bestStep(
  search: Search,
  support: readonly number[],
  target: Float64Array,
  crossings: Float64Array,
): number {
  const { which, c, curvature, z, penalty } = search;
  const m = which.length;
  const steps = [1, ...crossings.filter((step) => step < 2)];
  const objective = (step: number) => {
    const at = support.map((a, i) => z[a] + step * (target[i] - z[a]));
    let value = 0;
    support.forEach((a, i) => {
      let slope = c[a];
      for (let j = 0; j < at.length; j++) slope += 0.5 * curvature[a * m + support[j]] * at[j];
      value += slope * at[i] + penalty.slope(which[a], 1) * Math.abs(at[i]);
    });
    return value;
  };
  const values = steps.map(objective);
  return steps[values.indexOf(Math.min(...values))];
}

/** Gives the zero coordinate that most violates its condition the sign of descent; false if none does. */
function admitWorst({ which, c, curvature, z, sign, penalty }: Search): boolean {
  const m = which.length;
  let worst = -1;
  let most = 0;
  let downhill = 0;
  for (let a = 0; a < m; a++) {
    if (sign[a] !== 0 || !penalty.penalised(which[a])) continue;
    let slope = c[a];
    for (let b = 0; b < m; b++) slope += curvature[a * m + b] * z[b];
    const distance = penalty.distance(which[a], 0, slope);
    if (distance > most && distance > SLACK * (1 + Math.abs(slope))) {
      most = distance;
      worst = a;
      downhill = -Math.sign(slope);
    }
  }
  if (worst < 0) return false;
  sign[worst] = downhill;
  return true;
}
