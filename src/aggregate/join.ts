/** The joined values of several stations, one per interval. */
export interface Joined {
  /** NaN where no station has a value, or `adrift` holds. */
  readonly values: Float64Array;
  /** Intervals in which some, not all, of the stations that count have a value. */
  readonly changing: readonly number[];
  /** Stations without a single complete window; they take no part. */
  readonly absent: readonly number[];
  /** Intervals that share no station, even through others, with most of the rest. */
  readonly adrift: readonly number[];
}

/** Sets of intervals linked by stations they share; the largest (earliest in a tie) is kept. */
function largestLinked(values: readonly Float64Array[], intervals: number): Uint8Array {
  const set = Int32Array.from({ length: intervals }, (_, t) => t);
  const root = (t: number): number => (set[t] === t ? t : root(set[t]));
  for (const row of values) {
    let first = -1;
    for (let t = 0; t < intervals; t++) {
      if (Number.isNaN(row[t])) continue;
      if (first < 0) first = t;
      const [a, b] = [root(first), root(t)];
      set[Math.max(a, b)] = Math.min(a, b);
    }
  }
  const size = new Int32Array(intervals);
  for (let t = 0; t < intervals; t++) if (values.some((row) => !Number.isNaN(row[t]))) size[root(t)]++;
  const best = size.indexOf(Math.max(0, ...size));
  return Uint8Array.from({ length: intervals }, (_, t) => (root(t) === best && size[best] > 0 ? 1 : 0));
}

/**
 * Base means a_s and interval effects b_t of v_st = a_s + b_t by least squares over the cells that have a value,
 * Σ_t b_t = 0: each station's base mean is thus taken free of which intervals it happened to be there for.
 * The stations' normal equations (Schur complement of the intervals) are solved by elimination; one station is
 * fixed at 0, since a constant can move between a and b, and the centring is done afterwards.
 */
function interceptsOf(values: readonly Float64Array[], kept: Uint8Array): Float64Array {
  const n = values.length;
  const a = Array.from({ length: n }, () => new Float64Array(n + 1));
  for (let t = 0; t < kept.length; t++) {
    if (kept[t] === 0) continue;
    const here = values.flatMap((row, s) => (Number.isNaN(row[t]) ? [] : [s]));
    const mean = here.reduce((sum, s) => sum + values[s][t], 0) / here.length;
    for (const s of here) {
      a[s][s] += 1;
      a[s][n] += values[s][t] - mean;
      for (const r of here) a[s][r] -= 1 / here.length;
    }
  }
  // Station 0 is fixed at 0: its row and column drop out. What is left is positive definite on a linked set.
  for (let k = 1; k < n; k++)
    for (let s = k + 1; s < n; s++) {
      const factor = a[s][k] / a[k][k];
      for (let j = k; j <= n; j++) a[s][j] -= factor * a[k][j];
    }
  const out = new Float64Array(n);
  for (let k = n - 1; k >= 1; k--) {
    let rest = a[k][n];
    for (let j = k + 1; j < n; j++) rest -= a[k][j] * out[j];
    out[k] = rest / a[k][k];
  }
  return out;
}

/**
 * `mean of windows`: values[s][t] of station s in interval t → one value per interval. Where every station has
 * every interval this is the plain mean. Where the set changes, a plain mean would step when a warm station drops
 * out; so each station's departures from its own base mean are averaged, and the mean of the base means is added
 * back. The base means come from the additive fit, so a station that was only there in warm years is not taken
 * for a warm station. Intervals that no chain of shared stations links to the others have no common base and are
 * missing (`adrift`). With weights every mean over stations is a weighted one: Σ w_s x_s / Σ w_s over those that are there.
 */
export function meanOfWindows(
  values: readonly Float64Array[],
  intervals: number,
  weights: readonly number[] = values.map(() => 1),
): Joined {
  const taking = values.flatMap((row, s) => (row.some((value) => !Number.isNaN(value)) ? [s] : []));
  const absent = values.flatMap((_, s) => (taking.includes(s) ? [] : [s]));
  const rows = taking.map((s) => values[s]);
  const counts = Int32Array.from(
    { length: intervals },
    (_, t) => rows.filter((row) => !Number.isNaN(row[t])).length,
  );
  const changing = Array.from(counts.keys()).filter((t) => counts[t] > 0 && counts[t] < rows.length);
  const out = new Float64Array(intervals).fill(Number.NaN);
  const own = taking.map((s) => weights[s]);
  const whole = own.reduce((sum, w) => sum + w, 0);
  const plain = (t: number) => rows.reduce((sum, row, s) => sum + own[s] * row[t], 0) / whole;
  const kept = largestLinked(rows, intervals);
  const adrift = Array.from(counts.keys()).filter((t) => counts[t] > 0 && kept[t] === 0);
  // Stations seen only in intervals that are adrift have no base mean beside the others.
  const some = rows.map((row) => row.some((value, t) => kept[t] === 1 && !Number.isNaN(value)));
  const based = rows.filter((_, s) => some[s]);
  const weight = own.filter((_, s) => some[s]);
  const base = changing.length === 0 ? new Float64Array(based.length) : interceptsOf(based, kept);
  const all = weight.reduce((sum, w) => sum + w, 0);
  const level = all === 0 ? 0 : base.reduce((sum, one, s) => sum + weight[s] * one, 0) / all;
  for (let t = 0; t < intervals; t++) {
    if (kept[t] === 0) continue;
    if (counts[t] === rows.length) out[t] = plain(t);
    else {
      let [departures, there] = [0, 0];
      for (let s = 0; s < based.length; s++) {
        if (Number.isNaN(based[s][t])) continue;
        departures += weight[s] * (based[s][t] - base[s]);
        there += weight[s];
      }
      out[t] = level + departures / there;
    }
  }
  return { values: out, changing, absent, adrift };
}
