import type { Matrix } from "../data/matrix.ts";

/**
 * Release–recapture counts of one stratum over T occasions (Burnham et al. 1987).
 * `released[i]`: animals released at occasion i (0 … T−2), lost ones not counted;
 * `seen` (T−1 × T−1, row-major): seen[i][j] = of those, next seen at occasion j + 1; zero for j < i.
 */
export interface Counts {
  readonly stratum: string;
  readonly occasions: number;
  readonly released: Float64Array;
  readonly seen: Matrix;
  /** Animals that the counts come from; NaN for counts tables. */
  readonly animals: number;
}
