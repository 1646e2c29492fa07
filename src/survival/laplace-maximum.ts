import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import type { StopReason } from "../solve/smooth.ts";
import type { Laplace, LaplacePoint } from "./laplace.ts";

export interface MaximumOptions {
  /** Largest projected derivative that counts as an optimum. */
  readonly tolerance: number;
  readonly iterations: number;
  /** Keep σ² where it starts. */
  readonly fixedVariance?: boolean;
}

export interface LaplaceMaximum {
  /** Without information if any step was taken. */
  readonly point: LaplacePoint;
  /** The largest derivative that is not held back by σ² ≥ 0: the certificate. */
  readonly violation: number;
  readonly stopped: StopReason;
  readonly iterations: number;
}

/**
 * Minimises the Laplace approximation over θ and σ² ≥ 0: quasi-Newton steps (Broyden–Fletcher–Goldfarb–Shanno,
 * Nocedal & Wright 2006, eq. 6.19) from the curvature of the profile in θ and the expected information on σ²; a step
 * that would leave σ² ≥ 0 is cut there, and σ² stays at 0 while its derivative there is not negative. The modes are
 * carried along their tangents, so that each starts next to its solution.
 */
export function maximiseLaplace(
  laplace: Laplace,
  start: LaplacePoint,
  options: MaximumOptions,
): LaplaceMaximum {
  const d = laplace.dimension;
  const m = d + 1;
  const fixed = options.fixedVariance === true;
  let point = start;
  if (!Number.isFinite(point.value))
    return {
      point,
      violation: Number.POSITIVE_INFINITY,
      stopped: "start outside the domain",
      iterations: 0,
    };
  let hessian = firstHessian(laplace, point);
  let refreshed = true;
  for (let iteration = 0; iteration < options.iterations; iteration++) {
    const violation = projected(point, fixed);
    if (violation <= options.tolerance)
      return { point, violation, stopped: "optimum", iterations: iteration };
    const step = descent(point, hessian, d, fixed);
    const next = step === undefined ? undefined : search(laplace, point, step, violation, fixed);
    if (next === undefined) {
      if (refreshed) return { point, violation, stopped: "no lower point", iterations: iteration };
      hessian = firstHessian(laplace, point);
      refreshed = true;
      continue;
    }
    updateHessian(hessian, m, point, next);
    refreshed = false;
    point = next;
  }
  return {
    point,
    violation: projected(point, fixed),
    stopped: "too many iterations",
    iterations: options.iterations,
  };
}

function projected(point: LaplacePoint, fixed: boolean): number {
  const d = point.theta.length;
  let worst = 0;
  for (let k = 0; k < d; k++) worst = Math.max(worst, Math.abs(point.gradient[k]));
  const slope = point.gradient[d];
  const held = fixed || (point.variance === 0 && slope >= 0);
  return held ? worst : Math.max(worst, Math.abs(slope));
}

function firstHessian(laplace: Laplace, at: LaplacePoint): Float64Array {
  const d = laplace.dimension;
  const m = d + 1;
  const point = at.information.length > 0 ? at : laplace.at(at.theta, at.variance, at.effects);
  const out = new Float64Array(m * m);
  for (let i = 0; i < d; i++) for (let j = 0; j < d; j++) out[i * m + j] = point.information[i * d + j];
  out[m * m - 1] = Math.max(point.varianceInformation, 1e-8);
  return out;
}

/** −H⁻¹ × gradient on the free coordinates; damped where H is not positive definite. */
function descent(
  point: LaplacePoint,
  hessian: Float64Array,
  d: number,
  fixed: boolean,
): Float64Array | undefined {
  const m = d + 1;
  const free = fixed || (point.variance === 0 && point.gradient[d] >= 0) ? d : m;
  const l = new Float64Array(free * free);
  for (let damping = 0; damping < 1e12; damping = damping === 0 ? 1e-8 : damping * 10) {
    let most = 0;
    for (let i = 0; i < free; i++) most = Math.max(most, Math.abs(hessian[i * m + i]));
    for (let i = 0; i < free; i++)
      for (let j = 0; j < free; j++)
        l[i * free + j] = hessian[i * m + j] + (i === j ? damping * (most || 1) : 0);
    if (!choleskyInPlace(l, free, 1e-12)) continue;
    const step = new Float64Array(m);
    for (let i = 0; i < free; i++) step[i] = -point.gradient[i];
    choleskySolve(l, free, step);
    return step;
  }
  return undefined;
}

/** The first of the steps 1, ½, ¼ … along the projected direction that lowers the value (Armijo). */
function search(
  laplace: Laplace,
  from: LaplacePoint,
  step: Float64Array,
  violation: number,
  fixed: boolean,
): LaplacePoint | undefined {
  const d = laplace.dimension;
  const n = from.effects.length;
  const noise = 1e-12 * (1 + Math.abs(from.value));
  for (let scale = 1; scale > 1e-9; scale /= 2) {
    const theta = from.theta.slice();
    for (let k = 0; k < d; k++) theta[k] += scale * step[k];
    // one step to the bound at most: a variance that is cut to 0 can grow again from there
    const variance = fixed ? from.variance : Math.max(0, from.variance + scale * step[d]);
    const effects = from.effects.slice();
    let predicted = (variance - from.variance) * from.gradient[d];
    for (let k = 0; k < d; k++) predicted += scale * step[k] * from.gradient[k];
    for (let t = 0; t < n; t++) {
      effects[t] += (variance - from.variance) * from.tangents[d * n + t];
      for (let k = 0; k < d; k++) effects[t] += scale * step[k] * from.tangents[k * n + t];
    }
    const next = laplace.at(theta, variance, effects, false);
    if (next.value <= from.value + 1e-4 * Math.min(0, predicted) && next.value < from.value - noise)
      return next;
    // below the noise of the value the derivatives decide
    if (Math.abs(next.value - from.value) <= noise && projected(next, fixed) < violation) return next;
  }
  return undefined;
}

/** The update in place; left out where the curvature along the step is not positive. */
function updateHessian(h: Float64Array, m: number, from: LaplacePoint, to: LaplacePoint): void {
  const s = new Float64Array(m);
  const y = new Float64Array(m);
  for (let k = 0; k < m; k++) {
    s[k] = k < m - 1 ? to.theta[k] - from.theta[k] : to.variance - from.variance;
    y[k] = to.gradient[k] - from.gradient[k];
  }
  const hs = new Float64Array(m);
  let [sy, shs] = [0, 0];
  for (let i = 0; i < m; i++) {
    for (let j = 0; j < m; j++) hs[i] += h[i * m + j] * s[j];
    sy += s[i] * y[i];
    shs += s[i] * hs[i];
  }
  if (!(sy > 1e-10 * shs) || !(shs > 0)) return;
  for (let i = 0; i < m; i++)
    for (let j = 0; j < m; j++) h[i * m + j] += (y[i] * y[j]) / sy - (hs[i] * hs[j]) / shs;
}
