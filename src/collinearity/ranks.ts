/** Ranks from 1, tied values sharing the mean of their ranks. */
export function averageRanks(values: ArrayLike<number>): {
  readonly ranks: Float64Array;
  readonly tied: boolean;
} {
  const n = values.length;
  const order = Array.from({ length: n }, (_, i) => i).sort((a, b) => values[a] - values[b]);
  const ranks = new Float64Array(n);
  let tied = false;
  for (let from = 0; from < n; ) {
    let to = from;
    while (to + 1 < n && values[order[to + 1]] === values[order[from]]) to++;
    tied ||= to > from;
    for (let i = from; i <= to; i++) ranks[order[i]] = (from + to) / 2 + 1;
    from = to + 1;
  }
  return { ranks, tied };
}

/** Up to this n all permutations are counted (a few milliseconds); beyond it the t distribution is close. */
export const exactSpearmanLimit = 10;

/**
 * counts[s] of the n! permutations with Σd² = s (Kendall 1948, *Rank Correlation Methods*, from memory), by
 * filling places 0 … n − 1 in turn over the set of ranks already used.
 */
export function spearmanCounts(n: number): Float64Array {
  const span = (n * (n * n - 1)) / 3 + 1;
  const sets = 2 ** n;
  const counts: (Float64Array | undefined)[] = new Array(sets);
  counts[0] = Float64Array.of(1, ...new Array(span - 1).fill(0));
  for (let set = 0; set < sets - 1; set++) {
    const here = counts[set] as Float64Array;
    let place = 0;
    for (let bits = set; bits > 0; bits >>= 1) place += bits & 1;
    for (let rank = 0; rank < n; rank++) {
      if (set & (1 << rank)) continue;
      const step = (place - rank) ** 2;
      const next = set | (1 << rank);
      counts[next] ??= new Float64Array(span);
      const to = counts[next];
      for (let s = 0; s + step < span; s++) to[s + step] += here[s];
    }
    counts[set] = undefined;
  }
  return counts[sets - 1] as Float64Array;
}

/** Two-sided exact p, 2·min(P(S ≤ s), P(S ≥ s)) and at most 1, for untied ranks. */
export function spearmanExact(u: Float64Array, v: Float64Array, counts: Float64Array): number {
  let s = 0;
  for (let i = 0; i < u.length; i++) s += (u[i] - v[i]) ** 2;
  let [low, high, all] = [0, 0, 0];
  counts.forEach((count, at) => {
    all += count;
    if (at <= s) low += count;
    if (at >= s) high += count;
  });
  return Math.min(1, (2 * Math.min(low, high)) / all);
}
