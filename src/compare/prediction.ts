import { mean, sampleSd } from "../math/quantile.ts";
import type { TwoStep } from "../survival/two-step.ts";
import type { CandidateKey } from "./candidates.ts";
import type { Fold, FoldPrediction } from "./fold.ts";
import { residualVariance } from "./residual-variance.ts";

/** One left-out interval: its logit by its own captures and what a candidate said of it. */
export interface PredictedInterval {
  readonly interval: number;
  readonly logit: number;
  /** Sampling variance of that logit. */
  readonly variance: number;
  readonly predicted: number;
  /** σ²/Δ by the candidate, from the other intervals. */
  readonly between: number;
  readonly terms: readonly string[];
}

/** How well one way of modelling survival foretells an interval that it has not seen. */
export interface CandidatePrediction {
  readonly key: CandidateKey;
  readonly rows: readonly PredictedInterval[];
  /** Log score of each row. */
  readonly scores: readonly number[];
  /**
   * 1 − Σ w e²/Σ w e₀² against the constant model, the same weights for all, w = 1/(v + σ₀²): the share of what the
   * constant model misses that this one foretells; below 0 where it foretells worse.
   */
  readonly share: number;
  /** Mean over intervals of the log score, log density of the logit at the prediction with variance v + σ². */
  readonly logScore: number;
  /** Sum over intervals of the log score above that of the constant model, and its standard error (√n times the sd). */
  readonly gain: number;
  readonly gainError: number;
}

export interface Prediction {
  /** Intervals that were scored: those whose survival the data determine. */
  readonly intervals: number;
  readonly unscored: readonly number[];
  readonly candidates: readonly CandidatePrediction[];
}

/** A direction of the logits that the data say nothing of must not take part in an interval's logit. */
const KNOWN = 1 - 1e-6;

/**
 * Scores of the predictions of left-out intervals (methods §10). The target is the logit of the interval's own free
 * survival with its sampling variance v_t (`two`, one survival per interval); the error of the prediction has variance
 * v_t + σ̂²/Δ_t, σ̂² the candidate's own from the other intervals of the fold. Candidates that could not be fitted in
 * every fold are left out.
 */
export function scorePredictions(folds: readonly Fold[], two: TwoStep, lengths: Float64Array): Prediction {
  const n = lengths.length;
  const variance = Float64Array.from({ length: n }, (_, t) => two.covariance.data[t * n + t]);
  const known = (t: number) =>
    two.rotation.reduce((sum, row) => sum + row[t] ** 2 / lengths[t], 0) >= KNOWN && variance[t] > 0;
  const scored = Array.from({ length: n }, (_, t) => t).filter(known);
  const keys = [...new Set(folds.flatMap((fold) => fold.predictions.map((one) => one.key)))].filter((key) =>
    folds.every((fold) => fold.predictions.some((one) => one.key === key)),
  );
  const rowsOf = (key: CandidateKey) =>
    scored.flatMap((t): PredictedInterval[] => {
      const said = folds.find((fold) => fold.interval === t)?.predictions.find((one) => one.key === key);
      if (said === undefined) return [];
      return [
        {
          interval: t,
          logit: two.logits[t],
          variance: variance[t],
          predicted: said.logits[t],
          between: betweenOf(said, t) / lengths[t],
          terms: said.terms,
        },
      ];
    });

  /** σ² from the intervals of the fold. */
  function betweenOf(said: FoldPrediction, t: number): number {
    const others = scored.filter((u) => u !== t);
    return residualVariance(
      others.map((u) => two.logits[u] - said.logits[u]),
      others.map((u) => variance[u]),
      others.map((u) => lengths[u]),
      others.length - said.spent,
    );
  }

  const constant = rowsOf("constant");
  const weights = constant.map((row) => 1 / (row.variance + row.between));
  const missed = (rows: readonly PredictedInterval[]) =>
    rows.reduce((sum, row, i) => sum + weights[i] * (row.logit - row.predicted) ** 2, 0);
  const scores = (rows: readonly PredictedInterval[]) => rows.map(logScore);
  const base = scores(constant);
  const candidates = keys.map((key): CandidatePrediction => {
    const rows = rowsOf(key);
    const own = scores(rows);
    const above = own.map((value, i) => value - base[i]);
    return {
      key,
      rows,
      scores: own,
      share: 1 - missed(rows) / missed(constant),
      logScore: mean(own),
      gain: above.reduce((sum, value) => sum + value, 0),
      gainError: Math.sqrt(above.length) * sampleSd(above),
    };
  });
  return {
    intervals: scored.length,
    unscored: Array.from({ length: n }, (_, t) => t).filter((t) => !scored.includes(t)),
    candidates,
  };
}

/** −½ [log 2π(v + σ²) + e²/(v + σ²)]. */
function logScore({ logit, predicted, variance, between }: PredictedInterval): number {
  const total = variance + between;
  return -0.5 * (Math.log(2 * Math.PI * total) + (logit - predicted) ** 2 / total);
}
