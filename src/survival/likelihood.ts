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
  /** Of each row, the stratum whose χ follows: another one after an animal's first interval, not within its years. */
  const to = new Int32Array(rows);
  for (let g = 0; g < strata; g++)
    for (let t = 0; t < n; t++) to[g * n + t] = design.closed?.[t] === 1 ? g : (data[g].becomes ?? g);

  const etas = new Float64Array(rows); // logit s
  const zetas = new Float64Array(rows); // logit p
  const s1 = new Float64Array(rows); // 1 − s
  const phi = new Float64Array(rows);
  const die = new Float64Array(rows); // 1 − φ
  const p = new Float64Array(rows);
  const q = new Float64Array(rows);
  const chi = new Float64Array(rows + strata); // n + 1 a stratum
  const v = new Float64Array(rows);
  const bySurvival = new Float64Array(rows); // ∂log L/∂ logit s
  const byRecapture = new Float64Array(rows); // ∂log L/∂ logit p

  function predictors(x: Float64Array): number {
    combine(survivalColumns, x, 0, etas);
    combine(recaptureColumns, x, b, zetas);
    let logLikelihood = 0;
    for (let g = 0; g < strata; g++) {
      const { alive, seen, passed } = data[g];
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const eta = etas[r];
        // log s = −log(1 + e^−η) without overflow or cancellation on either side
        const small = Math.exp(-Math.abs(eta));
        const logS = eta >= 0 ? -Math.log1p(small) : eta - Math.log1p(small);
        const logPhi = design.lengths[t] * logS;
        s1[r] = (eta >= 0 ? small : 1) / (1 + small);
        phi[r] = Math.exp(logPhi);
        die[r] = -Math.expm1(logPhi);
        if (alive[t] > 0) logLikelihood += alive[t] * logPhi;
        if (design.closed?.[t] === 1) {
          p[r] = 0;
          q[r] = 1;
          continue;
        }
        if (recapture === undefined) {
          p[r] = known;
          q[r] = 1 - known;
          if (seen[t] > 0) logLikelihood += seen[t] * Math.log(known);
          if (passed[t] > 0) logLikelihood += passed[t] * Math.log(1 - known);
          continue;
        }
        const zeta = zetas[r];
        const tiny = Math.exp(-Math.abs(zeta));
        const log1 = Math.log1p(tiny);
        p[r] = (zeta >= 0 ? 1 : tiny) / (1 + tiny);
        q[r] = (zeta >= 0 ? tiny : 1) / (1 + tiny);
        if (seen[t] > 0) logLikelihood += seen[t] * (zeta >= 0 ? -log1 : zeta - log1);
        if (passed[t] > 0) logLikelihood += passed[t] * (zeta >= 0 ? -zeta - log1 : -log1);
      }
    }
    return logLikelihood;
  }

  function evaluate(x: Float64Array, gradient: Float64Array): number {
    let logLikelihood = predictors(x);
    for (let g = 0; g < strata; g++) chi[g * (n + 1) + n] = 1;
    // backwards, since χ_t needs χ_{t+1} (of all strata: hence t outside); both terms are non-negative, so nothing cancels
    for (let t = n - 1; t >= 0; t--)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        const here = die[r] + phi[r] * q[r] * chi[to[r] * (n + 1) + t + 1];
        chi[g * (n + 1) + t] = here;
        if (data[g].lastSeen[t] > 0) logLikelihood += data[g].lastSeen[t] * Math.log(here);
      }
    v.fill(0);
    for (let t = 0; t < n; t++)
      for (let g = 0; g < strata; g++) {
        const { alive, seen, passed, lastSeen } = data[g];
        const r = g * n + t;
        // what came from earlier intervals stands in v already
        if (lastSeen[t] > 0) v[r] += lastSeen[t] / chi[g * (n + 1) + t];
        if (t + 1 < n) v[to[r] * n + t + 1] += v[r] * phi[r] * q[r];
        const next = chi[to[r] * (n + 1) + t + 1];
        const slope = design.lengths[t] * s1[r]; // d log φ / d logit s
        // 1 − qχ written as p + q(1 − χ) would be no better: q and χ are both well away from cancelling here
        bySurvival[r] = alive[t] * slope - v[r] * phi[r] * slope * (1 - q[r] * next);
        byRecapture[r] = seen[t] * q[r] - passed[t] * p[r] - v[r] * phi[r] * next * p[r] * q[r];
      }
    for (let k = 0; k < b; k++) gradient[k] = -dot(survivalColumns[k], bySurvival);
    for (let k = 0; k < recaptureColumns.length; k++)
      gradient[b + k] = -dot(recaptureColumns[k], byRecapture);
    return Number.isNaN(logLikelihood) ? Number.POSITIVE_INFINITY : -logLikelihood;
  }

  const dSurvival = new Float64Array(rows);
  const dRecapture = new Float64Array(rows);
  const dChi = new Float64Array(rows + strata);
  const dV = new Float64Array(rows);
  // what the derivatives of all columns share, by row, with a = 1 − qχ₊ and σ = Δ(1 − s) = d log φ/d logit s:
  const e = new Float64Array(rows); // φσa: −∂χ/∂ logit s
  const h = new Float64Array(rows); // φχ₊pq: −∂χ/∂ logit p
  const c = new Float64Array(rows); // φq: ∂χ/∂χ₊
  const sigma = new Float64Array(rows);
  const bend = new Float64Array(rows); // U/χ²: −∂v/∂χ of the own releases
  const ownSurvival = new Float64Array(rows); // second derivative in the row's own logit s, v and χ₊ held
  const ownRecapture = new Float64Array(rows);
  const vpq = new Float64Array(rows); // vφpq

  function prepare(): void {
    for (let g = 0; g < strata; g++) {
      const { alive, seen, passed, lastSeen } = data[g];
      for (let t = 0; t < n; t++) {
        const r = g * n + t;
        const next = chi[to[r] * (n + 1) + t + 1];
        const pq = p[r] * q[r];
        const slope = design.lengths[t] * s1[r];
        const s = 1 - s1[r];
        sigma[r] = slope;
        e[r] = phi[r] * slope * (1 - q[r] * next);
        h[r] = phi[r] * next * pq;
        c[r] = phi[r] * q[r];
        bend[r] = lastSeen[t] > 0 ? lastSeen[t] / chi[g * (n + 1) + t] ** 2 : 0;
        // dσ = −σ s, dφ = φσ
        ownSurvival[r] = -alive[t] * slope * s - v[r] * e[r] * (slope - s);
        ownRecapture[r] = -(seen[t] + passed[t]) * pq - v[r] * h[r] * (1 - 2 * p[r]);
        vpq[r] = v[r] * phi[r] * pq;
      }
    }
  }

  /**
   * Derivatives of `bySurvival` and `byRecapture` along one coefficient's column, the two sweeps differentiated: χ′ backwards,
   * v′ forwards. Recapture rows only if there are recapture columns to be multiplied with.
   */
  function along(k: number): void {
    const survives = k < b;
    const column = survives ? survivalColumns[k] : recaptureColumns[k - b];
    const down = survives ? e : h;
    for (let t = n - 1; t >= 0; t--)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        // after the last interval dChi is 0, as it never is written
        dChi[g * (n + 1) + t] = c[r] * dChi[to[r] * (n + 1) + t + 1] - down[r] * column[r];
      }
    dV.fill(0);
    for (let t = 0; t < n; t++)
      for (let g = 0; g < strata; g++) {
        const r = g * n + t;
        const x = column[r];
        const after = dChi[to[r] * (n + 1) + t + 1];
        const dv = dV[r] - bend[r] * dChi[g * (n + 1) + t];
        const vc = v[r] * c[r];
        if (t + 1 < n) dV[to[r] * n + t + 1] += dv * c[r] + (survives ? vc * sigma[r] : -vpq[r]) * x;
        dSurvival[r] =
          sigma[r] * vc * after - dv * e[r] + (survives ? ownSurvival[r] : -v[r] * sigma[r] * h[r]) * x;
        if (recapture === undefined) continue;
        dRecapture[r] =
          (survives ? -v[r] * sigma[r] * h[r] : ownRecapture[r]) * x - dv * h[r] - vpq[r] * after;
      }
  }

  /** With everybody seen (p known to be 1) χ = 1 − φ has no successor in it: intervals are binomials apart, D diagonal in XᵀDX. */
  function alongBinomial(k: number): void {
    const column = survivalColumns[k];
    for (let r = 0; r < rows; r++) dSurvival[r] = (ownSurvival[r] - bend[r] * e[r] * e[r]) * column[r];
  }

  function curvature(which: Int32Array, out: Float64Array): void {
    const m = which.length;
    prepare();
    const binomial = recapture === undefined && known === 1 && design.closed === undefined;
    for (let i = 0; i < m; i++) {
      if (binomial) alongBinomial(which[i]);
      else along(which[i]);
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

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}
