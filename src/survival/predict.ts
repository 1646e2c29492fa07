import { normalQuantile } from "../math/distributions.ts";
import { covariateSurvival, type Frame, fixedSurvivalColumns, type NamedColumn } from "./design.ts";
import type { Fit } from "./fit.ts";

/** Survival at one value of one covariate, all others at their mean. */
export interface PredictedPoint {
  readonly stratum: string;
  /** Value of the covariate as it stands in the matrix (standardised). */
  readonly value: number;
  readonly survival: number;
  /** 95 % on the logit scale, widened by √ĉ between animals; NaN where coefficients have no standard error. */
  readonly low: number;
  readonly high: number;
  /** False beyond the values that were observed: nothing in the data speaks of survival there. */
  readonly observed: boolean;
}

export interface PredictedCurve {
  readonly name: string;
  readonly points: readonly PredictedPoint[];
}

/** Points over the observed range, and beyond it on either side by this share of the range. */
const POINTS = 21;
const BEYOND = [0.1, 0.2];

/**
 * Predicted apparent annual survival over the observed range of each covariate of a fit of
 * `covariateSurvival(frame, covariates)`, the other covariates at 0, their mean: se(η)² = xᵀVx by the delta method. The
 * few points beyond the range are marked as such.
 */
export function predictedSurvival(
  frame: Frame,
  covariates: readonly NamedColumn[],
  fit: Fit,
  inflation = 1,
): readonly PredictedCurve[] {
  const n = frame.intervals;
  const columns = covariateSurvival(frame, covariates).columns;
  const first = fixedSurvivalColumns(frame) - frame.forced.length;
  const d = fit.covariance.columns;
  const z = normalQuantile(0.975) * Math.sqrt(Math.max(1, inflation));
  return [...frame.forced, ...covariates].map(({ name, values }, i): PredictedCurve => {
    const [least, most] = [Math.min(...values), Math.max(...values)];
    const range = most - least;
    const inside = Array.from({ length: POINTS }, (_, j) => least + (range * j) / (POINTS - 1));
    const grid = [
      ...BEYOND.map((share) => least - share * range).reverse(),
      ...inside,
      ...BEYOND.map((share) => most + share * range),
    ];
    const points = frame.strata.flatMap((stratum, g) => {
      const own = columns[first + i].subarray(g * n, (g + 1) * n);
      // a covariate that does not act in this stratum (the first interval after marking) predicts nothing there
      if (own.every((value) => value === 0)) return [];
      return grid.map((value): PredictedPoint => {
        const x = columns.map((column, k) => (k < first ? column[g * n] : k === first + i ? value : 0));
        let [eta, variance] = [0, 0];
        for (let a = 0; a < x.length; a++) {
          if (x[a] === 0) continue;
          eta += x[a] * fit.estimates[a];
          for (let b = 0; b < x.length; b++)
            if (x[b] !== 0) variance += x[a] * x[b] * fit.covariance.data[a * d + b];
        }
        const half = z * Math.sqrt(variance);
        const logistic = (at: number) => 1 / (1 + Math.exp(-at));
        return {
          stratum,
          value,
          survival: logistic(eta),
          low: logistic(eta - half),
          high: logistic(eta + half),
          observed: value >= least && value <= most,
        };
      });
    });
    return { name, points };
  });
}
