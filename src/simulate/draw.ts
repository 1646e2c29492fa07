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
}

/**
 * Draws the fate of every animal and returns the sufficient statistics of the captures. An animal marked at occasion i
 * survives each interval with φ_t and, alive at the occasion that closes it, is seen there with p_t; one that is
 * seen is released again.
 */
export function drawCaptures(truth: Truth, random: Random): SufficientStatistics {
  const n = truth.survival.length;
  const [alive, seen, passed, lastSeen] = [0, 1, 2, 3].map(() => new Float64Array(n));
  let releases = 0;
  for (let i = 0; i < n; i++)
    for (let animal = 0; animal < truth.marked[i]; animal++) {
      let released = i;
      releases++;
      lastSeen[i]++;
      for (let t = i; t < n && random.uniform() < truth.survival[t]; t++) {
        if (random.uniform() >= truth.recapture[t]) continue;
        // now known to have lived from its last release to the end of interval t
        for (let u = released; u <= t; u++) alive[u]++;
        for (let u = released; u < t; u++) passed[u]++;
        seen[t]++;
        lastSeen[released]--;
        released = t + 1;
        if (released === n) break;
        lastSeen[released]++;
        releases++;
      }
    }
  return { stratum: truth.stratum, alive, seen, passed, lastSeen, releases };
}
