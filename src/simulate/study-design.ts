import { mean, sampleSd } from "../math/quantile.ts";
import { designWith, type ScreenProblem } from "../screen/problem.ts";
import type { Frame, NamedColumn, Part } from "../survival/design.ts";
import { type Fit, fitModel } from "../survival/fit.ts";
import type { SufficientStatistics } from "../survival/statistics.ts";

/** One stratum of the design, n intervals. */
export interface StratumDesign {
  readonly stratum: string;
  /** Animals newly marked and released at occasions 1 … n. */
  readonly marked: Float64Array;
  /** logit of apparent annual survival at mean covariates (with the estimated effects of forced ones), n. */
  readonly baseline: Float64Array;
  /** Recapture at the occasion that closes each interval, n. */
  readonly recapture: Float64Array;
  /** Place of the stratum of later intervals, where this one is that of the first interval after marking. */
  readonly becomes?: number;
}

/** What a study brings with it, whatever its captures came to: what replicates of it are drawn from. */
export interface StudyDesign {
  readonly frame: Frame;
  readonly recapture: Part | { readonly known: number };
  /** All candidates as they are, so with their real correlations. */
  readonly covariates: readonly NamedColumn[];
  readonly strata: readonly StratumDesign[];
}

/** Rates at or next to a bound are drawn from this far inside, so that an effect on the logit still tells. */
const INSIDE = 0.001;
export const inside = (rate: number) => Math.min(1 - INSIDE, Math.max(INSIDE, rate));

/**
 * The design of a study: its intervals, what was newly marked, its covariates, and survival and recapture as the model
 * with one survival per stratum, forced covariates and the chosen recapture part estimates them. Losses on capture
 * are not drawn: animals lost when they were first caught are not counted as marked, and animals lost later are
 * taken off the newly marked of that occasion.
 */
export function studyDesign(problem: ScreenProblem): StudyDesign {
  const { frame, recapture, covariates, data } = problem;
  const fit = fitModel(data, designWith(problem, []));
  return {
    frame,
    recapture,
    covariates,
    strata: data.map((one, g) => stratumDesign(one, g, problem, fit)),
  };
}

function stratumDesign(
  data: SufficientStatistics,
  g: number,
  { data: all, frame, recapture }: ScreenProblem,
  fit: Fit,
): StratumDesign {
  const n = frame.intervals;
  const rows = Array.from({ length: n }, (_, t) => g * n + t);
  return {
    stratum: data.stratum,
    // with time since marking nobody is marked into the stratum of later intervals
    marked: all.some((one) => one.becomes === g) ? new Float64Array(n) : newlyMarked(data, frame.yearsOf),
    ...(data.becomes === undefined ? {} : { becomes: data.becomes }),
    baseline: Float64Array.from(rows, (row) => {
      const s = inside(fit.survival[row].value);
      return Math.log(s / (1 - s));
    }),
    recapture: Float64Array.from(rows, (row) =>
      "known" in recapture ? recapture.known : fit.recapture[row].value,
    ),
  };
}

/**
 * Newly marked and released at each occasion, from the counts: those released less those seen there, which were marked
 * before. R_t − B_{t−1} = A_t − A_{t−1} + U_t in the notation of `SufficientStatistics`. Losses on recapture make it
 * smaller, but never negative. The stratum of the first interval after marking holds the newly marked alone: R_t = A_t + U_t,
 * with `yearsOf` in the first year of the interval.
 */
export function newlyMarked(
  { alive, lastSeen, becomes }: SufficientStatistics,
  yearsOf?: Int32Array,
): Float64Array {
  const begins = (t: number) => yearsOf === undefined || t === 0 || yearsOf[t] !== yearsOf[t - 1];
  if (becomes !== undefined) return alive.map((a, t) => (begins(t) ? a + lastSeen[t] : 0));
  return alive.map((a, t) => Math.max(0, a - (t === 0 ? 0 : alive[t - 1]) + lastSeen[t]));
}

/** (x − mean)/sd, sd with n − 1: effects are stated per sd whatever the columns' own scale. */
export function perSd(values: Float64Array): Float64Array {
  const [centre, sd] = [mean(values), sampleSd(values)];
  return values.map((value) => (value - centre) / sd);
}

/**
 * The same where a covariate has a value per row and survival differs in the first interval after marking: mean and sd are those of
 * the rows of later intervals, in which every covariate acts; one that acts in no first interval is 0, its mean, there.
 */
export function actingPerSd({ strata, frame }: StudyDesign, values: Float64Array): Float64Array {
  const first = (r: number) => strata[Math.floor(r / frame.intervals)].becomes !== undefined;
  if (values.length === frame.intervals || !strata.some((one) => one.becomes !== undefined))
    return perSd(values);
  const later = values.filter((_, r) => !first(r));
  const [centre, sd] = [mean(later), sampleSd(later)];
  const onLaterAlone = values.every((value, r) => !first(r) || value === 0);
  return values.map((value, r) => (onLaterAlone && first(r) ? 0 : (value - centre) / sd));
}
