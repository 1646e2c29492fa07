import { totalReleases } from "./fit.ts";
import { jointMode } from "./joint-mode.ts";
import type { EffectsMode, Laplace } from "./laplace.ts";
import { leastOnHalfLine } from "./minimise.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** Pivots below this share of a quarter per release carry no information (cf. `readInformation`). */
const FLAT = 1e-8;

/**
 * σ by restricted maximum likelihood: the Laplace approximation over the effects and all coefficients with a flat prior
 * on these (Harville 1974 for the Gaussian case),
 *
 *     R(σ²) = min_{θ,z} [f(θ, σ D^½ z) + ½ zᵀz] + ½ log det (second derivatives in (z, θ) there),
 *
 * over σ² ≥ 0. The determinant is that of I + σ² D^½ W D^½ times that of the information on θ with ε following.
 */
export function restrictedSigma(
  data: readonly SufficientStatistics[],
  laplace: Laplace,
  from: EffectsMode,
): number {
  return leastOnHalfLine(restrictedCriterion(data, laplace, from), from.variance);
}

/** R as a function of σ; each call starts from the joint mode of the one before. */
function restrictedCriterion(
  data: readonly SufficientStatistics[],
  laplace: Laplace,
  from: EffectsMode,
): (sigma: number) => number {
  const releases = totalReleases(data);
  let last: EffectsMode = from;
  return (sigma) => {
    const here = jointMode(laplace, last, sigma * sigma, 1e-10 * Math.max(100, releases));
    if (!Number.isFinite(here.joint)) return Number.POSITIVE_INFINITY;
    last = here;
    return (
      here.joint +
      here.halfLogDet +
      0.5 * logDeterminant(here.information, laplace.dimension, (FLAT * releases) / 4)
    );
  };
}

/** log det by elimination; directions at or below the floor (a rate at its bound) are passed over. */
function logDeterminant(matrix: Float64Array, d: number, floor: number): number {
  const a = Float64Array.from(matrix);
  let sum = 0;
  for (let k = 0; k < d; k++) {
    const pivot = a[k * d + k];
    if (!(pivot > floor)) continue;
    sum += Math.log(pivot);
    for (let r = k + 1; r < d; r++)
      for (let c = k + 1; c < d; c++) a[r * d + c] -= (a[r * d + k] * a[k * d + c]) / pivot;
  }
  return sum;
}
