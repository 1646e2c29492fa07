import type { Counts } from "../study/counts.ts";

/**
 * The sufficient statistics of one stratum's release–recapture counts (methods: Burnham et al. 1987, chapter 2). With
 * n = T − 1 intervals, arrays have length n and index t stands for
 * - `alive[t]`   A: animals known to be alive over interval t (released at or before t, next seen after t);
 * - `seen[t]`    B: seen at occasion t + 1, counted with their last release;
 * - `passed[t]`  C: known alive at occasion t + 1 but not seen there;
 * - `lastSeen[t]` U: released at occasion t and never seen again.
 */
export interface SufficientStatistics {
  readonly stratum: string;
  readonly alive: Float64Array;
  readonly seen: Float64Array;
  readonly passed: Float64Array;
  readonly lastSeen: Float64Array;
  readonly releases: number;
  /**
   * Place of the stratum that animals belong to once an interval has passed (time since marking): their χ_{t+1} is
   * that stratum's. Their own if not said.
   */
  readonly becomes?: number;
}

export function sufficientStatistics(counts: Counts): SufficientStatistics {
  const n = counts.occasions - 1;
  const [alive, seen, passed] = [new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  const lastSeen = Float64Array.from(counts.released);
  let releases = 0;
  for (let i = 0; i < n; i++) {
    releases += counts.released[i];
    for (let j = i; j < n; j++) {
      // released at occasion i, next seen at occasion j + 1
      const m = counts.seen.data[i * n + j];
      if (m === 0) continue;
      for (let t = i; t <= j; t++) alive[t] += m;
      for (let t = i; t < j; t++) passed[t] += m;
      seen[j] += m;
      lastSeen[i] -= m;
    }
  }
  return { stratum: counts.stratum, alive, seen, passed, lastSeen, releases };
}
