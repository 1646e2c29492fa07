import gammainc from "@stdlib/math-base-special-gammainc";
import { normalQuantile } from "../math/distributions.ts";
import { mean } from "../math/quantile.ts";

/** Fewest base sums an index is fitted to, as for standardisation by a base period (methods §4). */
export const LEAST_BASE = 20;

/** A gamma distribution of the sums above 0 beside the share of sums that are 0. */
interface GammaFit {
  readonly shape: number;
  readonly scale: number;
  readonly zeros: number;
}

/**
 * Gamma parameters by Thom's (1958) estimator (Wilks, Statistical Methods in the Atmospheric Sciences, §4.4.3):
 * A = ln(mean) − mean(ln x), α = [1 + √(1 + 4A/3)] / (4A), β = mean/α, of the sums above 0. NaN where fewer than
 * two differ.
 */
export function fitGamma(sums: ArrayLike<number>): GammaFit {
  const wet = Array.from(sums).filter((x) => x > 0);
  const zeros = (sums.length - wet.length) / sums.length;
  const a = Math.log(mean(wet)) - mean(wet.map(Math.log));
  if (!(a > 0)) return { shape: Number.NaN, scale: Number.NaN, zeros };
  const shape = (1 + Math.sqrt(1 + (4 * a) / 3)) / (4 * a);
  return { shape, scale: mean(wet) / shape, zeros };
}

/** H(x) = q + (1 − q) G(x): probability of at most x (McKee et al. 1993; WMO-No. 1090). */
export function probabilityOf(x: number, { shape, scale, zeros }: GammaFit): number {
  const below = x > 0 ? gammainc(x / scale, shape) : 0;
  return zeros + (1 - zeros) * below;
}

/** Standardised precipitation index: the standard normal quantile of H(x). */
export function standardisedIndex(x: number, fit: GammaFit): number {
  return Number.isNaN(x) ? Number.NaN : normalQuantile(probabilityOf(x, fit));
}
