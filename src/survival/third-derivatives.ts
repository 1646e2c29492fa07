import type { Design } from "./design.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** Third derivatives of −log L at a point, contracted with directions over the intervals. */
export interface ThirdDerivatives {
  /** Takes the logits of survival and recapture, row by row (G·n each), as the point. */
  at(logitSurvival: Float64Array, logitRecapture: Float64Array): void;
  /**
   * Adds ½ D³(−log L)[u, u, ·] to `bySurvival` and `byRecapture` (derivatives in each row's logit, G·n), u being a
   * direction over the n intervals that moves the survival logit of all strata.
   */
  add(u: Float64Array, bySurvival: Float64Array, byRecapture: Float64Array): void;
}

/**
 * The gradient of ½ log det of a Laplace approximation needs Σ_st G_st ∂W_st/∂(logit of row r), W the second
 * derivatives in the interval effects. With G = Σ_k u_k u_kᵀ this is Σ_k D³f[u_k, u_k, ·]: the sweeps of the
 * gradient (see `cjsLikelihood`) in truncated Taylor arithmetic, each quantity carried as (c0, c1, c2) in
 * c0 + c1 h + c2 h² along u. One direction costs O(T).
 */
export function thirdDerivatives(data: readonly SufficientStatistics[], design: Design): ThirdDerivatives {
  const n = design.intervals;
  const rows = design.strata * n;
  const known = "known" in design.recapture ? design.recapture.known : undefined;
  const [s, s1, phi, p, q] = [0, 1, 2, 3, 4].map(() => new Float64Array(rows));
  const chi = new Float64Array(design.strata * (n + 1));
  const [chi1, chi2] = [new Float64Array(n + 1), new Float64Array(n + 1)];

  function at(logitSurvival: Float64Array, logitRecapture: Float64Array): void {
    for (let g = 0; g < design.strata; g++) {
      chi[g * (n + 1) + n] = 1;
      for (let t = n - 1; t >= 0; t--) {
        const r = g * n + t;
        // e^−|η| keeps both s and 1 − s exact far from one half
        const small = Math.exp(-Math.abs(logitSurvival[r]));
        s[r] = (logitSurvival[r] >= 0 ? 1 : small) / (1 + small);
        s1[r] = (logitSurvival[r] >= 0 ? small : 1) / (1 + small);
        const logS = (logitSurvival[r] >= 0 ? 0 : logitSurvival[r]) - Math.log1p(small);
        phi[r] = Math.exp(design.lengths[t] * logS);
        const tiny = Math.exp(-Math.abs(logitRecapture[r]));
        p[r] = known ?? (logitRecapture[r] >= 0 ? 1 : tiny) / (1 + tiny);
        q[r] = known === undefined ? (logitRecapture[r] >= 0 ? tiny : 1) / (1 + tiny) : 1 - known;
        const c = g * (n + 1) + t;
        chi[c] = -Math.expm1(design.lengths[t] * logS) + phi[r] * q[r] * chi[c + 1];
      }
    }
  }

  function add(u: Float64Array, bySurvival: Float64Array, byRecapture: Float64Array): void {
    for (let g = 0; g < design.strata; g++) {
      const { alive, lastSeen } = data[g];
      const from = g * (n + 1);
      chi1[n] = 0;
      chi2[n] = 0;
      // χ_t = 1 − φ_t a_t with a_t = 1 − q_t χ_{t+1}; only φ and what follows from it move along u
      for (let t = n - 1; t >= 0; t--) {
        const r = g * n + t;
        const a0 = 1 - q[r] * chi[from + t + 1];
        const a1 = -q[r] * chi1[t + 1];
        const a2 = -q[r] * chi2[t + 1];
        const slope = design.lengths[t] * s1[r];
        const phi1 = phi[r] * slope * u[t];
        const phi2 = 0.5 * phi1 * u[t] * (slope - s[r]);
        chi1[t] = -(phi1 * a0 + phi[r] * a1);
        chi2[t] = -(phi2 * a0 + phi1 * a1 + phi[r] * a2);
      }
      let [carried0, carried1, carried2] = [0, 0, 0];
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const next = chi[from + t + 1];
        const a0 = 1 - q[r] * next;
        const a1 = -q[r] * chi1[t + 1];
        const a2 = -q[r] * chi2[t + 1];
        const slope0 = design.lengths[t] * s1[r];
        const slope1 = -slope0 * s[r] * u[t];
        const slope2 = -0.5 * slope1 * u[t] * (s[r] - s1[r]);
        const phi1 = phi[r] * slope0 * u[t];
        const phi2 = 0.5 * phi1 * u[t] * (slope0 - s[r]);
        // v = U/χ + what comes from earlier intervals
        let [v0, v1, v2] = [carried0, carried1, carried2];
        if (lastSeen[t] > 0) {
          const r0 = 1 / chi[from + t];
          const r1 = -chi1[t] * r0 * r0;
          const r2 = -(chi1[t] * r1 + chi2[t] * r0) * r0;
          v0 += lastSeen[t] * r0;
          v1 += lastSeen[t] * r1;
          v2 += lastSeen[t] * r2;
        }
        const y0 = v0 * phi[r];
        const y1 = v0 * phi1 + v1 * phi[r];
        const y2 = v0 * phi2 + v1 * phi1 + v2 * phi[r];
        carried0 = y0 * q[r];
        carried1 = y1 * q[r];
        carried2 = y2 * q[r];
        const m0 = slope0 * a0;
        const m1 = slope0 * a1 + slope1 * a0;
        const m2 = slope0 * a2 + slope1 * a1 + slope2 * a0;
        // signs: ∂log L/∂η = A·slope − v φ slope a, ∂log L/∂ζ = … − v φ χ p q, and f = −log L
        bySurvival[r] += y0 * m2 + y1 * m1 + y2 * m0 - alive[t] * slope2;
        byRecapture[r] += (y0 * chi2[t + 1] + y1 * chi1[t + 1] + y2 * next) * p[r] * q[r];
      }
    }
  }

  return { at, add };
}
