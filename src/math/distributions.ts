import betainc from "@stdlib/math-base-special-betainc";
import gammainc from "@stdlib/math-base-special-gammainc";
import fQuantileLower from "@stdlib/stats-base-dists-f-quantile";
import normalCdfLower from "@stdlib/stats-base-dists-normal-cdf";
import normalQuantileLower from "@stdlib/stats-base-dists-normal-quantile";
import tQuantileLower from "@stdlib/stats-base-dists-t-quantile";

// Upper tails are computed as such, by the incomplete functions' upper option: 1 − cdf loses every digit of a
// small p-value.

/** P(F > f) for F with (df1, df2) degrees of freedom. */
export function fUpper(f: number, df1: number, df2: number): number {
  if (Number.isNaN(f)) return Number.NaN;
  if (f <= 0) return 1;
  if (f === Number.POSITIVE_INFINITY) return 0;
  return betainc(df2 / (df2 + df1 * f), df2 / 2, df1 / 2);
}

/** P(|t| > |x|) for Student's t with df degrees of freedom. */
export function tTwoSided(x: number, df: number): number {
  if (Number.isNaN(x)) return Number.NaN;
  if (!Number.isFinite(x)) return 0;
  return betainc(df / (df + x * x), df / 2, 0.5);
}

/** P(χ² > x) with df degrees of freedom. */
export function chiSquareUpper(x: number, df: number): number {
  return x <= 0 ? 1 : gammainc(x / 2, df / 2, true, true);
}

export function fQuantile(probability: number, df1: number, df2: number): number {
  return fQuantileLower(probability, df1, df2);
}

export function tQuantile(probability: number, df: number): number {
  return tQuantileLower(probability, df);
}

export function normalQuantile(probability: number): number {
  return normalQuantileLower(probability, 0, 1);
}

export function normalCdf(x: number): number {
  return normalCdfLower(x, 0, 1);
}

/** P(|Z| > |z|) for a standard normal Z. */
export function normalTwoSided(z: number): number {
  return gammainc((z * z) / 2, 0.5, true, true);
}
