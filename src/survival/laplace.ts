import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { arraysOf } from "../math/products.ts";
import type { EffectsDesign } from "./effects-design.ts";
import { rowLikelihood } from "./row-likelihood.ts";
import type { SufficientStatistics } from "./statistics.ts";
import { inverseLower } from "./triangular.ts";

/** The mode of the effects at (θ, σ²). d = b + a fixed coefficients θ = (β, α). */
export interface EffectsMode {
  readonly theta: Float64Array;
  readonly variance: number;
  /** The modes ε̂_t, n. */
  readonly effects: Float64Array;
  /** f(θ, ε̂) + ½ Σ Δ ε̂²/σ²; Infinity where the mode was not found. */
  readonly joint: number;
  /** Its derivative in θ with ε̂ following: f_θ, d. */
  readonly jointGradient: Float64Array;
  /** Its second derivatives in θ with ε̂ following: f_θθ − f_θε G f_εθ, d × d; empty where not asked for. */
  readonly information: Float64Array;
  /** ½ log det(I + σ² D^½ W D^½). */
  readonly halfLogDet: number;
  /** dε̂/dθ_j (d rows of n), then dε̂/dσ²: (d + 1) × n. */
  readonly tangents: Float64Array;
}

/** The Laplace approximation there. */
export interface LaplacePoint extends EffectsMode {
  /** −log of the marginal likelihood, joint + halfLogDet. */
  readonly value: number;
  /** ∂/∂θ, then ∂/∂σ²: d + 1. */
  readonly gradient: Float64Array;
  /** Expected information on σ² of a Gaussian model with the same W: ½ tr[(D^½ V⁻¹ D^½)²]; NaN where not asked for. */
  readonly varianceInformation: number;
}

export interface Laplace {
  readonly dimension: number;
  /** The mode, found by Newton's method from `effects`; without the information unless `informed`, the default. */
  mode(theta: Float64Array, variance: number, effects: Float64Array, informed?: boolean): EffectsMode;
  /** The mode and the derivatives of the approximation. */
  at(theta: Float64Array, variance: number, effects: Float64Array, informed?: boolean): LaplacePoint;
}

/** Largest derivative in z = ε√Δ/σ at a mode. */
const MODE_TOLERANCE = 1e-9;
/**
 * Least pivot of I + σ² D^½ W D^½ at which the approximation is used. Below 1 the likelihood bends the wrong way (an
 * interval whose animals were hardly seen again); towards 0 the posterior has no single top and the approximation,
 * not the likelihood, would run to infinity.
 */
const LEAST_PIVOT = 0.1;
/** Below this σ² a trace over it loses too many digits to be taken from the difference of two others. */
const SMALL_VARIANCE = 1e-3;

/**
 * Marginal likelihood of the random interval effects ε_t ~ N(0, σ²/Δ_t) by Laplace's approximation (Tierney & Kadane
 * 1986), f = −log L(θ, ε), W = f_εε at the mode, D = diag(1/Δ):
 *
 *     −log ∫ ≈ f(θ, ε̂) + ½ Σ_t Δ_t ε̂_t²/σ² + ½ log det(I + σ² D^½ W D^½).
 *
 * Nothing divides by σ²: the mode is sought in z, ε = σ D^½ z, so σ² = 0 is an ordinary point and gives f(θ, 0). With
 * a = −f_ε = Δ ε̂/σ², B = (I + σ² D^½ W D^½)⁻¹, G = σ² D^½ B D^½ and Φ = ½ log det the derivatives are
 *
 *     d/dθ = f_θ + Φ_θ − f_θε G Φ_ε,    d/dσ² = −½ Σ a²/Δ + ½ tr(B D^½ W D^½) + Φ_εᵀ D^½ B D^½ a.
 */
export function laplaceOf(data: readonly SufficientStatistics[], model: EffectsDesign): Laplace {
  const { design, survival: b, intervals: n, recapture: a } = model;
  const rowsOf = rowLikelihood(data, design);
  const d = b + a;
  const rows = design.strata * n;
  const columns = [
    ...design.survival.columns.slice(0, b),
    ...("known" in design.recapture ? [] : design.recapture.columns),
  ];
  /** The n values of survival columns that are the same in all strata; undefined for others. */
  const common = columns.map((column, j) =>
    j < b && column.every((value, r) => value === column[r % n]) ? column.subarray(0, n) : undefined,
  );
  const root = Float64Array.from(design.lengths, (length) => 1 / Math.sqrt(length)); // D^½
  const [fixedSurvival, logitSurvival, logitRecapture] = arraysOf(3, rows);
  // room for what no point keeps, taken once
  const [gradient, column, trial] = arraysOf(3, n); // gradient: f_ε
  const mixed = new Float64Array(d * n);
  const [survival, recapture, thirdSurvival, thirdRecapture] = arraysOf(4, rows);
  const [w, factor, inverse, scaled, spread] = arraysOf(5, n * n);

  /** −log joint at z with sd. */
  function joint(z: Float64Array, sd: number): number {
    let half = 0;
    for (let t = 0; t < n; t++) half += 0.5 * z[t] * z[t];
    for (let r = 0; r < rows; r++) logitSurvival[r] = fixedSurvival[r] + sd * root[r % n] * z[r % n];
    const value = rowsOf.at(logitSurvival, logitRecapture);
    gradient.fill(0);
    for (let r = 0; r < rows; r++) gradient[r % n] += rowsOf.bySurvival[r];
    return value + half;
  }

  /** W = f_εε and the Cholesky factor of I + σ² D^½ W D^½; false where that is not positive definite. */
  function factorise(variance: number, onlyDiagonal = false): boolean {
    w.fill(0);
    for (let g = 0; g < design.strata; g++)
      for (let i = 0; i < n * n; i++) w[i] += rowsOf.survivalSurvival[g * n * n + i];
    for (let i = 0; i < n; i++)
      for (let j = 0; j < n; j++) {
        const entry = onlyDiagonal ? (i === j ? Math.max(0, w[i * n + i]) : 0) : w[i * n + j];
        factor[i * n + j] = (i === j ? 1 : 0) + variance * root[i] * root[j] * entry;
      }
    return choleskyInPlace(factor, n);
  }

  /** Newton's method on z with halving; the joint value at the mode, Infinity where it fails. */
  function findMode(z: Float64Array, sd: number): number {
    let value = joint(z, sd);
    for (let iteration = 0; iteration < 100; iteration++) {
      let worst = 0;
      for (let t = 0; t < n; t++) {
        column[t] = -(sd * root[t] * gradient[t] + z[t]);
        worst = Math.max(worst, Math.abs(column[t]));
      }
      if (!Number.isFinite(value) || Number.isNaN(worst)) break;
      if (worst <= MODE_TOLERANCE) return value;
      rowsOf.curvature(false);
      // away from the mode the curvature may be indefinite; its positive diagonal still gives descent
      if (!factorise(sd * sd)) factorise(sd * sd, true);
      choleskySolve(factor, n, column);
      let scale = 1;
      for (; scale > 1e-10; scale /= 2) {
        for (let t = 0; t < n; t++) trial[t] = z[t] + scale * column[t];
        const next = joint(trial, sd);
        // at rounding level a full Newton step is taken as it is
        if (next <= value + 1e-13 * (1 + Math.abs(value))) {
          value = next;
          break;
        }
      }
      if (scale <= 1e-10) return worst < 1e-6 ? joint(z, sd) : Number.POSITIVE_INFINITY;
      z.set(trial);
    }
    return Number.POSITIVE_INFINITY;
  }

  /** G = σ² D^½ L⁻ᵀ L⁻¹ D^½ into `spread`, from the factor. */
  function spreadOf(variance: number): void {
    if (variance === 0) {
      spread.fill(0);
      return;
    }
    inverseLower(factor, n, inverse);
    for (let i = 0; i < n; i++)
      for (let j = 0; j <= i; j++) {
        let sum = 0;
        for (let k = i; k < n; k++) sum += inverse[k * n + i] * inverse[k * n + j];
        spread[i * n + j] = spread[j * n + i] = variance * root[i] * root[j] * sum;
      }
  }

  /** Sum of the column of θ_j times values by row: of survival where j < b, else of recapture. */
  function along(j: number, bySurvival: Float64Array, byRecapture: Float64Array): number {
    const by = j < b ? bySurvival : byRecapture;
    let sum = 0;
    for (let r = 0; r < rows; r++) sum += columns[j][r] * by[r];
    return sum;
  }

  /**
   * Derivatives of the row gradients along θ_j: of survival rows into `survival`, and if `whole` those of recapture rows into
   * `recapture`.
   */
  function crossed(j: number, whole: boolean): void {
    const { survivalSurvival: ss, survivalRecapture: sp, recaptureRecapture: pp } = rowsOf;
    const values = columns[j];
    survival.fill(0);
    if (whole) recapture.fill(0);
    for (let r = 0; r < rows; r++) {
      const c = values[r];
      if (c === 0) continue;
      const i = r % n;
      const from = r - i;
      const row = r * n; // of the block of the stratum, (r − i)n + in
      if (j < b) for (let t = 0; t < n; t++) survival[from + t] += c * ss[row + t];
      else for (let t = 0; t < n; t++) survival[from + t] += c * sp[(from + t) * n + i];
      if (!whole || a === 0) continue;
      const block = j < b ? sp : pp;
      for (let t = 0; t < n; t++) recapture[from + t] += c * block[row + t];
    }
  }

  function mode(theta: Float64Array, variance: number, effects: Float64Array, informed = true): EffectsMode {
    const sd = Math.sqrt(variance);
    fixedSurvival.fill(0);
    logitRecapture.fill(0);
    for (let j = 0; j < d; j++) {
      const into = j < b ? fixedSurvival : logitRecapture;
      for (let r = 0; r < rows; r++) into[r] += columns[j][r] * theta[j];
    }
    // one piece of memory for all that the point keeps
    const kept = new Float64Array(n + d + (d + 1) * n + (informed ? d * d : 0));
    const z = kept.subarray(0, n);
    if (sd > 0) for (let t = 0; t < n; t++) z[t] = effects[t] / (sd * root[t]);
    const value = findMode(z, sd);
    const jointGradient = kept.subarray(n, n + d);
    const tangents = kept.subarray(n + d, n + d + (d + 1) * n);
    const information = kept.subarray(n + d + (d + 1) * n);
    for (let t = 0; t < n; t++) z[t] *= sd * root[t];
    const found = {
      theta,
      variance,
      effects: z,
      jointGradient,
      tangents,
      information,
    };
    const failed = { ...found, joint: Number.POSITIVE_INFINITY, halfLogDet: 0 };
    if (value === Number.POSITIVE_INFINITY) return failed;
    rowsOf.curvature(true);
    if (!factorise(variance)) return failed;
    let halfLogDet = 0;
    for (let t = 0; t < n; t++) {
      if (factor[t * n + t] ** 2 < LEAST_PIVOT) return failed;
      halfLogDet += Math.log(factor[t * n + t]);
    }

    spreadOf(variance);
    mixed.fill(0); // f_θε
    for (let j = 0; j < d; j++) {
      jointGradient[j] = along(j, rowsOf.bySurvival, rowsOf.byRecapture);
      const x = common[j];
      if (informed || x === undefined) crossed(j, informed);
      if (informed) for (let i = 0; i <= j; i++) information[i * d + j] = along(i, survival, recapture);
      if (x === undefined) for (let r = 0; r < rows; r++) mixed[j * n + (r % n)] += survival[r];
      else multiply(w, x, mixed, j * n);
      // dε̂/dθ_j = −G f_εθj
      if (variance > 0) multiply(spread, mixed.subarray(j * n, (j + 1) * n), tangents, j * n, -1);
    }
    for (let i = 0; i < d && informed; i++)
      for (let j = i; j < d; j++) {
        for (let t = 0; t < n; t++) information[i * d + j] += mixed[i * n + t] * tangents[j * n + t];
        information[j * d + i] = information[i * d + j];
      }
    // dε̂/dσ² = D^½ B D^½ a, a = −f_ε
    for (let t = 0; t < n; t++) column[t] = -root[t] * gradient[t];
    choleskySolve(factor, n, column);
    for (let t = 0; t < n; t++) tangents[d * n + t] = root[t] * column[t];
    return { ...found, joint: value, halfLogDet };
  }

  function at(theta: Float64Array, variance: number, effects: Float64Array, informed = true): LaplacePoint {
    const found = mode(theta, variance, effects, informed);
    const total = new Float64Array(d + 1);
    if (found.joint === Number.POSITIVE_INFINITY)
      return { ...found, value: Number.POSITIVE_INFINITY, gradient: total, varianceInformation: 0 };
    const { tangents } = found;
    // Φ_row = ½ Σ G_st ∂W_st/∂row
    if (variance > 0) rowsOf.slopesOfTrace(spread, thirdSurvival, thirdRecapture);
    else {
      thirdSurvival.fill(0);
      thirdRecapture.fill(0);
    }
    for (let j = 0; j < d; j++) total[j] = found.jointGradient[j] + along(j, thirdSurvival, thirdRecapture);
    for (let j = 0; j <= d; j++)
      for (let r = 0; r < rows; r++) total[j] += tangents[j * n + (r % n)] * thirdSurvival[r];
    // explicit derivatives in σ²: −½ Σ a²/Δ + ½ tr P, P = B D^½ W D^½ = (I − B)/σ²
    for (let t = 0; t < n; t++) total[d] -= 0.5 * (root[t] * gradient[t]) ** 2;
    if (!informed && variance > SMALL_VARIANCE) {
      let traceB = 0;
      for (let i = 0; i < n * n; i++) traceB += inverse[i] * inverse[i];
      total[d] += (0.5 * (n - traceB)) / variance;
      return {
        ...found,
        value: found.joint + found.halfLogDet,
        gradient: total,
        varianceInformation: Number.NaN,
      };
    }
    for (let j = 0; j < n; j++) {
      for (let t = 0; t < n; t++) column[t] = root[t] * root[j] * w[t * n + j];
      choleskySolve(factor, n, column);
      scaled.set(column, j * n);
      total[d] += 0.5 * column[j];
    }
    let squared = 0;
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) squared += scaled[i * n + j] * scaled[j * n + i];
    return {
      ...found,
      value: found.joint + found.halfLogDet,
      gradient: total,
      varianceInformation: 0.5 * squared,
    };
  }

  return { dimension: d, mode, at };
}

/** by · Mx of an n × n matrix into `out` from a place on. */
function multiply(m: Float64Array, x: Float64Array, out: Float64Array, from: number, by = 1): void {
  const n = x.length;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let t = 0; t < n; t++) sum += m[i * n + t] * x[t];
    out[from + i] = by * sum;
  }
}
