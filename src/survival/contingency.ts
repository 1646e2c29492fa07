import { chiSquareUpper, normalQuantile } from "../math/distributions.ts";

/** The test of one table of two rows. */
export interface TableTest {
  /** χ² on `df` degrees of freedom; 0 where nothing can be tested. */
  readonly chiSquare: number;
  /** 0 where a row is empty or fewer than two columns hold anything. */
  readonly df: number;
  /** NaN where df is 0. */
  readonly p: number;
  /** Columns that were joined to a neighbour because too little was expected in them. */
  readonly pooled: number;
  /** Two by two and sparse: the mid-p of the exact distribution, and the χ² that has that p. */
  readonly exact: boolean;
  /** √χ² with the sign of (first row's share in the first column − second row's); NaN unless two by two. */
  readonly direction: number;
}

/** Columns in which fewer than this are expected in either row are joined to a neighbour. */
export const LEAST_EXPECTED = 2;

/**
 * Tests whether two rows of counts share one distribution over the columns:
 *
 *     χ² = Σ (observed − expected)²/expected,   expected = row total × column total / total,   df = columns − 1
 *
 * (Pearson 1900, no continuity correction). Columns stand in order of time. Empty ones are left out; while some
 * expectation is below 2, the column with the least is joined to the smaller of its neighbours (expectations below 2
 * are pooled in Burnham et al. 1987, from memory; that only neighbours in time are joined is a choice made here). A
 * table of two columns that is still sparse is judged by the exact distribution, see `exactMidP`.
 */
export function testTwoRows(first: ArrayLike<number>, second: ArrayLike<number>): TableTest {
  const columns = Array.from({ length: first.length }, (_, j): Column => [first[j], second[j]]).filter(
    ([a, b]) => a + b > 0,
  );
  const rows = [0, 1].map((row) => columns.reduce((sum, one) => sum + one[row], 0));
  const total = rows[0] + rows[1];
  const nothing = { chiSquare: 0, df: 0, p: Number.NaN, pooled: 0, exact: false, direction: Number.NaN };
  if (columns.length < 2 || rows[0] === 0 || rows[1] === 0) return nothing;
  const least = (column: Column) => (Math.min(rows[0], rows[1]) * (column[0] + column[1])) / total;

  const before = columns.length;
  for (;;) {
    const worst = columns.reduce((at, column, j) => (least(column) < least(columns[at]) ? j : at), 0);
    if (columns.length === 2 || least(columns[worst]) >= LEAST_EXPECTED) break;
    joinToNeighbour(columns, worst);
  }
  const pooled = before - columns.length;
  const df = columns.length - 1;
  const sign = Math.sign(columns[0][0] / rows[0] - columns[0][1] / rows[1]);
  if (df === 1 && columns.some((column) => least(column) < LEAST_EXPECTED)) {
    const p = exactMidP(columns[0][0], rows[0], rows[1], columns[0][0] + columns[0][1]);
    const z = -normalQuantile(p / 2);
    return { chiSquare: z * z, df, p, pooled, exact: true, direction: sign * z };
  }
  let chiSquare = 0;
  for (const column of columns)
    for (const row of [0, 1]) {
      const expected = (rows[row] * (column[0] + column[1])) / total;
      chiSquare += (column[row] - expected) ** 2 / expected;
    }
  const direction = df === 1 ? sign * Math.sqrt(chiSquare) : Number.NaN;
  return { chiSquare, df, p: chiSquareUpper(chiSquare, df), pooled, exact: false, direction };
}

type Column = readonly [number, number];

/** Joins column `at` to the smaller of its neighbours, to the later one if they are equal. */
function joinToNeighbour(columns: Column[], at: number): void {
  const size = (j: number) =>
    j < 0 || j >= columns.length ? Number.POSITIVE_INFINITY : columns[j][0] + columns[j][1];
  const start = size(at - 1) < size(at + 1) ? at - 1 : at;
  const [left, right] = [columns[start], columns[start + 1]];
  columns.splice(start, 2, [left[0] + right[0], left[1] + right[1]]);
}

/**
 * Two-sided mid-p of a 2 × 2 table with fixed margins (Fisher 1935; mid-p: Lancaster 1961, JASA 56:223): the chance of
 * every table less likely than this one plus half the chance of those as likely. The mid-p is taken because the full
 * tail is far too timid where few tables are possible: the χ² that it stands for then has a mean of about 0.5 instead
 * of 1, which would hide a lack of fit in the sum.
 *
 * `a` of the `firstRow` animals of the first row are in the first column, which holds `firstColumn` of all.
 */
export function exactMidP(a: number, firstRow: number, secondRow: number, firstColumn: number): number {
  const low = Math.max(0, firstColumn - secondRow);
  const high = Math.min(firstRow, firstColumn);
  // hypergeometric weights relative to the observed table, by ratios of neighbours, so that no factorial is needed
  const ratio = (x: number) =>
    ((firstRow - x) * (firstColumn - x)) / ((x + 1) * (secondRow - firstColumn + x + 1));
  const weights: number[] = [1];
  for (let x = a, w = 1; x < high; x++) {
    w *= ratio(x);
    weights.push(w);
  }
  for (let x = a - 1, w = 1; x >= low; x--) {
    w /= ratio(x);
    weights.push(w);
  }
  let [sum, less, equal] = [0, 0, 0];
  for (const w of weights) {
    sum += w;
    // ratios carry rounding: weights this close belong to tables that are equally likely
    if (Math.abs(w - 1) <= 1e-9) equal += w;
    else if (w < 1) less += w;
  }
  return (less + equal / 2) / sum;
}
