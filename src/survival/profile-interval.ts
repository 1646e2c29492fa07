import { normalQuantile } from "../math/distributions.ts";
import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { Smooth } from "../solve/smooth.ts";
import type { Design } from "./design.ts";
import { type Fit, gradientTolerance } from "./fit.ts";
import { cjsLikelihood } from "./likelihood.ts";
import type { SufficientStatistics } from "./statistics.ts";

export interface ProfileInterval {
  readonly name: string;
  readonly estimate: number;
  /** −Infinity and Infinity where the likelihood never falls far enough on that side (a covariate that separates). */
  readonly low: number;
  readonly high: number;
}

/** Beyond this distance on the logit scale, per sd of a covariate, there is no end. */
const FAR = 60;

/**
 * 95 % profile-likelihood interval of coefficient k (Venzon & Moolgavkar 1988, Applied Statistics 37:87): all b for
 * which the fit with β_k = b, all else maximised anew, has −2 log L no more than ĉ · χ²₁(.95) above the least one. ĉ between
 * animals widens it, 1 if not known. Unlike estimate ± 1.96 se it need not be symmetric, and it does not break down at a bound.
 * NaN where the coefficient is not determined by the data.
 */
export function profileInterval(
  data: readonly SufficientStatistics[],
  design: Design,
  fit: Fit,
  k: number,
  inflation = 1,
): ProfileInterval {
  const name = fit.names[k];
  const estimate = fit.estimates[k];
  if (fit.notSeparable.some((set) => set.includes(name)))
    return { name, estimate, low: Number.NaN, high: Number.NaN };
  const smooth = cjsLikelihood(data, design);
  const options = { tolerance: gradientTolerance(data), iterations: 200 };
  const limit = fit.minus2LogL + Math.max(1, inflation) * normalQuantile(0.975) ** 2;
  const others = without(fit.estimates, k);
  const side = (sign: 1 | -1): number => {
    let x = others;
    /** How far the profile is above the limit at a distance. */
    const above = (distance: number): number => {
      const solved = proximalNewton(withFixed(smooth, k, estimate + sign * distance), noPenalty, x, options);
      x = solved.x;
      return 2 * solved.smooth - limit;
    };
    let [near, far] = [0, Math.min(FAR, Number.isFinite(fit.se[k]) ? 2 * fit.se[k] : 1)];
    let [low, high] = [fit.minus2LogL - limit, above(far)];
    while (high < 0 && far < FAR) {
      [near, low] = [far, high];
      far = Math.min(FAR, 2 * far);
      high = above(far);
    }
    if (high < 0) return sign * Number.POSITIVE_INFINITY;
    // false position that halves the standing end's value (Illinois), on √ so that the curve is nearly straight
    const root = (value: number) =>
      Math.sqrt(Math.max(0, value + limit - fit.minus2LogL)) - Math.sqrt(limit - fit.minus2LogL);
    let [a, b, fa, fb] = [near, far, root(low), root(high)];
    for (let step = 0; step < 60 && b - a > 1e-9 * (1 + b); step++) {
      const at = fb === fa ? (a + b) / 2 : a - (fa * (b - a)) / (fb - fa);
      const value = root(above(at));
      if (Math.abs(value) < 1e-9) return estimate + sign * at;
      if (value < 0) {
        [a, fa] = [at, value];
        fb /= 2;
      } else {
        [b, fb] = [at, value];
        fa /= 2;
      }
    }
    return estimate + sign * ((a + b) / 2);
  };
  return { name, estimate, low: side(-1), high: side(1) };
}

function without(values: Float64Array, k: number): Float64Array {
  return values.filter((_, i) => i !== k);
}

/** The function of the other coordinates with coordinate k held at a value. */
function withFixed(smooth: Smooth, k: number, value: number): Smooth {
  const d = smooth.dimension;
  const whole = new Float64Array(d);
  const gradient = new Float64Array(d);
  return {
    dimension: d - 1,
    evaluate: (x, out) => {
      whole.set(x.subarray(0, k));
      whole[k] = value;
      whole.set(x.subarray(k), k + 1);
      const f = smooth.evaluate(whole, gradient);
      out.set(gradient.subarray(0, k));
      out.set(gradient.subarray(k + 1), k);
      return f;
    },
    curvature: (which, out) =>
      smooth.curvature(
        which.map((i) => (i < k ? i : i + 1)),
        out,
      ),
  };
}
