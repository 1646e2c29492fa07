import { choleskyInPlace } from "../math/cholesky.ts";
import type { Penalty } from "./penalty.ts";
import { minimiseQuadratic } from "./quadratic.ts";
import type { Smooth, StopReason } from "./smooth.ts";

export interface SolveOptions {
  /** The largest violation of the optimality conditions that counts as an optimum. */
  readonly tolerance: number;
  readonly iterations: number;
}

export interface Solution {
  readonly x: Float64Array;
  /** f(x), without the penalty. */
  readonly smooth: number;
  readonly objective: number;
  readonly gradient: Float64Array;
  /** max_k dist(−∇_k f, ∂g_k): the certificate. */
  readonly violation: number;
  readonly stopped: StopReason;
  readonly iterations: number;
}

/**
 * Minimises f(x) + Σ_k g_k(x_k) by proximal Newton steps (Lee, Sun & Saunders 2014): the quadratic model of f with the
 * penalty itself is minimised on the coordinates that are not zero or whose optimality conditions are violated,
 * then a backtracking line search keeps the objective falling. f need not be convex: where its curvature is not
 * positive definite a multiple of its diagonal is added, which changes the path but not the stationary point.
 */
export function proximalNewton(
  smooth: Smooth,
  penalty: Penalty,
  start: Float64Array,
  options: SolveOptions,
): Solution {
  const d = smooth.dimension;
  let x = start.slice();
  let gradient = new Float64Array(d);
  let value = smooth.evaluate(x, gradient);
  let objective = value + penalty.value(x);
  const finish = (stopped: StopReason, iterations: number): Solution => ({
    x,
    smooth: value,
    objective,
    gradient,
    violation: largestViolation(penalty, x, gradient),
    stopped,
    iterations,
  });
  if (!Number.isFinite(objective)) return finish("start outside the domain", 0);

  for (let iteration = 0; iteration < options.iterations; iteration++) {
    const violation = largestViolation(penalty, x, gradient);
    if (violation <= options.tolerance) return finish("optimum", iteration);
    const which = workingSet(penalty, x, gradient);
    const target = minimiseQuadratic({ which, x, gradient, ...positiveCurvature(smooth, which) }, penalty);
    const stepped = lineSearch(smooth, penalty, { x, gradient, objective, violation }, which, target);
    if (stepped === undefined) return finish("no lower point", iteration);
    ({ x, gradient, value, objective } = stepped);
  }
  return finish(
    largestViolation(penalty, x, gradient) <= options.tolerance ? "optimum" : "too many iterations",
    options.iterations,
  );
}

export function largestViolation(penalty: Penalty, x: Float64Array, gradient: Float64Array): number {
  let worst = 0;
  for (let k = 0; k < x.length; k++) {
    const distance = penalty.distance(k, x[k], gradient[k]);
    // a NaN must not pass for a small violation
    if (!(distance <= worst)) worst = Number.isNaN(distance) ? Number.POSITIVE_INFINITY : distance;
  }
  return worst;
}

/** At most this many coordinates more than those off zero enter a step: of many that violate their condition, few stay. */
const ENTRANTS = 10;

/**
 * Unpenalised coordinates, those off zero, and the zero ones that violate their condition most; the others get their turn
 * in the next step, since only the conditions of all d coordinates end the iteration.
 */
function workingSet(penalty: Penalty, x: Float64Array, gradient: Float64Array): Int32Array {
  // loops, not Array.from with a function, here and below: these run some 10⁵ times a screen
  const which: number[] = [];
  let entrants: { readonly k: number; readonly distance: number }[] = [];
  for (let k = 0; k < x.length; k++) {
    if (x[k] !== 0 || !penalty.penalised(k)) {
      which.push(k);
      continue;
    }
    const distance = penalty.distance(k, 0, gradient[k]);
    if (distance > 0) entrants.push({ k, distance });
  }
  if (entrants.length > ENTRANTS)
    entrants = entrants.sort((a, b) => b.distance - a.distance || a.k - b.k).slice(0, ENTRANTS);
  if (entrants.length === 0) return Int32Array.from(which);
  for (const { k } of entrants) which.push(k);
  return Int32Array.from(which).sort();
}

/**
 * The curvature on the working set, with a multiple of its diagonal added until it is safely positive definite, and its
 * Cholesky factor.
 */
function positiveCurvature(
  smooth: Smooth,
  which: Int32Array,
): { readonly curvature: Float64Array; readonly factor?: Float64Array } {
  const m = which.length;
  const curvature = new Float64Array(m * m);
  smooth.curvature(which, curvature);
  let scale = 0;
  for (let a = 0; a < m; a++) scale = Math.max(scale, Math.abs(curvature[a * m + a]));
  const trial = new Float64Array(m * m);
  for (let damping = 0; ; damping = damping === 0 ? 1e-10 : damping * 10) {
    trial.set(curvature);
    if (damping > 0)
      for (let a = 0; a < m; a++)
        trial[a * m + a] = Math.abs(curvature[a * m + a]) * (1 + damping) + damping * (scale || 1);
    const model = damping === 0 ? curvature : trial.slice();
    if (choleskyInPlace(trial, m, 1e-11)) return { curvature: model, factor: trial };
    if (damping > 1e12) return { curvature: model };
  }
}

interface Point {
  readonly x: Float64Array;
  readonly gradient: Float64Array;
  readonly objective: number;
  readonly violation: number;
}

/** The first of the steps 1, ½, ¼ … that lowers the objective enough (Armijo) or, at rounding level, the violation. */
function lineSearch(smooth: Smooth, penalty: Penalty, from: Point, which: Int32Array, target: Float64Array) {
  const moved = from.x.slice();
  for (let a = 0; a < which.length; a++) moved[which[a]] = target[a];
  let predicted = penalty.value(moved) - penalty.value(from.x);
  for (let k = 0; k < moved.length; k++) predicted += from.gradient[k] * (moved[k] - from.x[k]);
  // below this, differences of the objective are rounding noise and the optimality conditions decide
  const noise = 1e-13 * (1 + Math.abs(from.objective));
  for (let step = 1; step > 1e-12; step /= 2) {
    const x = moved.slice();
    if (step < 1) for (let k = 0; k < x.length; k++) x[k] = from.x[k] + step * (moved[k] - from.x[k]);
    const gradient = new Float64Array(x.length);
    const value = smooth.evaluate(x, gradient);
    const objective = value + penalty.value(x);
    const enough = objective <= from.objective + 1e-4 * step * predicted;
    const level =
      Math.abs(objective - from.objective) <= noise &&
      largestViolation(penalty, x, gradient) < from.violation;
    if (Number.isFinite(objective) && (enough || level)) return { x, gradient, value, objective };
  }
  return undefined;
}
