import type { Counts } from "../study/counts.ts";
import { type SufficientStatistics, sufficientStatistics } from "./statistics.ts";

/**
 * Time since marking inside one stratum: the counts of all releases less those of the newly marked, which spend their
 * first interval in a row of their own. With m the counts of the newly marked released at i,
 *
 *     A^first_i = Σ_j m_ij,  B^first_i = m_{i,i+1},  C^first_i = Σ_{j>i+1} m_ij,  U^first_i = R^first_i − Σ_j m_ij,
 *
 * and everything else counts as later, so that χ^first_i = 1 − φ^first_i [1 − (1 − p_{i+1}) χ^later_{i+1}] (`becomes`).
 * `place` is where the later part stands among the data.
 */
export function sinceMarking(
  all: Counts,
  newlyMarked: Counts,
  place: number,
): { readonly first: SufficientStatistics; readonly later: SufficientStatistics } {
  const whole = sufficientStatistics(all);
  const n = all.occasions - 1;
  const [alive, seen, passed] = [new Float64Array(n), new Float64Array(n), new Float64Array(n)];
  const lastSeen = Float64Array.from(newlyMarked.released);
  for (let i = 0; i < n; i++)
    for (let j = i; j < n; j++) {
      const m = newlyMarked.seen.data[i * n + j];
      alive[i] += m;
      if (j === i) seen[i] += m;
      else passed[i] += m;
      lastSeen[i] -= m;
    }
  const releases = newlyMarked.released.reduce((a, b) => a + b, 0);
  const less = (a: Float64Array, b: Float64Array) => a.map((value, t) => value - b[t]);
  return {
    first: { stratum: all.stratum, alive, seen, passed, lastSeen, releases, becomes: place },
    later: {
      stratum: all.stratum,
      alive: less(whole.alive, alive),
      seen: less(whole.seen, seen),
      passed: less(whole.passed, passed),
      lastSeen: less(whole.lastSeen, lastSeen),
      releases: whole.releases - releases,
    },
  };
}
