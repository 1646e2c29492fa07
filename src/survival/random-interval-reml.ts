import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { Smooth } from "../solve/smooth.ts";
import type { EffectsDesign } from "./effects-design.ts";
import { gradientTolerance, totalReleases } from "./fit.ts";
import type { LaplacePoint } from "./laplace.ts";
import { cjsLikelihood } from "./likelihood.ts";
import { leastOnHalfLine } from "./minimise.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** Pivots below this share of a quarter per release carry no information (cf. `readInformation`). */
const FLAT = 1e-8;

/**
 * σ² by restricted maximum likelihood: the Laplace approximation over the effects and all coefficients with a flat
 * prior on these (Harville 1974 for the Gaussian case),
 *
 *     R(σ²) = min_{θ,z} [f(θ, σ D^½ z) + ½ zᵀz] + ½ log det (second derivatives in (z, θ) there),
 *
 * over σ² ≥ 0. Directions without curvature (a rate at its bound) are left out of the determinant.
 */
export function restrictedVariance(
  data: readonly SufficientStatistics[],
  model: EffectsDesign,
  from: Pick<LaplacePoint, "theta" | "variance" | "effects">,
): number {
  const criterion = restrictedCriterion(data, model, from);
  return leastOnHalfLine(criterion, from.variance) ** 2;
}

/** R as a function of σ; each call starts from the joint mode of the one before. */
export function restrictedCriterion(
  data: readonly SufficientStatistics[],
  model: EffectsDesign,
  from: Pick<LaplacePoint, "theta" | "variance" | "effects">,
): (sigma: number) => number {
  const { survival: b, intervals: n, fixed } = model;
  const likelihood = cjsLikelihood(data, model.design);
  const all = likelihood.dimension;
  const everything = Int32Array.from({ length: all }, (_, k) => k);
  const root = Float64Array.from(model.design.lengths, (length) => 1 / Math.sqrt(length));
  const floor = (FLAT * totalReleases(data)) / 4;
  const last = new Float64Array(all);
  fixed.forEach((k, i) => {
    last[k] = from.theta[i];
  });
  last.set(from.effects, b);
  return (sigma) => {
    const smooth = scaled(likelihood, b, n, root, sigma);
    const start = Float64Array.from(last);
    for (let t = 0; t < n; t++) start[b + t] = sigma === 0 ? 0 : last[b + t] / (sigma * root[t]);
    const solution = proximalNewton(smooth, noPenalty, start, {
      tolerance: gradientTolerance(data) * 10,
      iterations: 200,
    });
    const curvature = new Float64Array(all * all);
    smooth.evaluate(solution.x, new Float64Array(all));
    smooth.curvature(everything, curvature);
    fixed.forEach((k) => {
      last[k] = solution.x[k];
    });
    for (let t = 0; t < n; t++) last[b + t] = sigma * root[t] * solution.x[b + t];
    return solution.smooth + 0.5 * logDeterminant(curvature, all, b, n, floor);
  };
}

/** f(θ, σ D^½ z) + ½ zᵀz as a function of (β, z, α). */
function scaled(likelihood: Smooth, b: number, n: number, root: Float64Array, sigma: number): Smooth {
  const all = likelihood.dimension;
  const x = new Float64Array(all);
  const factor = new Float64Array(all).fill(1);
  for (let t = 0; t < n; t++) factor[b + t] = sigma * root[t];
  return {
    dimension: all,
    evaluate: (point, gradient) => {
      for (let k = 0; k < all; k++) x[k] = factor[k] * point[k];
      let value = likelihood.evaluate(x, gradient);
      for (let k = 0; k < all; k++) gradient[k] *= factor[k];
      for (let k = b; k < b + n; k++) {
        value += 0.5 * point[k] * point[k];
        gradient[k] += point[k];
      }
      return value;
    },
    curvature: (which, out) => {
      likelihood.curvature(which, out);
      const m = which.length;
      for (let i = 0; i < m; i++) {
        for (let j = 0; j < m; j++) out[i * m + j] *= factor[which[i]] * factor[which[j]];
        if (which[i] >= b && which[i] < b + n) out[i * m + i] += 1;
      }
    },
  };
}

/** log det by Gaussian elimination, the effects first; pivots at or below the floor are passed over. */
function logDeterminant(matrix: Float64Array, all: number, b: number, n: number, floor: number): number {
  const a = Float64Array.from(matrix);
  const order = Array.from({ length: all }, (_, i) => (i < n ? b + i : i < n + b ? i - n : i));
  let sum = 0;
  order.forEach((k, i) => {
    const pivot = a[k * all + k];
    if (!(pivot > (i < n ? 0 : floor))) return;
    sum += Math.log(pivot);
    for (const r of order.slice(i + 1)) {
      const share = a[r * all + k] / pivot;
      if (share === 0) continue;
      for (const c of order.slice(i + 1)) a[r * all + c] -= share * a[k * all + c];
    }
  });
  return sum;
}
