import { fQuantile, fUpper } from "../math/distributions.ts";
import type { MemoryInflation } from "./memory.ts";
import type { Correlation, Rivals, YearsChoice } from "./years.ts";

/** What the choice by random intervals needs beside the evidence. */
export interface RandomYearsSetting {
  /** Number of intervals n. */
  readonly intervals: number;
  /** Number of candidate covariates K. */
  readonly covariates: number;
  /** Survival coefficients that every set shares: 1 for the common survival, and the forced covariates. */
  readonly spent: number;
  /** α before it is divided among covariates. */
  readonly alpha?: number;
  /** Terms whose exchange costs less than this in D are rivals. */
  readonly exchange?: number;
}

export interface RandomYearsChoice extends YearsChoice {
  /** Terms that were let go because covariate and residual both remember, so that n intervals are worth fewer. */
  readonly byMemory: readonly number[];
}

/** D(S): −2 log of the marginal likelihood of the set, σ ≥ 0 re-estimated. */
export type Evidence = (set: readonly number[]) => number;

const ALPHA = 0.045;
const EXCHANGE = 3;
const RELATED = 0.5;
/** A term that the quick evidence gives a p above twenty times α_K, or above this, is not worth a fit. */
const HOPELESS = 0.25;
/** An exchange that the quick evidence prices above this cannot cost less than 3 in D. */
const FAR = 10;

/**
 * The choice that counts years, by random interval effects. D(S) is −2 log of the Laplace marginal likelihood, so that
 * unexplained variation between years is in the model and raises the bar for everything. n intervals, |S| covariates:
 *
 * 1. Candidates: as given, |S| ≤ ⌊(n − 2)/3⌋.
 * 2. Evidence: ν = n − |S| − 1, F_k = ν [exp((D(S∖k) − D(S))/n) − 1], p_k = P(F_{1,ν} > F_k).
 * 3. Prune: drop the term with the largest p until every p < α_K = min(α, .1/K), α = .045.
 * 4. Choose the set with the least D(S) + Σ_{j≤|S|} c_j, c_j = n log[1 + F_{α_K;1,n−j−1}/(n − j − 1)]. The empty set always
 *    stands among them.
 * 5. Rivals: where exchanging a chosen k for an unselected j costs less than 3 in D: "k or j" where |r| ≥ .5; where some
 *    unrelated j would do as well, k is let go.
 *
 * 6. Quick evidence, where it is handed in (D from the Gaussian model of the interval logits), spares fits that cannot
 *    matter: before step 3 the term with the largest quick p is dropped until every p < min(.25, 20 α_K), and step 5 tries only
 *    exchanges of a quick cost below 10.
 * 7. Memory, where it is handed in: drop the term with the largest p until every p < α_K, p now that of F_k/c_k on
 *    n/c_k − |S| − 1 degrees of freedom (at least 2), c_k the inflation by autocorrelation. Without memory c = 1 and
 *    nothing is dropped that stood before.
 *
 * `spent` takes the place of the 1 in the degrees of freedom where covariates are forced.
 */
export function chooseByRandomIntervals(
  candidates: readonly (readonly number[])[],
  evidence: Evidence,
  setting: RandomYearsSetting,
  correlation: Correlation,
  memory?: MemoryInflation,
  quick?: Evidence,
): RandomYearsChoice {
  const { intervals: n } = setting;
  const alpha = Math.min(setting.alpha ?? ALPHA, 0.1 / setting.covariates);
  const dfWith = (terms: number) => n - terms - setting.spent;
  const deviance = remembered(evidence);
  const fast = quick && remembered(quick);
  const prices = [0];
  const price = (terms: number) => {
    for (let j = prices.length; j <= terms; j++)
      prices.push(prices[j - 1] + n * Math.log1p(fQuantile(1 - alpha, 1, dfWith(j)) / dfWith(j)));
    return prices[terms];
  };
  /** p of term k in the set, its evidence divided by c and the intervals counted as n/c. */
  const pOf = (set: readonly number[], k: number, c: number, by: Evidence = deviance) => {
    const without = by(set.filter((other) => other !== k));
    const f = dfWith(set.length) * Math.expm1((without - by(set)) / n);
    return fUpper(f / c, 1, c === 1 ? dfWith(set.length) : Math.max(2, dfWith(set.length) - n + n / c));
  };
  const gainOf = (set: readonly number[]) =>
    set.length === 0 ? 0 : deviance([]) - deviance(set) - price(set.length);

  const weighed = new Map<string, { readonly set: readonly number[]; readonly gain: number }>();
  for (const candidate of candidates) {
    if (candidate.length > Math.floor((n - 2) / 3) || dfWith(candidate.length) < 1) continue;
    const hopeful = fast
      ? pruned(candidate, (s, k) => pOf(s, k, 1, fast), Math.min(HOPELESS, 20 * alpha))
      : candidate;
    const set = pruned(hopeful, (s, k) => pOf(s, k, 1), alpha);
    weighed.set(set.join(","), { set, gain: gainOf(set) });
  }
  const all = [...weighed.values()].sort((a, b) => b.gain - a.gain || a.set.length - b.set.length);
  const best = all.length > 0 && all[0].gain > 0 ? all[0].set : [];
  const ambiguous: number[] = [];
  const rivals: Rivals[] = [];
  for (const k of best) {
    const rest = best.filter((one) => one !== k);
    const close = Array.from({ length: setting.covariates }, (_, j) => j).filter(
      (j) =>
        !best.includes(j) &&
        !(fast && fast([...rest, j]) - fast(best) > FAR) &&
        deviance([...rest, j]) - deviance(best) < (setting.exchange ?? EXCHANGE),
    );
    if (close.some((j) => Math.abs(correlation(k, j)) < RELATED)) ambiguous.push(k);
    else if (close.length > 0) rivals.push({ chosen: k, others: close });
  }
  const clear = best.filter((k) => !ambiguous.includes(k));
  const chosen =
    memory === undefined
      ? clear
      : pruned(
          clear,
          (set, k) =>
            pOf(
              set,
              k,
              memory(
                k,
                set.filter((other) => other !== k),
              ),
            ),
          alpha,
        );
  return {
    chosen,
    gain: Math.max(0, gainOf(chosen)),
    weighed: all,
    alpha,
    rivals: rivals.filter((one) => chosen.includes(one.chosen)),
    ambiguous,
    byMemory: clear.filter((k) => !chosen.includes(k)),
  };
}

/** Drops the term with the largest p until every p is below α. */
function pruned(
  candidate: readonly number[],
  pOf: (set: readonly number[], k: number) => number,
  alpha: number,
): readonly number[] {
  let set = [...candidate].sort((a, b) => a - b);
  while (set.length > 0) {
    const ps = set.map((k) => pOf(set, k));
    const worst = ps.reduce((most, p, i) => (p > ps[most] ? i : most), 0);
    if (ps[worst] < alpha) return set;
    set = set.filter((_, i) => i !== worst);
  }
  return set;
}

/** Each set is fitted once, in whatever order its members come. */
function remembered(evidence: Evidence): Evidence {
  const known = new Map<string | number, number>();
  return (set) => {
    const key = keyOf(set);
    const before = known.get(key);
    if (before !== undefined) return before;
    const value = evidence([...set].sort((a, b) => a - b));
    known.set(key, value);
    return value;
  };
}

/** The same for all orders of a set: one bit a member where the first 30 are enough, which is asked for some thousand times. */
function keyOf(set: readonly number[]): string | number {
  let bits = 0;
  for (const k of set) {
    if (k >= 30) return [...set].sort((a, b) => a - b).join(",");
    bits |= 1 << k;
  }
  return bits;
}
