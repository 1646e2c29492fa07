import type { Random } from "../math/random.ts";
import type { SufficientStatistics } from "../survival/statistics.ts";

/** What captures are drawn from: one stratum of n intervals. */
export interface Truth {
  readonly stratum: string;
  /** Animals newly marked at occasions 1 … n, n. */
  readonly marked: ArrayLike<number>;
  /** Survival over each interval, n. */
  readonly survival: Float64Array;
  /** Recapture at the occasion that closes each interval, n. */
  readonly recapture: Float64Array;
  /** Place of the stratum that animals belong to once the interval they were marked in has passed; their own if not said. */
  readonly becomes?: number;
}

/**
 * Draws the fate of every animal and returns the sufficient statistics of the captures, stratum by stratum. An animal marked at
 * occasion i survives each interval with φ_t and, alive at the occasion that closes it, is seen there with p_t; one that
 * is seen is released again. Where a year is `closed` (1) it ends at no occasion: nobody is seen or passed over there.
 */
export function drawStrata(
  truths: readonly Truth[],
  random: Random,
  closed?: Uint8Array,
): SufficientStatistics[] {
  const drawn = truths.map(({ stratum, survival, becomes }) => {
    const [alive, seen, passed, lastSeen] = [0, 1, 2, 3].map(() => new Float64Array(survival.length));
    return {
      stratum,
      alive,
      seen,
      passed,
      lastSeen,
      releases: 0,
      ...(becomes === undefined ? {} : { becomes }),
    };
  });
  truths.forEach(({ marked, survival: { length: n }, becomes }, own) => {
    for (let i = 0; i < n; i++) {
      let first = i; // the last year of the interval that begins here
      while (closed?.[first] === 1) first++;
      const place = (t: number) => (t > first && becomes !== undefined ? becomes : own);
      for (let animal = 0; animal < marked[i]; animal++) {
        let released = i;
        drawn[own].releases++;
        drawn[own].lastSeen[i]++;
        for (let t = i; t < n && random.uniform() < truths[place(t)].survival[t]; t++) {
          if (closed?.[t] === 1 || random.uniform() >= truths[place(t)].recapture[t]) continue;
          // now known to have lived from its last release to the end of interval t
          for (let u = released; u <= t; u++) drawn[place(u)].alive[u]++;
          for (let u = released; u < t; u++) if (closed?.[u] !== 1) drawn[place(u)].passed[u]++;
          drawn[place(t)].seen[t]++;
          drawn[place(released)].lastSeen[released]--;
          released = t + 1;
          if (released === n) break;
          drawn[place(released)].lastSeen[released]++;
          drawn[place(released)].releases++;
        }
      }
    }
  });
  return drawn;
}

/** The same for one stratum without closed years. */
export function drawCaptures(truth: Omit<Truth, "becomes">, random: Random): SufficientStatistics {
  return drawStrata([truth], random)[0];
}
