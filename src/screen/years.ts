import { fQuantile, fUpper } from "../math/distributions.ts";
import type { Refits } from "./refits.ts";

/** What the choice by years needs beside the fits. */
export interface YearsSetting {
  /** Number of intervals n. */
  readonly intervals: number;
  /** Number of candidate covariates K. */
  readonly covariates: number;
  /** −2 log L and rank with one survival per interval. */
  readonly interval: { readonly minus2LogL: number; readonly parameters: number };
  /** Rank of the model without covariates. */
  readonly constantParameters: number;
}

/** Correlation of the covariates at two positions over the intervals. */
export type Correlation = (a: number, b: number) => number;

export interface YearsChoice {
  /** Positions of the covariates that stand, ascending. */
  readonly chosen: readonly number[];
  /**
   * How much the chosen set improves on none, after its price:
   * n log[(D_∅ − D_t)/(D_S − D_t)] − Σ_{j≤|S|} c_j; 0 if nothing stands.
   */
  readonly gain: number;
  /** Sets that were weighed, after pruning, with their gain. */
  readonly weighed: readonly { readonly set: readonly number[]; readonly gain: number }[];
  /** What each term of a set had to pass. */
  readonly alpha: number;
  /** For chosen terms: covariates that could stand in their place at almost no cost and tell much the same story. */
  readonly rivals: readonly Rivals[];
  /** Terms that were let go because an unrelated covariate would have done as well. */
  readonly ambiguous: readonly number[];
}

export interface Rivals {
  readonly chosen: number;
  readonly others: readonly number[];
}

/** ⌊(n − 2)/3⌋: with more covariates than this n intervals cannot tell anything apart. */
export function largestSet(intervals: number): number {
  return Math.max(0, Math.floor((intervals - 2) / 3));
}

/** An exchange that costs less than this on the scale of n log(D − D_t) cannot be told from the choice. */
const EXCHANGE = 3;
/** Rivals this much correlated tell the same story; an exchange for a less related one leaves no story to tell. */
const RELATED = 0.5;

/**
 * The choice that counts years. The deviance that covariates leave between years, D_S − D_t, plays the part of a
 * residual sum of squares over intervals, so that a term's evidence is its analysis-of-deviance F on the intervals
 * that are left (Skalski 1996), and unexplained variation between years raises the bar for everything.
 *
 * 1. Candidates: the distinct active sets with |S| ≤ ⌊(n − 2)/3⌋ of the lasso path, and of the path with ridge weights up
 *    to the first larger one.
 * 2. Prune: drop the term with the largest p until every p < α = min(.045, .1/K), with
 *    F_k = ν [(D_{S∖k} − D_t)/(D_S − D_t) − 1], ν = r_t − r_S, p_k = P(F_{1,ν} > F_k).
 * 3. Choose the set with the least n log(D_S − D_t) + Σ_{j≤|S|} c_j, c_j = n log[1 + F_{α;1,ν_j}/ν_j], ν_j the degrees
 *    of freedom left with j terms. The empty set always stands among them.
 * 4. Rivals: where exchanging a chosen k for another j costs less than 3 on that scale, the data cannot tell the two
 *    apart. If |r| ≥ .5 they are named together ("k or j"); if some unrelated j would do as well, k is let go.
 */
export function chooseByYears(
  candidates: readonly (readonly number[])[],
  refit: Refits,
  setting: YearsSetting,
  correlation: Correlation,
): YearsChoice {
  const { intervals: n } = setting;
  const alpha = Math.min(0.045, 0.1 / setting.covariates);
  const dfWith = (terms: number) => setting.interval.parameters - setting.constantParameters - terms;
  // rounding can leave a set that fits every interval a hair above or below D_t
  const left = (set: readonly number[]) => Math.max(refit(set) - setting.interval.minus2LogL, 1e-9);

  const weighed = new Map<string, { set: readonly number[]; gain: number }>();
  const price = (terms: number) => {
    let sum = 0;
    for (let j = 1; j <= terms; j++) sum += n * Math.log1p(fQuantile(1 - alpha, 1, dfWith(j)) / dfWith(j));
    return sum;
  };
  for (const candidate of candidates) {
    if (candidate.length > largestSet(n) || dfWith(candidate.length) < 1) continue;
    const set = pruned(candidate, left, dfWith, alpha);
    const gain = set.length === 0 ? 0 : n * Math.log(left([]) / left(set)) - price(set.length);
    weighed.set(set.join(","), { set, gain });
  }
  const all = [...weighed.values()].sort((a, b) => b.gain - a.gain || a.set.length - b.set.length);
  const best = all.length > 0 && all[0].gain > 0 ? all[0] : { set: [], gain: 0 };
  const { rivals, ambiguous } = exchanges(
    best.set,
    setting.covariates,
    (set) => n * Math.log(left(set)),
    correlation,
  );
  const chosen = best.set.filter((k) => !ambiguous.includes(k));
  const kept =
    ambiguous.length === 0 || chosen.length === 0
      ? best.gain
      : n * Math.log(left([]) / left(chosen)) - price(chosen.length);
  const gain = chosen.length === 0 ? 0 : Math.max(0, kept);
  return {
    chosen,
    gain,
    weighed: all,
    alpha,
    rivals: rivals.filter((one) => chosen.includes(one.chosen)),
    ambiguous,
  };
}

/** For every term of the set, what could stand in its place. */
function exchanges(
  set: readonly number[],
  covariates: number,
  deviance: (set: readonly number[]) => number,
  correlation: Correlation,
): { readonly rivals: readonly Rivals[]; readonly ambiguous: readonly number[] } {
  const ambiguous: number[] = [];
  const rivals: Rivals[] = [];
  const now = deviance(set);
  for (const k of set) {
    const rest = set.filter((one) => one !== k);
    const close = Array.from({ length: covariates }, (_, j) => j).filter(
      (j) => !set.includes(j) && deviance([...rest, j]) - now < EXCHANGE,
    );
    if (close.some((j) => Math.abs(correlation(k, j)) < RELATED)) ambiguous.push(k);
    else if (close.length > 0) rivals.push({ chosen: k, others: close });
  }
  return { rivals, ambiguous };
}

function pruned(
  candidate: readonly number[],
  left: (set: readonly number[]) => number,
  dfWith: (terms: number) => number,
  alpha: number,
): readonly number[] {
  let set = [...candidate].sort((a, b) => a - b);
  while (set.length > 0) {
    const df = dfWith(set.length);
    const ps = set.map((k) => fUpper(df * (left(set.filter((other) => other !== k)) / left(set) - 1), 1, df));
    const worst = ps.reduce((most, p, i) => (p > ps[most] ? i : most), 0);
    if (ps[worst] < alpha) return set;
    set = set.filter((_, i) => i !== worst);
  }
  return set;
}
