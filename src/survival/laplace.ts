import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import type { EffectsDesign } from "./effects-design.ts";
import { cjsLikelihood } from "./likelihood.ts";
import type { SufficientStatistics } from "./statistics.ts";
import { thirdDerivatives } from "./third-derivatives.ts";

/** The Laplace approximation at (θ, σ²), with what a next step needs. d = b + a fixed coefficients θ = (β, α). */
export interface LaplacePoint {
  readonly theta: Float64Array;
  readonly variance: number;
  /** −log of the marginal likelihood; Infinity where the mode was not found. */
  readonly value: number;
  /** ∂/∂θ, then ∂/∂σ²: d + 1. */
  readonly gradient: Float64Array;
  /** The modes ε̂_t, n. */
  readonly effects: Float64Array;
  /** dε̂/dθ_j (d rows of n), then dε̂/dσ²: (d + 1) × n. */
  readonly tangents: Float64Array;
  /** Second derivatives of the profile over ε: f_θθ − f_θε G f_εθ, d × d. */
  readonly information: Float64Array;
  /** Expected information on σ² of a Gaussian model with the same W: ½ tr[(D^½ V⁻¹ D^½)²]. */
  readonly varianceInformation: number;
}

export interface Laplace {
  readonly dimension: number;
  /** `effects`: where the search for the mode starts. */
  at(theta: Float64Array, variance: number, effects: Float64Array): LaplacePoint;
}

const MODE_TOLERANCE = 1e-9;

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
  const { design, survival: b, intervals: n, recapture: a, fixed } = model;
  const likelihood = cjsLikelihood(data, design);
  const third = thirdDerivatives(data, design);
  const d = b + a;
  const all = d + n;
  const rows = design.strata * n;
  const x = new Float64Array(all);
  const gradient = new Float64Array(all);
  const whole = new Float64Array(all * all);
  const everything = Int32Array.from({ length: all }, (_, k) => k);
  const onlyEffects = Int32Array.from({ length: n }, (_, t) => b + t);
  const root = Float64Array.from(design.lengths, (length) => 1 / Math.sqrt(length)); // D^½
  const w = new Float64Array(n * n);
  const factor = new Float64Array(n * n);

  /** −log joint at z with sd; leaves x and gradient there. */
  function joint(z: Float64Array, sd: number): number {
    let half = 0;
    for (let t = 0; t < n; t++) {
      x[b + t] = sd * root[t] * z[t];
      half += 0.5 * z[t] * z[t];
    }
    return likelihood.evaluate(x, gradient) + half;
  }

  /** Cholesky factor of I + σ² D^½ W D^½ into `factor`. */
  function factorise(curvature: Float64Array, variance: number): boolean {
    for (let i = 0; i < n; i++)
      for (let j = 0; j < n; j++)
        factor[i * n + j] = (i === j ? 1 : 0) + variance * root[i] * root[j] * curvature[i * n + j];
    return choleskyInPlace(factor, n);
  }

  /** Newton's method on z with halving; the objective at the mode, or undefined. */
  function findMode(z: Float64Array, sd: number): number | undefined {
    let value = joint(z, sd);
    const step = new Float64Array(n);
    const trial = new Float64Array(n);
    for (let iteration = 0; iteration < 100; iteration++) {
      let worst = 0;
      for (let t = 0; t < n; t++) {
        step[t] = -(sd * root[t] * gradient[b + t] + z[t]);
        worst = Math.max(worst, Math.abs(step[t]));
      }
      if (!Number.isFinite(value) || Number.isNaN(worst)) return undefined;
      if (worst <= MODE_TOLERANCE) return value;
      likelihood.curvature(onlyEffects, w);
      // away from the mode the curvature may be indefinite; its positive diagonal still gives descent
      if (!factorise(w, sd * sd)) {
        const diagonal = new Float64Array(n * n);
        for (let t = 0; t < n; t++) diagonal[t * n + t] = Math.max(0, w[t * n + t]);
        factorise(diagonal, sd * sd);
      }
      choleskySolve(factor, n, step);
      let scale = 1;
      for (; ; scale /= 2) {
        if (scale < 1e-10) return worst < 1e-6 ? joint(z, sd) : undefined;
        for (let t = 0; t < n; t++) trial[t] = z[t] + scale * step[t];
        const next = joint(trial, sd);
        // at rounding level a full Newton step is taken as it is
        if (next <= value + 1e-13 * (1 + Math.abs(value))) {
          value = next;
          break;
        }
      }
      z.set(trial);
    }
    return undefined;
  }

  function at(theta: Float64Array, variance: number, effects: Float64Array): LaplacePoint {
    const sd = Math.sqrt(variance);
    for (let k = 0; k < d; k++) x[fixed[k]] = theta[k];
    const z = Float64Array.from(effects, (e, t) => (sd === 0 ? 0 : e / (sd * root[t])));
    const value = findMode(z, sd);
    const nothing = { theta, variance, effects, gradient: new Float64Array(d + 1) };
    const failed = (): LaplacePoint => ({
      ...nothing,
      value: Number.POSITIVE_INFINITY,
      tangents: new Float64Array((d + 1) * n),
      information: new Float64Array(d * d),
      varianceInformation: 0,
    });
    if (value === undefined) return failed();
    likelihood.curvature(everything, whole);
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) w[i * n + j] = whole[(b + i) * all + b + j];
    if (!factorise(w, variance)) return failed();
    let logDet = 0;
    for (let t = 0; t < n; t++) logDet += Math.log(factor[t * n + t]); // ½ log det

    // Φ_row = Σ_k ½ D³f[u_k, u_k, ·], u_k the columns of σ D^½ L⁻ᵀ
    const bySurvival = new Float64Array(rows);
    const byRecapture = new Float64Array(rows);
    const inverse = inverseLower(factor, n); // L⁻¹
    if (variance > 0) {
      third.at(...logits());
      const u = new Float64Array(n);
      for (let k = 0; k < n; k++) {
        for (let t = 0; t < n; t++) u[t] = sd * root[t] * inverse[k * n + t];
        third.add(u, bySurvival, byRecapture);
      }
    }
    const phiEffects = new Float64Array(n);
    for (let r = 0; r < rows; r++) phiEffects[r % n] += bySurvival[r];

    // Tangents: dε̂/dθ_j = −G f_εθj, dε̂/dσ² = D^½ B D^½ a
    const tangents = new Float64Array((d + 1) * n);
    const column = new Float64Array(n);
    const information = new Float64Array(d * d);
    const total = new Float64Array(d + 1);
    for (let j = 0; j < d; j++) {
      for (let t = 0; t < n; t++) column[t] = root[t] * whole[fixed[j] * all + b + t];
      choleskySolve(factor, n, column);
      for (let t = 0; t < n; t++) tangents[j * n + t] = -variance * root[t] * column[t];
      total[j] = gradient[fixed[j]] + fixedPart(j, bySurvival, byRecapture);
      for (let t = 0; t < n; t++) total[j] += tangents[j * n + t] * phiEffects[t];
    }
    for (let i = 0; i < d; i++)
      for (let j = 0; j < d; j++) {
        let sum = whole[fixed[i] * all + fixed[j]];
        for (let t = 0; t < n; t++) sum += whole[fixed[i] * all + b + t] * tangents[j * n + t];
        information[i * d + j] = sum;
      }
    for (let t = 0; t < n; t++) column[t] = -root[t] * gradient[b + t];
    for (let t = 0; t < n; t++) total[d] -= 0.5 * column[t] * column[t];
    choleskySolve(factor, n, column);
    for (let t = 0; t < n; t++) {
      tangents[d * n + t] = root[t] * column[t];
      total[d] += phiEffects[t] * tangents[d * n + t];
    }
    // P = B D^½ W D^½, column by column
    let squared = 0;
    const scaled = new Float64Array(n * n);
    for (let j = 0; j < n; j++) {
      for (let t = 0; t < n; t++) column[t] = root[t] * root[j] * w[t * n + j];
      choleskySolve(factor, n, column);
      scaled.set(column, j * n);
      total[d] += 0.5 * column[j];
    }
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) squared += scaled[i * n + j] * scaled[j * n + i];
    return {
      theta,
      variance,
      value: value + logDet,
      gradient: total,
      effects: x.slice(b, b + n),
      tangents,
      information,
      varianceInformation: 0.5 * squared,
    };
  }

  function logits(): [Float64Array, Float64Array] {
    const recaptureColumns = "known" in design.recapture ? [] : design.recapture.columns;
    const [eta, zeta] = [new Float64Array(rows), new Float64Array(rows)];
    for (let r = 0; r < rows; r++) {
      eta[r] = x[b + (r % n)];
      for (let k = 0; k < b; k++) eta[r] += design.survival.columns[k][r] * x[k];
      for (let k = 0; k < a; k++) zeta[r] += recaptureColumns[k][r] * x[b + n + k];
    }
    return [eta, zeta];
  }

  /** Φ_θj from the derivatives by row. */
  function fixedPart(j: number, bySurvival: Float64Array, byRecapture: Float64Array): number {
    const recaptureColumns = "known" in design.recapture ? [] : design.recapture.columns;
    const column = j < b ? design.survival.columns[j] : recaptureColumns[j - b];
    const by = j < b ? bySurvival : byRecapture;
    let sum = 0;
    for (let r = 0; r < rows; r++) sum += column[r] * by[r];
    return sum;
  }

  return { dimension: d, at };
}

/** L⁻¹ of the lower triangle, row-major. */
function inverseLower(l: Float64Array, n: number): Float64Array {
  const out = new Float64Array(n * n);
  for (let j = 0; j < n; j++) {
    out[j * n + j] = 1 / l[j * n + j];
    for (let i = j + 1; i < n; i++) {
      let sum = 0;
      for (let k = j; k < i; k++) sum -= l[i * n + k] * out[k * n + j];
      out[i * n + j] = sum / l[i * n + i];
    }
  }
  return out;
}
