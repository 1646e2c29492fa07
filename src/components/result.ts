import type { Matrix } from "../data/matrix.ts";

/** Principal components of the correlation matrix. m = min(n − 1, K) with positive variance. */
export interface Components {
  readonly names: readonly string[];
  /** Component names: `component 1`, … */
  readonly labels: readonly string[];
  /** sd, m. */
  readonly sd: readonly number[];
  readonly share: readonly number[];
  readonly cumulative: readonly number[];
  /** K × m unit vectors; in each the loading of largest magnitude is positive. */
  readonly loadings: Matrix;
  /** n × m. */
  readonly scores: Matrix;
  /** K × m: correlation of covariate and component. */
  readonly correlations: Matrix;
  /** Expected shares under the broken-stick model, m. */
  readonly brokenStick: readonly number[];
  readonly kept: number;
  /** Why that many, in words. */
  readonly keptBecause: string;
  /** Mean and sample sd (n − 1) of each column of the matrix handed in, K; 0 and 1 if not said. */
  readonly centre?: readonly number[];
  readonly scale?: readonly number[];
  /** Parallel analysis: the eigenvalues that chance alone gives, m. */
  readonly parallel?: readonly number[];
}
