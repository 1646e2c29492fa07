import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import type { EffectsMode, Laplace } from "./laplace.ts";

/**
 * The joint mode of coefficients and effects at a given σ²: Newton's method on θ with ε̂ following, damped where the
 * information is not positive definite, with halving. At σ² = 0 it is the ordinary maximum-likelihood fit. Ends where
 * no step lowers the value any more; `jointGradient` of the result is its certificate.
 */
export function jointMode(
  laplace: Laplace,
  from: Pick<EffectsMode, "theta" | "effects">,
  variance: number,
  tolerance: number,
): EffectsMode {
  const d = laplace.dimension;
  const n = from.effects.length;
  let here = laplace.mode(from.theta, variance, from.effects);
  for (let iteration = 0; iteration < 200; iteration++) {
    if (!Number.isFinite(here.joint) || largest(here.jointGradient) <= tolerance) return here;
    const step = newtonStep(here, d);
    const noise = 1e-13 * (1 + Math.abs(here.joint));
    let next: EffectsMode | undefined;
    for (let scale = 1; scale > 1e-10 && next === undefined; scale /= 2) {
      const theta = here.theta.slice();
      for (let k = 0; k < d; k++) theta[k] += scale * step[k];
      const effects = here.effects.slice();
      for (let k = 0; k < d; k++)
        for (let t = 0; t < n; t++) effects[t] += scale * step[k] * here.tangents[k * n + t];
      const trial = laplace.mode(theta, variance, effects);
      // below the noise of the value the derivatives decide
      const level =
        trial.joint <= here.joint + noise && largest(trial.jointGradient) < largest(here.jointGradient);
      if (trial.joint < here.joint - noise || level) next = trial;
    }
    if (next === undefined) return here;
    here = next;
  }
  return here;
}

function largest(values: Float64Array): number {
  let most = 0;
  for (const value of values) most = Math.max(most, Math.abs(value));
  return most;
}

function newtonStep(here: EffectsMode, d: number): Float64Array {
  let most = 0;
  for (let i = 0; i < d; i++) most = Math.max(most, Math.abs(here.information[i * d + i]));
  const l = new Float64Array(d * d);
  for (let damping = 0; ; damping = damping === 0 ? 1e-10 : damping * 10) {
    for (let i = 0; i < d; i++)
      for (let j = 0; j < d; j++) {
        const entry = here.information[i * d + j];
        l[i * d + j] =
          i === j && damping > 0 ? Math.abs(entry) * (1 + damping) + damping * (most || 1) : entry;
      }
    const step = here.jointGradient.map((value) => -value);
    if (!choleskyInPlace(l, d, 1e-11) && damping < 1e12) continue;
    choleskySolve(l, d, step);
    return step;
  }
}
