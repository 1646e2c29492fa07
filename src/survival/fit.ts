import type { Matrix } from "../data/matrix.ts";
import { normalQuantile } from "../math/distributions.ts";
import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { StopReason } from "../solve/smooth.ts";
import type { Design } from "./design.ts";
import { STILL } from "./flat-directions.ts";
import { type InformationReport, readInformation } from "./information.ts";
import { cjsLikelihood } from "./likelihood.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** A probability with its 95 % interval on the logit scale; no standard error at a bound or where not separable. */
export interface RateEstimate {
  readonly stratum: string;
  /** Interval t for survival; for recapture the occasion that closes interval t. */
  readonly interval: number;
  readonly value: number;
  readonly se: number;
  readonly low: number;
  readonly high: number;
}

export interface Fit {
  readonly survivalWords: string;
  readonly recaptureWords: string;
  readonly names: readonly string[];
  readonly estimates: Float64Array;
  readonly se: Float64Array;
  readonly covariance: Matrix;
  readonly minus2LogL: number;
  /** Parameters the data determine (see `readInformation`). */
  readonly parameters: number;
  readonly condition: number;
  readonly atBound: readonly string[];
  readonly notSeparable: readonly (readonly string[])[];
  /** Apparent annual survival, G·n. */
  readonly survival: readonly RateEstimate[];
  readonly recapture: readonly RateEstimate[];
  readonly largestGradient: number;
  readonly stopped: StopReason;
}

/** Gradient at which a fit counts as converged: far below what moves any printed digit, far above rounding. */
export function gradientTolerance(data: readonly SufficientStatistics[]): number {
  return 1e-11 * Math.max(100, totalReleases(data));
}

/** R = Σ R_i over strata: the number of releases, the default sample size of the criteria. */
export function totalReleases(data: readonly SufficientStatistics[]): number {
  return data.reduce((sum, one) => sum + one.releases, 0);
}

/** Maximum likelihood by Newton's method on the exact curvature, started at survival and recapture of one half. */
export function fitModel(data: readonly SufficientStatistics[], design: Design, start?: Float64Array): Fit {
  const likelihood = cjsLikelihood(data, design);
  const d = likelihood.dimension;
  const solution = proximalNewton(likelihood, noPenalty, start ?? new Float64Array(d), {
    tolerance: gradientTolerance(data),
    iterations: 500,
  });
  const recapturePart = "known" in design.recapture ? undefined : design.recapture;
  const names = [...design.survival.names, ...(recapturePart?.names ?? [])];
  const information = new Float64Array(d * d);
  likelihood.evaluate(solution.x, new Float64Array(d));
  likelihood.curvature(
    Int32Array.from({ length: d }, (_, k) => k),
    information,
  );
  const rows = design.strata * design.intervals;
  const rates = {
    survival: inverseLogit(
      design.survival.columns,
      solution.x.subarray(0, design.survival.columns.length),
      rows,
    ),
    recapture:
      recapturePart === undefined
        ? new Float64Array(0)
        : inverseLogit(recapturePart.columns, solution.x.subarray(design.survival.columns.length), rows),
  };
  const report = readInformation(information, design, names, rates, totalReleases(data));
  const rateRows = (columns: readonly Float64Array[], from: number, values: Float64Array) =>
    Array.from(values, (value, r) => rateEstimate(value, columns, r, from, report, data, design.intervals));
  return {
    survivalWords: design.survival.words,
    recaptureWords: recapturePart?.words ?? "known",
    names,
    estimates: solution.x,
    se: Float64Array.from({ length: d }, (_, k) => Math.sqrt(report.covariance.data[k * d + k])),
    covariance: report.covariance,
    minus2LogL: 2 * solution.smooth,
    parameters: report.rank,
    condition: report.condition,
    atBound: report.atBound,
    notSeparable: report.notSeparable,
    survival: rateRows(design.survival.columns, 0, rates.survival),
    recapture:
      recapturePart === undefined
        ? []
        : rateRows(recapturePart.columns, design.survival.columns.length, rates.recapture),
    largestGradient: solution.violation,
    stopped: solution.stopped,
  };
}

/** 1/(1 + e^−Xβ), row by row. */
export function inverseLogit(
  columns: readonly Float64Array[],
  beta: ArrayLike<number>,
  rows: number,
): Float64Array {
  const out = new Float64Array(rows);
  for (let r = 0; r < rows; r++) {
    let eta = 0;
    for (let k = 0; k < columns.length; k++) eta += columns[k][r] * beta[k];
    out[r] = 1 / (1 + Math.exp(-eta));
  }
  return out;
}

/**
 * A rate may be estimable though its coefficients are not (equal columns, one rate of several at a bound).
 * Delta method on the logit: se(η)² = xᵀ V x, interval η ± z·se(η) carried back, se of the rate = rate(1 − rate)·se(η).
 */
function rateEstimate(
  value: number,
  columns: readonly Float64Array[],
  r: number,
  from: number,
  report: InformationReport,
  data: readonly SufficientStatistics[],
  intervals: number,
): RateEstimate {
  const moved = report.flat.some((vector) => {
    let shift = 0;
    for (let k = 0; k < columns.length; k++) shift += columns[k][r] * vector[from + k];
    return Math.abs(shift) > STILL;
  });
  const d = report.covariance.columns;
  let variance = moved ? Number.NaN : 0;
  for (let i = 0; i < columns.length; i++) {
    if (columns[i][r] === 0) continue;
    for (let j = 0; j < columns.length; j++) {
      if (columns[j][r] === 0) continue;
      variance += columns[i][r] * columns[j][r] * report.pseudoInverse[(from + i) * d + from + j];
    }
  }
  const eta = Math.log(value / (1 - value));
  const half = normalQuantile(0.975) * Math.sqrt(variance);
  return {
    stratum: data[Math.floor(r / intervals)].stratum,
    interval: r % intervals,
    value,
    se: value * (1 - value) * Math.sqrt(variance),
    low: 1 / (1 + Math.exp(-(eta - half))),
    high: 1 / (1 + Math.exp(-(eta + half))),
  };
}
