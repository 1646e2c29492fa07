import { arraysOf } from "../math/products.ts";
import type { Design } from "./design.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** Below this φq is so small that what comes through its interval is summed term by term. */
const SMALL = 1e-6;

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
   * Writes ∂/∂ logit of ½ Σ_st G_st W_st, W the survival × survival blocks summed over strata and G (n × n, symmetric) held,
   * into `bySurvival` and `byRecapture` (G·n each). Needs `curvature` at the point.
   */
  slopesOfTrace(g: Float64Array, bySurvival: Float64Array, byRecapture: Float64Array): void;
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
 * so the whole matrix costs O(n²), and so do the derivatives of a weighted sum of its entries, which are carried backwards
 * through these formulas (adjoints; Griewank & Walther 2008, chapter 3): no third derivatives along directions are needed.
 */
export function rowLikelihood(data: readonly SufficientStatistics[], design: Design): RowLikelihood {
  const n = design.intervals;
  const rows = design.strata * n;
  const known = "known" in design.recapture ? design.recapture.known : undefined;
  const [s, s1, phi, p, q, v, k, bySurvival, byRecapture] = arraysOf(9, rows);
  const chi = new Float64Array(design.strata * (n + 1));
  const [ss, sp, pp] = arraysOf(3, rows * n);
  // at the point of the last `curvature`, by row
  const [sigma, e, h, c, m] = arraysOf(5, rows);
  // adjoints of one stratum
  const [barM, barE, barC, barV, barK, barChi] = arraysOf(6, n + 1);

  const heldLogits = new Float64Array(rows).fill(Number.NaN);
  let heldRecapture = 0;

  /** p and q of all rows and Σ B log p + C log q; as they are where the logits have not moved, as in search of a mode. */
  function recaptureRates(logits: Float64Array): number {
    let same = true;
    for (let r = 0; r < rows && same; r++) same = logits[r] === heldLogits[r];
    if (same) return heldRecapture;
    heldLogits.set(logits);
    heldRecapture = 0;
    for (let r = 0; r < rows; r++) {
      const zeta = logits[r];
      const tiny = Math.exp(-Math.abs(zeta));
      const log1 = Math.log1p(tiny);
      p[r] = known ?? (zeta >= 0 ? 1 : tiny) / (1 + tiny);
      q[r] = known === undefined ? (zeta >= 0 ? tiny : 1) / (1 + tiny) : 1 - known;
      const logP = known === undefined ? Math.min(0, zeta) - log1 : Math.log(known);
      const logQ = known === undefined ? Math.min(0, -zeta) - log1 : Math.log(1 - known);
      const { seen, passed } = data[Math.floor(r / n)];
      if (seen[r % n] > 0) heldRecapture += seen[r % n] * logP;
      if (passed[r % n] > 0) heldRecapture += passed[r % n] * logQ;
    }
    return heldRecapture;
  }

  function at(logitSurvival: Float64Array, logitRecapture: Float64Array): number {
    let logLikelihood = recaptureRates(logitRecapture);
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
        const year = design.lengths[t] === 1;
        const logPhi = design.lengths[t] * (Math.min(0, eta) - Math.log1p(small));
        phi[r] = year ? s[r] : Math.exp(logPhi);
        if (alive[t] > 0) logLikelihood += alive[t] * logPhi;
        const die = year ? s1[r] : -Math.expm1(logPhi);
        chi[from + t] = die + phi[r] * q[r] * chi[from + t + 1];
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
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const next = chi[r + g + 1];
        sigma[r] = design.lengths[t] * s1[r];
        e[r] = phi[r] * sigma[r] * (1 - q[r] * next);
        h[r] = phi[r] * next * p[r] * q[r];
        c[r] = phi[r] * q[r];
        m[r] = e[r] * k[r] + v[r] * sigma[r];
      }
      for (let i = 0; i < n; i++) {
        const r = g * n + i;
        ss[block + i * n + i] =
          alive[i] * sigma[r] * s[r] + e[r] * e[r] * k[r] + v[r] * e[r] * (sigma[r] - s[r]);
        let product = m[r];
        for (let t = i + 1; t < n; t++) {
          product *= c[g * n + t - 1];
          const value = product * e[g * n + t];
          ss[block + i * n + t] = value;
          ss[block + t * n + i] = value;
        }
        if (!whole) continue;
        sp[block + i * n + i] = h[r] * m[r];
        pp[block + i * n + i] =
          (seen[i] + passed[i]) * p[r] * q[r] + h[r] * h[r] * k[r] + v[r] * h[r] * (q[r] - p[r]);
        let bySurvived = m[r];
        let bySeen = h[r] * k[r] - v[r] * p[r];
        for (let t = i + 1; t < n; t++) {
          const later = g * n + t;
          bySurvived *= c[later - 1];
          bySeen *= c[later - 1];
          sp[block + i * n + t] = bySurvived * h[later];
          sp[block + t * n + i] = bySeen * e[later];
          pp[block + i * n + t] = bySeen * h[later];
          pp[block + t * n + i] = bySeen * h[later];
        }
      }
    }
  }

  function slopesOfTrace(
    weights: Float64Array,
    slopeSurvival: Float64Array,
    slopeRecapture: Float64Array,
  ): void {
    for (let g = 0; g < design.strata; g++) {
      const { alive, lastSeen } = data[g];
      const first = g * n;
      barM.fill(0);
      barE.fill(0);
      // Σ_{s<t} G_st m_s (c_s⋯c_{t−1}) e_t, by m and by e
      for (let i = 0; i < n; i++) {
        const from = m[first + i];
        let product = 1;
        let sum = 0;
        for (let t = i + 1; t < n; t++) {
          product *= c[first + t - 1];
          const share = weights[i * n + t] * product;
          sum += share * e[first + t];
          barE[t] += share * from;
        }
        barM[i] = sum;
      }
      // v and k come from earlier intervals, so their adjoints run backwards; χ from later ones, so its own run forwards
      barV[n] = 0;
      barK[n] = 0;
      for (let t = n - 1; t >= 0; t--) {
        const r = first + t;
        const half = 0.5 * weights[t * n + t];
        barC[t] = barV[t + 1] * v[r] + 2 * barK[t + 1] * c[r] * k[r];
        barV[t] = half * e[r] * (sigma[r] - s[r]) + barM[t] * sigma[r] + barV[t + 1] * c[r];
        barK[t] = half * e[r] * e[r] + barM[t] * e[r] + barK[t + 1] * c[r] * c[r];
        const own = chi[r + g];
        barChi[t] = lastSeen[t] > 0 ? (-lastSeen[t] / (own * own)) * (barV[t] + (2 * barK[t]) / own) : 0;
      }
      barChi[n] = 0;
      let across = 0; // Σ of the terms with s ≤ t < u: those that c_t is a factor of
      for (let t = 0; t < n; t++) {
        const r = first + t;
        const half = 0.5 * weights[t * n + t];
        const next = chi[r + g + 1];
        const a = 1 - q[r] * next;
        across += m[r] * barM[t] - e[r] * barE[t];
        // c_t near 0 makes all of them small, and what is left of the sum is rounding: a logit that runs away needs better
        const through = c[r] < SMALL ? termsThrough(weights, first, t) : across;
        const byE = barE[t] + half * (2 * e[r] * k[r] + v[r] * (sigma[r] - s[r])) + barM[t] * k[r];
        const bySigma = half * (alive[t] * s[r] + v[r] * e[r]) + barM[t] * v[r] + byE * phi[r] * a;
        const byS = half * (alive[t] * sigma[r] - v[r] * e[r]);
        const byPhi = byE * sigma[r] * a - barChi[t] * a;
        const byA = byE * phi[r] * sigma[r] - barChi[t] * phi[r];
        barChi[t + 1] -= byA * q[r];
        slopeSurvival[r] =
          byPhi * phi[r] * sigma[r] +
          (byS * s1[r] - bySigma * sigma[r]) * s[r] +
          (barC[t] * c[r] + through) * sigma[r];
        slopeRecapture[r] = (byA * next * q[r] - barC[t] * c[r] - through) * p[r];
      }
    }
  }

  /** Σ_{s≤t<u} G_su m_s (c_s⋯c_{u−1}) e_u, term by term. */
  function termsThrough(weights: Float64Array, first: number, t: number): number {
    let sum = 0;
    for (let i = 0; i <= t; i++) {
      let product = m[first + i];
      for (let u = i + 1; u < n; u++) {
        product *= c[first + u - 1];
        if (u > t) sum += weights[i * n + u] * product * e[first + u];
      }
    }
    return sum;
  }

  return {
    at,
    bySurvival,
    byRecapture,
    curvature,
    survivalSurvival: ss,
    survivalRecapture: sp,
    recaptureRecapture: pp,
    slopesOfTrace,
  };
}
