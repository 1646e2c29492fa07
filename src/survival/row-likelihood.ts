import type { Design } from "./design.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** −log L as a function of the logits themselves, row by row (G·n survival, G·n recapture), with its derivatives. */
export interface RowLikelihood {
  /** −log L at the point; the other members then speak of this point. +Infinity where it is not defined. */
  at(logitSurvival: Float64Array, logitRecapture: Float64Array): number;
  /** ∂(−log L)/∂ logit, G·n each. */
  readonly bySurvival: Float64Array;
  readonly byRecapture: Float64Array;
  /**
   * Second derivatives, three n × n blocks a stratum (row-major, stratum after stratum): survival × survival,
   * survival × recapture, recapture × recapture. Recapture blocks only if `whole`.
   */
  curvature(whole: boolean): void;
  readonly survivalSurvival: Float64Array;
  readonly survivalRecapture: Float64Array;
  readonly recaptureRecapture: Float64Array;
  /**
   * Adds ½ D³(−log L)[u, u, ·] to `bySurvival` and `byRecapture` given (derivatives in each row's logit), u being a
   * direction over the n intervals that moves the survival logit of all strata.
   */
  addThird(u: Float64Array, bySurvival: Float64Array, byRecapture: Float64Array): void;
}

/**
 * The Cormack–Jolly–Seber likelihood (see `cjsLikelihood` for the formula) in its rows. With c = φq,
 * a_t = 1 − q_t χ_{t+1}, σ_t = Δ_t(1 − s_t) = d log φ_t/d logit s_t and
 *
 *     e_t = φ_t σ_t a_t,    h_t = φ_t χ_{t+1} p_t q_t        (∂χ_t/∂ logit s_t = −e_t, ∂χ_t/∂ logit p_t = −h_t),
 *     v_t = U_t/χ_t + c_{t−1} v_{t−1},    k_t = U_t/χ_t² + c²_{t−1} k_{t−1},
 *
 * the second derivatives of −log L factor for s < t, with m_s = e_s k_s + v_s σ_s and r_s = h_s k_s − v_s p_s:
 *
 *     (s_s, s_t): m_s c_s⋯c_{t−1} e_t,   (s_s, p_t): m_s c_s⋯c_{t−1} h_t,
 *     (p_s, s_t): r_s c_s⋯c_{t−1} e_t,   (p_s, p_t): r_s c_s⋯c_{t−1} h_t,
 *
 * so the whole matrix costs O(n²). Third derivatives along u are the sweeps of the gradient in truncated Taylor
 * arithmetic, each quantity carried as (c0, c1, c2) in c0 + c1 h + c2 h²: O(n) a direction.
 */
export function rowLikelihood(data: readonly SufficientStatistics[], design: Design): RowLikelihood {
  const n = design.intervals;
  const rows = design.strata * n;
  const known = "known" in design.recapture ? design.recapture.known : undefined;
  const [s, s1, phi, p, q, v, k] = [0, 1, 2, 3, 4, 5, 6].map(() => new Float64Array(rows));
  const chi = new Float64Array(design.strata * (n + 1));
  const bySurvival = new Float64Array(rows);
  const byRecapture = new Float64Array(rows);
  const [ss, sp, pp] = [0, 1, 2].map(() => new Float64Array(rows * n));
  const [chi1, chi2] = [new Float64Array(n + 1), new Float64Array(n + 1)];
  const [slope0, slope1, slope2, phi1, phi2, a0, unseen] = [0, 1, 2, 3, 4, 5, 6].map(
    () => new Float64Array(rows),
  );
  let prepared = false;

  function at(logitSurvival: Float64Array, logitRecapture: Float64Array): number {
    prepared = false;
    let logLikelihood = 0;
    for (let g = 0; g < design.strata; g++) {
      const { alive, seen, passed, lastSeen } = data[g];
      const from = g * (n + 1);
      chi[from + n] = 1;
      // backwards, since χ_t needs χ_{t+1}
      for (let t = n - 1; t >= 0; t--) {
        const r = g * n + t;
        const eta = logitSurvival[r];
        // e^−|η| keeps s, 1 − s and their logarithms exact far from one half
        const small = Math.exp(-Math.abs(eta));
        s[r] = (eta >= 0 ? 1 : small) / (1 + small);
        s1[r] = (eta >= 0 ? small : 1) / (1 + small);
        const logPhi = design.lengths[t] * (Math.min(0, eta) - Math.log1p(small));
        phi[r] = Math.exp(logPhi);
        if (alive[t] > 0) logLikelihood += alive[t] * logPhi;
        if (known !== undefined) {
          p[r] = known;
          q[r] = 1 - known;
          if (seen[t] > 0) logLikelihood += seen[t] * Math.log(known);
          if (passed[t] > 0) logLikelihood += passed[t] * Math.log(1 - known);
        } else {
          const zeta = logitRecapture[r];
          const tiny = Math.exp(-Math.abs(zeta));
          const log1 = Math.log1p(tiny);
          p[r] = (zeta >= 0 ? 1 : tiny) / (1 + tiny);
          q[r] = (zeta >= 0 ? tiny : 1) / (1 + tiny);
          if (seen[t] > 0) logLikelihood += seen[t] * (zeta >= 0 ? -log1 : zeta - log1);
          if (passed[t] > 0) logLikelihood += passed[t] * (zeta >= 0 ? -zeta - log1 : -log1);
        }
        chi[from + t] = -Math.expm1(logPhi) + phi[r] * q[r] * chi[from + t + 1];
        if (lastSeen[t] > 0) logLikelihood += lastSeen[t] * Math.log(chi[from + t]);
      }
      let [carried, squared] = [0, 0];
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const share = lastSeen[t] > 0 ? lastSeen[t] / chi[from + t] : 0;
        v[r] = share + carried;
        k[r] = (share > 0 ? share / chi[from + t] : 0) + squared;
        const c = phi[r] * q[r];
        carried = v[r] * c;
        squared = k[r] * c * c;
        const next = chi[from + t + 1];
        const slope = design.lengths[t] * s1[r];
        bySurvival[r] = v[r] * phi[r] * slope * (1 - q[r] * next) - alive[t] * slope;
        byRecapture[r] = v[r] * phi[r] * next * p[r] * q[r] + passed[t] * p[r] - seen[t] * q[r];
      }
    }
    return Number.isNaN(logLikelihood) ? Number.POSITIVE_INFINITY : -logLikelihood;
  }

  function curvature(whole: boolean): void {
    for (let g = 0; g < design.strata; g++) {
      const { alive, seen, passed } = data[g];
      const block = g * n * n;
      for (let i = 0; i < n; i++) {
        const r = g * n + i;
        const next = chi[g * (n + 1) + i + 1];
        const slope = design.lengths[i] * s1[r];
        const e = phi[r] * slope * (1 - q[r] * next);
        const h = phi[r] * next * p[r] * q[r];
        const m = e * k[r] + v[r] * slope;
        const w = h * k[r] - v[r] * p[r];
        ss[block + i * n + i] = alive[i] * slope * s[r] + e * e * k[r] + v[r] * e * (slope - s[r]);
        if (whole) {
          sp[block + i * n + i] = h * m;
          pp[block + i * n + i] =
            (seen[i] + passed[i]) * p[r] * q[r] + h * h * k[r] + v[r] * h * (q[r] - p[r]);
        }
        let product = 1;
        for (let t = i + 1; t < n; t++) {
          const later = g * n + t;
          product *= phi[later - 1] * q[later - 1];
          const away = chi[g * (n + 1) + t + 1];
          const eT = phi[later] * design.lengths[t] * s1[later] * (1 - q[later] * away);
          const value = m * product * eT;
          ss[block + i * n + t] = value;
          ss[block + t * n + i] = value;
          if (!whole) continue;
          const hT = phi[later] * away * p[later] * q[later];
          sp[block + i * n + t] = m * product * hT;
          sp[block + t * n + i] = w * product * eT;
          pp[block + i * n + t] = w * product * hT;
          pp[block + t * n + i] = w * product * hT;
        }
      }
    }
  }

  /** What all directions share at a point: derivatives of φ_t and of the slope σ_t along logit s_t, and 1/χ_t. */
  function prepareThird(): void {
    for (let r = 0; r < rows; r++) {
      const t = r % n;
      const g = (r - t) / n;
      const slope = design.lengths[t] * s1[r];
      slope0[r] = slope;
      slope1[r] = -slope * s[r];
      slope2[r] = 0.5 * slope * s[r] * (s[r] - s1[r]);
      phi1[r] = phi[r] * slope;
      phi2[r] = 0.5 * phi1[r] * (slope - s[r]);
      a0[r] = 1 - q[r] * chi[g * (n + 1) + t + 1];
      unseen[r] = data[g].lastSeen[t] > 0 ? 1 / chi[g * (n + 1) + t] : 0;
    }
    prepared = true;
  }

  function addThird(u: Float64Array, thirdSurvival: Float64Array, thirdRecapture: Float64Array): void {
    if (!prepared) prepareThird();
    for (let g = 0; g < design.strata; g++) {
      const { alive, lastSeen } = data[g];
      chi1[n] = 0;
      chi2[n] = 0;
      // χ_t = 1 − φ_t a_t with a_t = 1 − q_t χ_{t+1}; only φ and what follows from it move along u
      for (let t = n - 1; t >= 0; t--) {
        const r = g * n + t;
        const a1 = -q[r] * chi1[t + 1];
        const a2 = -q[r] * chi2[t + 1];
        const [f1, f2] = [phi1[r] * u[t], phi2[r] * u[t] * u[t]];
        chi1[t] = -(f1 * a0[r] + phi[r] * a1);
        chi2[t] = -(f2 * a0[r] + f1 * a1 + phi[r] * a2);
      }
      let [carried0, carried1, carried2] = [0, 0, 0];
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const a1 = -q[r] * chi1[t + 1];
        const a2 = -q[r] * chi2[t + 1];
        const d1 = slope1[r] * u[t];
        const d2 = slope2[r] * u[t] * u[t];
        const f1 = phi1[r] * u[t];
        const f2 = phi2[r] * u[t] * u[t];
        // v = U/χ + what comes from earlier intervals
        let [v0, v1, v2] = [carried0, carried1, carried2];
        if (lastSeen[t] > 0) {
          const r0 = unseen[r];
          const r1 = -chi1[t] * r0 * r0;
          const r2 = -(chi1[t] * r1 + chi2[t] * r0) * r0;
          v0 += lastSeen[t] * r0;
          v1 += lastSeen[t] * r1;
          v2 += lastSeen[t] * r2;
        }
        const y0 = v0 * phi[r];
        const y1 = v0 * f1 + v1 * phi[r];
        const y2 = v0 * f2 + v1 * f1 + v2 * phi[r];
        carried0 = y0 * q[r];
        carried1 = y1 * q[r];
        carried2 = y2 * q[r];
        const m0 = slope0[r] * a0[r];
        const m1 = slope0[r] * a1 + d1 * a0[r];
        const m2 = slope0[r] * a2 + d1 * a1 + d2 * a0[r];
        // signs: ∂log L/∂η = A·slope − v φ slope a, ∂log L/∂ζ = … − v φ χ p q, and f = −log L
        thirdSurvival[r] += y0 * m2 + y1 * m1 + y2 * m0 - alive[t] * d2;
        if (known === undefined)
          thirdRecapture[r] +=
            (y0 * chi2[t + 1] + y1 * chi1[t + 1] + y2 * chi[g * (n + 1) + t + 1]) * p[r] * q[r];
      }
    }
  }

  return {
    at,
    bySurvival,
    byRecapture,
    curvature,
    survivalSurvival: ss,
    survivalRecapture: sp,
    recaptureRecapture: pp,
    addThird,
  };
}
