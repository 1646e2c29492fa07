import { arraysOf, dot, weightedProducts } from "../math/products.ts";
import type { Smooth } from "../solve/smooth.ts";
import type { Design } from "./design.ts";
import { checkDesign } from "./design-check.ts";
import type { SufficientStatistics } from "./statistics.ts";

/**
 * −log L of the Cormack–Jolly–Seber model as a function of (survival coefficients, recapture coefficients), without
 * the multinomial constant (Lebreton et al. 1992; Burnham et al. 1987):
 *
 *     log L = Σ_t A_t log φ_t + Σ_t [B_t log p_t + C_t log q_t] + Σ_t U_t log χ_t,
 *     χ_t = (1 − φ_t) + φ_t q_t χ_{t+1},   χ after the last occasion = 1,   q = 1 − p,
 *     φ_t = s_t^Δt,   logit s = Xβ,   logit p = Zα,
 *
 * where p_t belongs to the occasion that closes interval t. One backward sweep gives χ, one forward sweep the
 * derivatives v_t = ∂log L/∂χ_t, so value and gradient cost O(T) whatever the number of animals. The curvature is
 * exact (observed information): the same sweeps differentiated along each coefficient's column.
 * A stratum whose animals go over to another one after an interval (`becomes`: time since marking) has that one's χ_{t+1}
 * in its recursion; where an interval ends at no occasion (`closed`: the years of a split interval) p is 0.
 * Throws what `checkDesign` throws.
 */
export function cjsLikelihood(data: readonly SufficientStatistics[], design: Design): Smooth {
  checkDesign(data, design);
  const n = design.intervals;
  const strata = design.strata;
  const rows = strata * n;
  const recapture = "known" in design.recapture ? undefined : design.recapture;
  const known = "known" in design.recapture ? design.recapture.known : 0;
  const survivalColumns = design.survival.columns;
  const recaptureColumns = recapture === undefined ? [] : recapture.columns;
  const b = survivalColumns.length;
  const dimension = b + recaptureColumns.length;
  // by row, so that the loops below have one index
  const [alive, seen, passed, lastSeen, lengths] = arraysOf(5, rows);
  /** 1 where the row's interval ends at no occasion. */
  const closed = new Uint8Array(rows);
  /** Of each row, the stratum whose χ follows: another one after an animal's first interval, not within its years. */
  const to = new Int32Array(rows);
  for (let g = 0; g < strata; g++) {
    alive.set(data[g].alive, g * n);
    seen.set(data[g].seen, g * n);
    passed.set(data[g].passed, g * n);
    lastSeen.set(data[g].lastSeen, g * n);
    lengths.set(design.lengths, g * n);
    if (design.closed !== undefined) closed.set(design.closed, g * n);
    for (let t = 0; t < n; t++) to[g * n + t] = closed[g * n + t] === 1 ? g : (data[g].becomes ?? g);
  }

  const [etas, zetas] = arraysOf(2, rows); // logit s, logit p
  const [s1, phi, die, p, q, v] = arraysOf(6, rows); // s1 = 1 − s, die = 1 − φ
  const chi = new Float64Array(rows + strata); // n + 1 a stratum
  const [bySurvival, byRecapture] = arraysOf(2, rows); // ∂log L/∂ logit s, ∂log L/∂ logit p

  /** φ and 1 − φ of all rows; Σ A log φ. */
  function survivalRates(): number {
    let logLikelihood = 0;
    for (let r = 0; r < rows; r++) {
      const eta = etas[r];
      // log s = −log(1 + e^−η) without overflow or cancellation on either side
      const small = Math.exp(-Math.abs(eta));
      const logS = eta >= 0 ? -Math.log1p(small) : eta - Math.log1p(small);
      const s = (eta >= 0 ? 1 : small) / (1 + small);
      const rest = (eta >= 0 ? small : 1) / (1 + small);
      s1[r] = rest;
      if (alive[r] > 0) logLikelihood += alive[r] * lengths[r] * logS;
      if (lengths[r] === 1) {
        phi[r] = s;
        die[r] = rest;
      } else {
        phi[r] = Math.exp(lengths[r] * logS);
        die[r] = -Math.expm1(lengths[r] * logS);
      }
    }
    return logLikelihood;
  }

  /** p and q of all rows; Σ B log p + C log q. */
  function recaptureRates(): number {
    let logLikelihood = 0;
    // a constant recapture has the same logit row after row
    let [last, logP, logQ, rate, rest] = [Number.NaN, Math.log(known), Math.log(1 - known), known, 1 - known];
    for (let r = 0; r < rows; r++) {
      if (closed[r] === 1) {
        p[r] = 0;
        q[r] = 1;
        continue;
      }
      const zeta = zetas[r];
      if (recapture !== undefined && zeta !== last) {
        last = zeta;
        const tiny = Math.exp(-Math.abs(zeta));
        const log1 = Math.log1p(tiny);
        rate = (zeta >= 0 ? 1 : tiny) / (1 + tiny);
        rest = (zeta >= 0 ? tiny : 1) / (1 + tiny);
        logP = zeta >= 0 ? -log1 : zeta - log1;
        logQ = zeta >= 0 ? -zeta - log1 : -log1;
      }
      p[r] = rate;
      q[r] = rest;
      if (seen[r] > 0) logLikelihood += seen[r] * logP;
      if (passed[r] > 0) logLikelihood += passed[r] * logQ;
    }
    return logLikelihood;
  }

  function evaluate(x: Float64Array, gradient: Float64Array): number {
    combine(survivalColumns, x, 0, etas);
    if (recapture !== undefined) combine(recaptureColumns, x, b, zetas);
    let logLikelihood = survivalRates() + recaptureRates();
    for (let g = 0; g < strata; g++) chi[g * (n + 1) + n] = 1;
    // backwards, since χ_t needs χ_{t+1} (of all strata: hence t outside); both terms are non-negative, so nothing cancels
    for (let t = n - 1; t >= 0; t--)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        const here = die[r] + phi[r] * q[r] * chi[to[r] * (n + 1) + t + 1];
        chi[r + g] = here;
        if (lastSeen[r] > 0) logLikelihood += lastSeen[r] * Math.log(here);
      }
    v.fill(0);
    for (let t = 0; t < n; t++)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        // what came from earlier intervals stands in v already
        if (lastSeen[r] > 0) v[r] += lastSeen[r] / chi[r + g];
        const reached = v[r] * phi[r];
        if (t + 1 < n) v[to[r] * n + t + 1] += reached * q[r];
        const next = chi[to[r] * (n + 1) + t + 1];
        const slope = lengths[r] * s1[r]; // d log φ / d logit s
        // 1 − qχ written as p + q(1 − χ) would be no better: q and χ are both well away from cancelling here
        bySurvival[r] = (alive[r] - reached * (1 - q[r] * next)) * slope;
        byRecapture[r] = seen[r] * q[r] - passed[r] * p[r] - reached * next * p[r] * q[r];
      }
    for (let k = 0; k < b; k++) gradient[k] = -dot(survivalColumns[k], bySurvival);
    for (let k = 0; k < recaptureColumns.length; k++)
      gradient[b + k] = -dot(recaptureColumns[k], byRecapture);
    return Number.isNaN(logLikelihood) ? Number.POSITIVE_INFINITY : -logLikelihood;
  }

  const [dSurvival, dRecapture, dV] = arraysOf(3, rows);
  const dChi = new Float64Array(rows + strata);
  // what the derivatives of all columns share, by row, with a = 1 − qχ₊ and σ = Δ(1 − s) = d log φ/d logit s:
  // e = φσa = −∂χ/∂ logit s, h = φχ₊pq = −∂χ/∂ logit p, c = φq = ∂χ/∂χ₊, bend = U/χ² = −∂v/∂χ of the own releases
  const [e, h, c, sigma, bend] = arraysOf(5, rows);
  // second derivatives in the row's own logits, v and χ₊ held, and vcσ, vφpq
  const [ownSurvival, ownRecapture, crossed, vcs, vpq] = arraysOf(5, rows);

  function prepare(): void {
    for (let g = 0; g < strata; g++)
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const next = chi[to[r] * (n + 1) + t + 1];
        const pq = p[r] * q[r];
        const slope = lengths[r] * s1[r];
        const s = 1 - s1[r];
        sigma[r] = slope;
        e[r] = phi[r] * slope * (1 - q[r] * next);
        h[r] = phi[r] * next * pq;
        c[r] = phi[r] * q[r];
        bend[r] = lastSeen[r] > 0 ? lastSeen[r] / chi[r + g] ** 2 : 0;
        // dσ = −σ s, dφ = φσ
        ownSurvival[r] = -alive[r] * slope * s - v[r] * e[r] * (slope - s);
        ownRecapture[r] = -(seen[r] + passed[r]) * pq - v[r] * h[r] * (1 - 2 * p[r]);
        crossed[r] = -v[r] * slope * h[r];
        vcs[r] = v[r] * c[r] * slope;
        vpq[r] = v[r] * phi[r] * pq;
      }
  }

  const products = weightedProducts(survivalColumns, rows);

  /**
   * Derivatives of `bySurvival` and `byRecapture` along one coefficient's column, the two sweeps differentiated: χ′ backwards,
   * v′ forwards. Recapture rows only if there are recapture columns to be multiplied with.
   */
  function along(k: number): void {
    const survives = k < b;
    const column = survives ? survivalColumns[k] : recaptureColumns[k - b];
    const down = survives ? e : h;
    const carried = survives ? vcs : vpq;
    const sign = survives ? 1 : -1;
    const ownFirst = survives ? ownSurvival : crossed;
    const ownSecond = survives ? crossed : ownRecapture;
    for (let t = n - 1; t >= 0; t--)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        // after the last interval dChi is 0, as it never is written
        dChi[r + g] = c[r] * dChi[to[r] * (n + 1) + t + 1] - down[r] * column[r];
      }
    dV.fill(0);
    for (let t = 0; t < n; t++)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        const x = column[r];
        const after = dChi[to[r] * (n + 1) + t + 1];
        const dv = dV[r] - bend[r] * dChi[r + g];
        if (t + 1 < n) dV[to[r] * n + t + 1] += dv * c[r] + sign * carried[r] * x;
        dSurvival[r] = vcs[r] * after - dv * e[r] + ownFirst[r] * x;
        if (recapture !== undefined) dRecapture[r] = ownSecond[r] * x - dv * h[r] - vpq[r] * after;
      }
  }

  function curvature(which: Int32Array, out: Float64Array): void {
    const m = which.length;
    prepare();
    // With everybody seen (p known to be 1) χ = 1 − φ has no successor in it: intervals are binomials apart, XᵀDX with D diagonal.
    if (recapture === undefined && known === 1 && design.closed === undefined) {
      for (let r = 0; r < rows; r++) dSurvival[r] = bend[r] * e[r] * e[r] - ownSurvival[r];
      products(which, dSurvival, out);
      return;
    }
    for (let i = 0; i < m; i++) {
      along(which[i]);
      for (let j = i; j < m; j++) {
        const k = which[j];
        const value = k < b ? -dot(survivalColumns[k], dSurvival) : -dot(recaptureColumns[k - b], dRecapture);
        out[i * m + j] = value;
        out[j * m + i] = value;
      }
    }
  }

  return { dimension, evaluate, curvature };
}

/** Σ_k x_{from+k} · column_k into `out`; coefficients of 0, the most on a path of many covariates, cost nothing. */
function combine(columns: readonly Float64Array[], x: Float64Array, from: number, out: Float64Array): void {
  out.fill(0);
  for (let k = 0; k < columns.length; k++) {
    const column = columns[k];
    const by = x[from + k];
    if (by !== 0) for (let r = 0; r < out.length; r++) out[r] += column[r] * by;
  }
}
