import { normalQuantile } from "../math/distributions.ts";

/** How a chosen set stands to the truth; each choice is exactly one of these. */
export const OUTCOMES = [
  "exactly the truth",
  "the truth with others",
  "part of the truth",
  "only wrong ones",
  "nothing",
] as const;
export type Outcome = (typeof OUTCOMES)[number];

/** What a rule chose in one replicate; `rivals` are named beside it as equally good. */
export interface Choice {
  readonly chosen: readonly number[];
  readonly rivals: readonly number[];
}

/** A share of replicates with its Monte Carlo standard error and 95 % interval. */
export interface Share {
  readonly share: number;
  /** √(share (1 − share)/R). */
  readonly se: number;
  /** Interval of Wilson (1927, JASA 22:209), which does not shrink to nothing at a share of 0 or 1. */
  readonly low: number;
  readonly high: number;
}

export interface Tally {
  readonly replicates: number;
  readonly outcomes: Readonly<Record<Outcome, Share>>;
  /** All named covariates are among those chosen; at effect 0 a false find. */
  readonly found: Share;
  /** As `found`, where a covariate named as a rival of a chosen one counts too. */
  readonly foundOrRival: Share;
  /** Something is chosen that is not related to the truth: |r| < .5 with every true covariate. */
  readonly unrelated: Share;
}

/**
 * How a choice stands to the covariates that truly act. With no true covariate, to choose nothing is `nothing`, which
 * is then right, and to choose anything is `only wrong ones`.
 */
export function outcomeOf(chosen: readonly number[], truth: readonly number[]): Outcome {
  if (chosen.length === 0) return "nothing";
  const right = truth.filter((k) => chosen.includes(k)).length;
  if (right === 0) return "only wrong ones";
  if (right < truth.length) return "part of the truth";
  return chosen.length === right ? "exactly the truth" : "the truth with others";
}

/** A covariate is related to the truth from this correlation on. */
export const RELATED = 0.5;

/**
 * Counts what a rule chose over replicates. `named` are the covariates asked about, `acting` says whether they act
 * (whether the effect is not 0), `correlation` the one of two covariates over the intervals.
 */
export function tally(
  choices: readonly Choice[],
  named: readonly number[],
  acting: boolean,
  correlation: (a: number, b: number) => number,
): Tally {
  const truth = acting ? named : [];
  const count = (is: (one: Choice) => boolean) => shareOf(choices.filter(is).length, choices.length);
  const isOutcome = (outcome: Outcome) => count((one) => outcomeOf(one.chosen, truth) === outcome);
  const unrelated = (k: number) => truth.every((one) => one !== k && Math.abs(correlation(one, k)) < RELATED);
  return {
    replicates: choices.length,
    outcomes: {
      "exactly the truth": isOutcome("exactly the truth"),
      "the truth with others": isOutcome("the truth with others"),
      "part of the truth": isOutcome("part of the truth"),
      "only wrong ones": isOutcome("only wrong ones"),
      nothing: isOutcome("nothing"),
    },
    found: count(({ chosen }) => named.every((k) => chosen.includes(k))),
    foundOrRival: count(({ chosen, rivals }) => named.every((k) => chosen.includes(k) || rivals.includes(k))),
    unrelated: count(({ chosen }) => chosen.some(unrelated)),
  };
}

/** `count` of `n` replicates as a share; NaN where there are none. */
export function shareOf(count: number, n: number): Share {
  const share = count / n;
  const z = normalQuantile(0.975);
  const middle = (share + (z * z) / (2 * n)) / (1 + (z * z) / n);
  const half = (z / (1 + (z * z) / n)) * Math.sqrt((share * (1 - share)) / n + (z * z) / (4 * n * n));
  return {
    share,
    se: Math.sqrt((share * (1 - share)) / n),
    // rounding must not push an interval past the share it belongs to
    low: Math.max(0, Math.min(share, middle - half)),
    high: Math.min(1, Math.max(share, middle + half)),
  };
}
