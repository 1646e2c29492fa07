import type { Matrix } from "../data/matrix.ts";
import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { tQuantile } from "../math/distributions.ts";
import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { StopReason } from "../solve/smooth.ts";
import { type EffectsDesign, effectsDesign, type RandomIntervalProblem } from "./effects-design.ts";
import { gradientTolerance, totalReleases } from "./fit.ts";
import { jointMode } from "./joint-mode.ts";
import { type EffectsMode, type Laplace, laplaceOf } from "./laplace.ts";
import { type LaplaceMaximum, maximiseLaplace } from "./laplace-maximum.ts";
import { cjsLikelihood } from "./likelihood.ts";
import { restrictedSigma } from "./random-interval-reml.ts";

/** One coefficient of a random-interval fit. */
export interface RandomIntervalCoefficient {
  readonly name: string;
  readonly estimate: number;
  /** NaN where the data do not determine it. */
  readonly se: number;
  /** estimate ± t·se, nominal 95 %. */
  readonly low: number;
  readonly high: number;
}

export interface RandomIntervalFit {
  /** −2 log of the Laplace marginal likelihood at the maximum over all coefficients and σ² ≥ 0. */
  readonly minus2LogL: number;
  /** Survival coefficients, then recapture coefficients, at σ by REML. */
  readonly coefficients: readonly RandomIntervalCoefficient[];
  readonly covariance: Matrix;
  /** σ by maximum likelihood (on the logit of annual survival). */
  readonly sigma: number;
  /** σ by restricted maximum likelihood, all coefficients integrated. */
  readonly sigmaReml: number;
  /** The modes ε̂_t at σ by REML, n. */
  readonly modes: Float64Array;
  /** Degrees of freedom of t: intervals − survival coefficients (contrasts between strata not counted). */
  readonly df: number;
  readonly stopped: StopReason;
  /** Largest derivative of −log L not held back by σ² ≥ 0, at the maximum. */
  readonly certificate: number;
}

/** The maximum of the Laplace marginal likelihood over (θ, σ² ≥ 0). */
export interface RandomIntervalMaximum extends LaplaceMaximum {
  readonly minus2LogL: number;
  readonly laplace: Laplace;
}

/**
 * −2 log of the Laplace marginal likelihood, σ² ≥ 0 re-estimated by maximum likelihood, nothing penalised: the
 * evidence D(S) of the set `which` (positions among the covariates). At σ² = 0 it is the ordinary −2 log L. Ends where no
 * derivative exceeds `precision` times the releases. Start: survival and recapture coefficients; none if not said.
 */
export function maximiseRandomInterval(
  problem: RandomIntervalProblem,
  which: readonly number[],
  precision = 1e-8,
  start?: Float64Array,
): RandomIntervalMaximum {
  const model = effectsDesign(problem, which);
  const laplace = laplaceOf(problem.data, model);
  const d = laplace.dimension;
  const options = { tolerance: precision * Math.max(100, totalReleases(problem.data)), iterations: 200 };
  // without random effects first: an ordinary fit, where the derivative in σ² says whether there is anything to find
  const ordinary = ordinaryFit(problem, model, laplace, start);
  const none = laplace.at(ordinary.theta, 0, ordinary.effects, false);
  const step = -none.gradient[d] / none.varianceInformation;
  // Scoring from 0 falls short, since the information on σ² is largest there.
  const variance = Math.min(4, Math.max(0, 2 * step));
  const first = variance > 0 ? laplace.at(ordinary.theta, variance, scaledTangent(none, variance)) : none;
  const found = maximiseLaplace(laplace, Number.isFinite(first.value) ? first : none, options);
  const best =
    found.point.value <= none.value
      ? found
      : { ...maximiseLaplace(laplace, none, options), iterations: found.iterations };
  return { ...best, minus2LogL: 2 * best.point.value, laplace };
}

/** A coefficient this far from 0 runs to a bound. */
const FAR = 9;

/** The fit at σ² = 0, by the likelihood in its coefficients; by the joint mode where that stops short. */
function ordinaryFit(
  { data }: RandomIntervalProblem,
  { design, survival, intervals }: EffectsDesign,
  laplace: Laplace,
  start: Float64Array | undefined,
): Pick<EffectsMode, "theta" | "effects"> {
  const part = {
    ...design.survival,
    names: design.survival.names.slice(0, survival),
    columns: design.survival.columns.slice(0, survival),
  };
  const nothing = { theta: new Float64Array(laplace.dimension), effects: new Float64Array(intervals) };
  const tolerance = gradientTolerance(data);
  const solution = proximalNewton(
    cjsLikelihood(data, { ...design, survival: part }),
    noPenalty,
    start ?? nothing.theta,
    { tolerance, iterations: 200 },
  );
  // with a rate at its bound any far-off point will do for the likelihood, but not for the search that starts there
  const settled = solution.stopped === "optimum" && solution.x.every((value) => Math.abs(value) < FAR);
  return settled ? { ...nothing, theta: solution.x } : jointMode(laplace, nothing, 0, tolerance);
}

/** Effects on the way from 0 along their derivative in σ², for a start. */
function scaledTangent(
  none: { readonly tangents: Float64Array; readonly effects: Float64Array },
  variance: number,
): Float64Array {
  const n = none.effects.length;
  const last = none.tangents.subarray(none.tangents.length - n);
  const largest = last.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  // the derivative at 0 overshoots far away: keep within three standard deviations
  const scale = Math.min(variance, (3 * Math.sqrt(variance)) / Math.max(largest, 1e-300));
  return last.map((value) => scale * value);
}

/**
 * The random-interval model ε_t ~ N(0, σ²/Δ_t) in logit s_t: maximum likelihood for −2 log L and σ, REML for
 * sigmaReml; coefficients maximise the Laplace likelihood with σ held at the REML value, their covariance is the
 * inverse of f_θθ − f_θε (f_εε + Δ/σ²)⁻¹ f_εθ there, and their intervals use t on intervals − survival coefficients.
 */
export function fitRandomInterval(
  problem: RandomIntervalProblem,
  which: readonly number[],
): RandomIntervalFit {
  const model = effectsDesign(problem, which);
  const maximum = maximiseRandomInterval(problem, which);
  const { laplace } = maximum;
  const sigmaReml = restrictedSigma(problem.data, laplace, maximum.point);
  const variance = sigmaReml * sigmaReml;
  const held = maximiseLaplace(laplace, laplace.at(maximum.point.theta, variance, maximum.point.effects), {
    tolerance: 1e-8 * Math.max(100, totalReleases(problem.data)),
    iterations: 200,
    fixedVariance: true,
  });
  const d = laplace.dimension;
  const { theta, effects } = held.point;
  const covariance = inverse(laplace.mode(theta, variance, effects).information, d);
  const df = model.intervals - model.spent;
  const t = df > 0 ? tQuantile(0.975, df) : Number.NaN;
  return {
    minus2LogL: maximum.minus2LogL,
    coefficients: model.names.map((name, k) => {
      const estimate = held.point.theta[k];
      const se = Math.sqrt(covariance[k * d + k]);
      return { name, estimate, se, low: estimate - t * se, high: estimate + t * se };
    }),
    covariance: { rows: d, columns: d, data: covariance },
    sigma: Math.sqrt(maximum.point.variance),
    sigmaReml,
    modes: held.point.effects,
    df,
    stopped: maximum.stopped === "optimum" ? held.stopped : maximum.stopped,
    certificate: Math.max(maximum.violation, held.violation),
  };
}

/** Inverse of a symmetric positive definite matrix; NaN throughout where it is not. */
function inverse(matrix: Float64Array, d: number): Float64Array {
  const out = new Float64Array(d * d);
  const l = Float64Array.from(matrix);
  if (!choleskyInPlace(l, d, 1e-12)) return out.fill(Number.NaN);
  for (let k = 0; k < d; k++) {
    const column = out.subarray(k * d, (k + 1) * d);
    column[k] = 1;
    choleskySolve(l, d, column);
  }
  return out;
}
