import { mean } from "../math/quantile.ts";
import { glsFit } from "../survival/gls.ts";
import type { ScreenProblem } from "./problem.ts";
import type { TwoStepProblem } from "./two-step-candidates.ts";

/**
 * By how much memory from year to year inflates the variance of covariate k's effect beside the covariates `others`:
 * (1 + r_x r_e)/(1 − r_x r_e), at least 1, so that n intervals are worth n divided by it (Bartlett 1935).
 */
export type MemoryInflation = (k: number, others: readonly number[]) => number;

/** No estimate from a few years is trusted beyond this. */
const MOST = 0.9;

/** Σ (v_t − v̄)(v_{t−1} − v̄) / Σ (v_t − v̄)². */
export function lagOne(values: ArrayLike<number>): number {
  const centre = mean(values);
  let [between, within] = [0, 0];
  for (let t = 0; t < values.length; t++) {
    within += (values[t] - centre) ** 2;
    if (t > 0) between += (values[t] - centre) * (values[t - 1] - centre);
  }
  return within === 0 ? 0 : between / within;
}

/** The estimate of few years lies low by (1 + 3ρ)/n (Marriott & Pope 1954; Kendall 1954): put back, and capped. */
export function correctedLagOne(values: ArrayLike<number>): number {
  const r = lagOne(values);
  return Math.min(MOST, r + (1 + 3 * Math.max(0, r)) / values.length);
}

/** (1 + r r′)/(1 − r r′) where both series remember, else 1. */
export function inflation(covariate: number, residual: number): number {
  if (covariate <= 0 || residual <= 0) return 1;
  return (1 + covariate * residual) / (1 - covariate * residual);
}

/**
 * Inflation from the two-step logits. The residual is that of the fit *without* k: a covariate that was picked because
 * it follows a residual with memory takes the memory with it, and the residual beside it looks like white noise.
 */
export function memoryOf(problem: ScreenProblem, quick: TwoStepProblem): MemoryInflation {
  const ofCovariates = problem.covariates.map((one) => correctedLagOne(one.values));
  const forced = problem.frame.forced.map((one) => one.values);
  const fixed = Array.from({ length: quick.fixed }, (_, j) => j);
  return (k, others) => {
    const which = [...fixed, ...others.map((j) => quick.fixed + j)];
    const { coefficients } = glsFit(quick.rotated, which, "REML");
    const columns = [...forced, ...others.map((j) => problem.covariates[j].values)];
    const residual = quick.two.logits.map((logit, t) =>
      columns.reduce((left, values, i) => left - coefficients[i + 1] * values[t], logit),
    );
    return inflation(ofCovariates[k], correctedLagOne(residual));
  };
}
