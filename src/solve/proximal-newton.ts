import { choleskyInPlace } from "../math/cholesky.ts";
import type { Penalty } from "./penalty.ts";
import { minimiseQuadratic } from "./quadratic.ts";
import { roomsFor } from "./room.ts";
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
  let here = pointAt(smooth, penalty, start.slice(), new Float64Array(d));
  // the point that was left is where the next one is tried
  let spare: Pick<Point, "x" | "gradient"> = { x: new Float64Array(d), gradient: new Float64Array(d) };
  const finish = (stopped: StopReason, iterations: number): Solution => ({
    x: here.x,
    smooth: here.smooth,
    objective: here.objective,
    gradient: here.gradient,
    violation: here.violation,
    stopped,
    iterations,
  });
  if (!Number.isFinite(here.objective)) return finish("start outside the domain", 0);

  for (let iteration = 0; iteration < options.iterations; iteration++) {
    if (here.violation <= options.tolerance) return finish("optimum", iteration);
    const which = workingSet(penalty, here);
    const next = lineSearch(smooth, penalty, here, which, modelMinimum(smooth, penalty, here, which), spare);
    if (next === undefined) return finish("no lower point", iteration);
    spare = here;
    here = next;
  }
  return finish(here.violation <= options.tolerance ? "optimum" : "too many iterations", options.iterations);
}

interface Point {
  readonly x: Float64Array;
  readonly gradient: Float64Array;
  readonly smooth: number;
  /** The penalty at x. */
  readonly held: number;
  readonly objective: number;
  readonly violation: number;
}

function pointAt(smooth: Smooth, penalty: Penalty, x: Float64Array, gradient: Float64Array): Point {
  const value = smooth.evaluate(x, gradient);
  const held = penalty.value(x);
  const violation = largestViolation(penalty, x, gradient);
  return { x, gradient, smooth: value, held, objective: value + held, violation };
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
 * in the next step, since only the conditions of all d coordinates end the iteration. Ascending.
 */
function workingSet(penalty: Penalty, { x, gradient }: Point): Int32Array {
  const d = x.length;
  let size = 0;
  let entrants = 0;
  for (let k = 0; k < d; k++) {
    if (x[k] !== 0 || !penalty.penalised(k)) size++;
    else if (penalty.distance(k, 0, gradient[k]) > 0) entrants++;
  }
  const least = entrants > ENTRANTS ? entrantsByViolation(penalty, x, gradient) : undefined;
  const { which } = roomsFor(size + Math.min(entrants, ENTRANTS));
  let m = 0;
  for (let k = 0; k < d; k++)
    if (
      x[k] !== 0 ||
      !penalty.penalised(k) ||
      (least === undefined ? penalty.distance(k, 0, gradient[k]) > 0 : least.has(k))
    )
      which[m++] = k;
  return which.subarray(0, m);
}

/** The zero coordinates that violate their condition most. */
function entrantsByViolation(penalty: Penalty, x: Float64Array, gradient: Float64Array): ReadonlySet<number> {
  const all: { readonly k: number; readonly distance: number }[] = [];
  for (let k = 0; k < x.length; k++) {
    const distance = x[k] === 0 && penalty.penalised(k) ? penalty.distance(k, 0, gradient[k]) : 0;
    if (distance > 0) all.push({ k, distance });
  }
  all.sort((a, b) => b.distance - a.distance || a.k - b.k);
  return new Set(all.slice(0, ENTRANTS).map((one) => one.k));
}

/**
 * Where the quadratic model on the working set is least. Its curvature has a multiple of its diagonal added until it is
 * safely positive definite.
 */
function modelMinimum(
  smooth: Smooth,
  penalty: Penalty,
  { x, gradient }: Point,
  which: Int32Array,
): Float64Array {
  const m = which.length;
  const rooms = roomsFor(m);
  const { curvature, factor } = rooms;
  smooth.curvature(which, curvature);
  for (let i = 0; i < m * m; i++) factor[i] = curvature[i];
  if (choleskyInPlace(factor, m, 1e-11))
    return minimiseQuadratic({ which, x, gradient, curvature, factor }, penalty, rooms);
  let scale = 0;
  for (let a = 0; a < m; a++) scale = Math.max(scale, Math.abs(curvature[a * m + a]));
  const damped = new Float64Array(m * m);
  for (let damping = 1e-10; damping <= 1e13; damping *= 10) {
    for (let i = 0; i < m * m; i++) damped[i] = curvature[i];
    for (let a = 0; a < m; a++)
      damped[a * m + a] = Math.abs(curvature[a * m + a]) * (1 + damping) + damping * (scale || 1);
    factor.set(damped);
    if (choleskyInPlace(factor, m, 1e-11))
      return minimiseQuadratic({ which, x, gradient, curvature: damped, factor }, penalty, rooms);
  }
  return minimiseQuadratic({ which, x, gradient, curvature: damped }, penalty, rooms);
}

/** A step that moves no coordinate farther than this is none. */
const SHORTEST = 1e-9;

/**
 * The first of the steps 1, ½, ¼ … that lowers the objective enough (Armijo) or, at rounding level, the violation. The new
 * point is written into `into`.
 */
function lineSearch(
  smooth: Smooth,
  penalty: Penalty,
  from: Point,
  which: Int32Array,
  target: Float64Array,
  { x, gradient }: Pick<Point, "x" | "gradient">,
): Point | undefined {
  const m = which.length;
  x.set(from.x);
  let predicted = -from.held;
  let reach = 0;
  for (let a = 0; a < m; a++) {
    const move = Math.abs(target[a] - from.x[which[a]]);
    if (move > reach && move < Number.POSITIVE_INFINITY) reach = move;
    x[which[a]] = target[a];
    predicted += from.gradient[which[a]] * (target[a] - from.x[which[a]]);
  }
  predicted += penalty.value(x);
  // below this, differences of the objective are rounding noise and the optimality conditions decide
  const noise = 1e-13 * (1 + Math.abs(from.objective));
  // where the curvature is next to nothing the target is so far off that a tiny step is still a long way
  for (let step = 1; step > 1e-12 || step * reach > SHORTEST; step /= 2) {
    if (step < 1)
      for (let a = 0; a < m; a++) {
        const k = which[a];
        x[k] = from.x[k] + step * (target[a] - from.x[k]);
      }
    const next = pointAt(smooth, penalty, x, gradient);
    const enough = next.objective <= from.objective + 1e-4 * step * predicted;
    const level = Math.abs(next.objective - from.objective) <= noise && next.violation < from.violation;
    if (Number.isFinite(next.objective) && (enough || level)) return next;
  }
  return undefined;
}
