import { designWith, type ScreenProblem } from "../screen/problem.ts";
import type { Deviance } from "../survival/analysis-of-deviance.ts";
import { intervalSurvival, survivalContrasts } from "../survival/design.ts";
import { fitModel } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { designOf } from "../survival/recapture-choice.ts";

/** What the study's own captures say about the variation between years that the named covariates leave. */
export interface ResidualEstimate {
  /** σ on the logit of annual survival, for an interval of one year. */
  readonly sd: number;
  /** ĉ between years with the named covariates in the model, and its degrees of freedom. */
  readonly betweenYears: number;
  readonly df: number;
}

/** Whether the estimate is to be had: one survival per interval, in which captures tell every year from the others. */
export function residualEstimable({ frame }: ScreenProblem): boolean {
  return frame.yearsOf === undefined && frame.groups === undefined;
}

/**
 * A simple estimate of the residual variation between years, by moments from ĉ between years. With the named
 * covariates in the model ν = r_t − r_cov degrees of freedom are left between years. D_cov − D_t is there about the sum of
 * squares Σ w_t (logit ŝ_t − x_tᵀβ̂)², w_t the information on logit s_t, and if w_t/Δ_t varies little,
 *
 *     E(D_cov − D_t) ≈ ν (1 + σ² w̄),   hence   σ² = max(0, (ĉ − 1)/w̄),   w̄ = (1/n) Σ_t w_t/Δ_t,
 *
 * which is the estimate of DerSimonian & Laird (1986, Controlled Clinical Trials 7:177) at equal weights, with
 * covariates. w_t is the diagonal of the information at the fit with the named covariates. A few years tell σ only
 * within half of it or more, and what covariates that are not named explain is still in it: try other values beside it.
 */
export function residualEstimate(
  problem: ScreenProblem,
  named: readonly number[],
  interval: Deviance,
): ResidualEstimate {
  const { data, frame, recapture } = problem;
  const n = frame.intervals;
  const fit = fitModel(data, designWith(problem, named));
  const df = interval.parameters - fit.parameters;
  if (df < 1) return { sd: 0, betweenYears: Number.NaN, df: Math.max(0, df) };
  const betweenYears = (fit.minus2LogL - interval.minus2LogL) / df;
  const likelihood = cjsLikelihood(data, designOf(frame, intervalSurvival(frame), recapture));
  const at = new Float64Array(likelihood.dimension);
  const logit = (rate: number) => Math.log(rate / (1 - rate));
  for (let t = 0; t < n; t++) at[t] = logit(fit.survival[t].value);
  // contrasts between strata come after the first column in the one design, after the n intervals in the other
  const contrasts = survivalContrasts(frame);
  at.set(fit.estimates.subarray(1, 1 + contrasts), n);
  const recaptureFrom = fit.estimates.length - (likelihood.dimension - n - contrasts);
  at.set(fit.estimates.subarray(recaptureFrom), n + contrasts);
  likelihood.evaluate(at, new Float64Array(likelihood.dimension));
  const information = new Float64Array(n * n);
  likelihood.curvature(
    Int32Array.from({ length: n }, (_, t) => t),
    information,
  );
  let weight = 0;
  for (let t = 0; t < n; t++) weight += Math.max(0, information[t * n + t]) / frame.lengths[t];
  const variance = (betweenYears - 1) / (weight / n);
  return { sd: variance > 0 ? Math.sqrt(variance) : 0, betweenYears, df };
}

/** Which way each named covariate acts: the sign of its estimate with all named ones in the model; up where it is 0. */
export function ownDirections(problem: ScreenProblem, named: readonly number[]): readonly (1 | -1)[] {
  const fit = fitModel(problem.data, designWith(problem, named));
  return named.map((k) => (fit.estimates[fit.names.indexOf(problem.covariates[k].name)] < 0 ? -1 : 1));
}
