import { column, fromColumns, type Matrix, zeros } from "../data/matrix.ts";
import { tTwoSided } from "../math/distributions.ts";
import { EXACT } from "./decomposition.ts";
import { averageRanks, exactSpearmanLimit, spearmanCounts, spearmanExact } from "./ranks.ts";
import { leastSquares } from "./regression.ts";
import type { CorrelationTable } from "./result.ts";

type Method = CorrelationTable["method"];

/** Pearson's r by two passes, within [−1, 1]; NaN for fewer than 2 values or a constant. */
export function pearson(x: ArrayLike<number>, y: ArrayLike<number>): number {
  const n = x.length;
  const [u, v] = [centred(x), centred(y)];
  if (n < 2 || u === undefined || v === undefined) return Number.NaN;
  let [xx, yy, xy] = [0, 0, 0];
  for (let i = 0; i < n; i++) {
    xx += u[i] * u[i];
    yy += v[i] * v[i];
    xy += u[i] * v[i];
  }
  return Math.max(-1, Math.min(1, xy / Math.sqrt(xx * yy)));
}

/** Two-sided p of r = 0: t = r·√(df/(1 − r²)) on df = n − 2 − (columns given). NaN without degrees of freedom. */
export function correlationP(r: number, df: number): number {
  if (df < 1) return Number.NaN;
  return tTwoSided(r * Math.sqrt(df / ((1 - r) * (1 + r))), df);
}

/**
 * Correlation of every pair of columns over the rows where both are present. Spearman's is Pearson's of the average
 * ranks among those rows; its p is exact where no ranks are tied and n ≤ 10, else by the t distribution as for
 * Pearson. Holm's (1979) adjustment runs over all pairs that have a p.
 */
export function correlationTable(matrix: Matrix, names: readonly string[], method: Method): CorrelationTable {
  const exact = new Map<number, Float64Array>();
  const columns = names.map((_, j) => column(matrix, j));
  // Columns without missing cells have the same ranks in every pair of them: take those once.
  const whole = columns.map((one) => (one.some(isMissing) ? undefined : averageRanks(one)));
  return table(names, method, (a, b) => {
    const [x, y] = present([columns[a], columns[b]]);
    if (method === "Pearson") return withT(pearson(x, y), x.length, 0);
    const both = whole[a] !== undefined && whole[b] !== undefined;
    const u = (both ? whole[a] : undefined) ?? averageRanks(x);
    const v = (both ? whole[b] : undefined) ?? averageRanks(y);
    const r = pearson(u.ranks, v.ranks);
    const n = x.length;
    if (u.tied || v.tied || n < 3 || n > exactSpearmanLimit) return withT(r, n, 0);
    const counts = exact.get(n) ?? spearmanCounts(n);
    exact.set(n, counts);
    return { r, n, p: spearmanExact(u.ranks, v.ranks, counts) };
  });
}

/**
 * Partial correlation of every pair given `given` (n values, e.g. the year): the correlation of what is left of both
 * columns (their ranks for Spearman) after a regression on it, p on n − 3. By the Frisch–Waugh theorem this is also
 * the correlation of the linearly detrended columns.
 */
export function partialTable(
  matrix: Matrix,
  names: readonly string[],
  given: ArrayLike<number>,
  method: Method,
): CorrelationTable {
  const columns = names.map((_, j) => column(matrix, j));
  const whole = matrix.data.every(Number.isFinite);
  // Without missing cells every pair leaves the same residuals: take them once per column.
  const left = whole ? columns.map((one) => residuals(one, [given], method)) : undefined;
  const out = table(names, method, (a, b) => {
    if (left !== undefined) return withT(pearson(left[a], left[b]), matrix.rows, 1);
    const [x, y, z] = present([columns[a], columns[b], Float64Array.from(given)]);
    return withT(partialCorrelation(x, y, [z], method), x.length, 1);
  });
  return { ...out, given: "year" };
}

/** Correlation of x and y given other columns, none with missing values. */
export function partialCorrelation(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  given: readonly ArrayLike<number>[],
  method: Method,
): number {
  return pearson(residuals(x, given, method), residuals(y, given, method));
}

function residuals(x: ArrayLike<number>, given: readonly ArrayLike<number>[], method: Method): Float64Array {
  const seen = (values: ArrayLike<number>) => (method === "Spearman" ? averageRanks(values).ranks : values);
  const kept = seen(x);
  if (x.length < 2) return Float64Array.from(kept);
  const { residuals: left, rSquared } = leastSquares(fromColumns(given.map(seen), x.length), kept);
  // What a regression leaves of a pure trend is rounding: no variation, so no correlation.
  return rSquared > 1 - EXACT * EXACT ? new Float64Array(x.length) : left;
}

/** The change from each row to the next, (n − 1) × K; the other way to take a shared trend out. */
export function differences(matrix: Matrix): Matrix {
  const out = zeros(Math.max(0, matrix.rows - 1), matrix.columns);
  for (let i = 0; i < out.data.length; i++) out.data[i] = matrix.data[i + matrix.columns] - matrix.data[i];
  return out;
}

/** Holm's step-down adjustment (Holm 1979, Scand. J. Stat. 6:65–70); NaN stays NaN and is not counted. */
export function holm(p: readonly number[]): number[] {
  const order = p.map((_, i) => i).filter((i) => !Number.isNaN(p[i]));
  order.sort((a, b) => p[a] - p[b] || a - b);
  const out = p.map(() => Number.NaN);
  let running = 0;
  order.forEach((i, rank) => {
    running = Math.max(running, Math.min(1, p[i] * (order.length - rank)));
    out[i] = running;
  });
  return out;
}

interface PairResult {
  readonly r: number;
  readonly n: number;
  readonly p: number;
}

function withT(r: number, n: number, given: number): PairResult {
  return { r, n, p: Number.isNaN(r) ? Number.NaN : correlationP(r, n - 2 - given) };
}

function table(
  names: readonly string[],
  method: Method,
  pair: (a: number, b: number) => PairResult,
): CorrelationTable {
  const K = names.length;
  const out = { r: zeros(K, K), n: zeros(K, K), p: zeros(K, K), holm: zeros(K, K) };
  const put = (to: Matrix, a: number, b: number, value: number) => {
    to.data[a * K + b] = value;
    to.data[b * K + a] = value;
  };
  const pairs: { a: number; b: number; p: number }[] = [];
  for (let a = 0; a < K; a++) {
    const self = pair(a, a);
    put(out.r, a, a, Number.isNaN(self.r) ? Number.NaN : 1);
    put(out.n, a, a, self.n);
    put(out.p, a, a, Number.NaN);
    put(out.holm, a, a, Number.NaN);
    for (let b = a + 1; b < K; b++) {
      const { r, n, p } = pair(a, b);
      put(out.r, a, b, r);
      put(out.n, a, b, n);
      put(out.p, a, b, p);
      pairs.push({ a, b, p });
    }
  }
  holm(pairs.map(({ p }) => p)).forEach((value, i) => {
    put(out.holm, pairs[i].a, pairs[i].b, value);
  });
  return { method, names, ...out };
}

/** Missing, or the infinity that a transform may have made of a value. */
const isMissing = (value: number) => !Number.isFinite(value);

/** The rows where none of the columns is missing. */
function present(columns: readonly Float64Array[]): readonly Float64Array[] {
  if (!columns.some((one) => one.some(isMissing))) return columns;
  const rows = Array.from({ length: columns[0].length }, (_, i) => i);
  const keep = rows.filter((i) => columns.every((one) => !isMissing(one[i])));
  return columns.map((one) => Float64Array.from(keep, (i) => one[i]));
}

/** Departures from the mean as shares of the largest; undefined if they are nothing but rounding. */
function centred(values: ArrayLike<number>): Float64Array | undefined {
  const n = values.length;
  let sum = 0;
  let largest = 0;
  for (let i = 0; i < n; i++) {
    sum += values[i];
    largest = Math.max(largest, Math.abs(values[i]));
  }
  const mean = sum / n;
  const out = new Float64Array(n);
  let spread = 0;
  for (let i = 0; i < n; i++) {
    out[i] = values[i] - mean;
    spread = Math.max(spread, Math.abs(out[i]));
  }
  return spread > 4 * Number.EPSILON * largest ? out.map((value) => value / spread) : undefined;
}
