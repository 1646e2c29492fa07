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
  /** The theme of each component, where components were made within themes. */
  readonly themes?: readonly string[];
  /** The components kept as varimax or sparse loadings tell them, where that was asked for. */
  readonly simplified?: SimplifiedComponents;
  /** Resampled intervals of the loadings of those kept, where they were asked for. */
  readonly intervals?: LoadingIntervals;
}

/** As many axes as components were kept, each with few covariates that matter, so that it can be named. */
export interface SimplifiedComponents {
  readonly by: "varimax" | "sparse";
  readonly names: readonly string[];
  readonly labels: readonly string[];
  /**
   * K × k. Varimax: correlation of covariate and rotated component. Sparse: unit vectors with exact zeros, the loading
   * of largest magnitude positive.
   */
  readonly loadings: Matrix;
  /** n × k. */
  readonly scores: Matrix;
  /** Share of the variance of all covariates, beyond what the axes before it hold. */
  readonly share: readonly number[];
  /** Covariates each is named after, strongest first: |r| ≥ 0.6 (varimax), not zero (sparse). */
  readonly ledBy: readonly (readonly { readonly name: string; readonly r: number }[])[];
}

/** Kept components after a varimax rotation; k of them. */
export interface RotatedComponents {
  readonly names: readonly string[];
  /** `rotated 1`, … */
  readonly labels: readonly string[];
  /** K × k: correlation of covariate and rotated component. */
  readonly correlations: Matrix;
  /** k × k, orthogonal: rotated correlations = correlations × rotation. */
  readonly rotation: Matrix;
  /** Share of the variance of all covariates, largest first. */
  readonly share: readonly number[];
  /** n × k: uncorrelated, variance 1. */
  readonly scores: Matrix;
  /** The covariates each is named after, strongest first. */
  readonly ledBy: readonly (readonly { readonly name: string; readonly r: number }[])[];
}

/** Bootstrap percentile intervals of loadings, axes matched; K × k each. */
export interface LoadingIntervals {
  readonly level: number;
  /** Samples that count. */
  readonly replicates: number;
  /** Samples in which a covariate did not vary. */
  readonly leftOut: number;
  readonly lower: Matrix;
  readonly upper: Matrix;
  /** Mean congruence of the matched axes with the original one; near 1 for a component that is well defined. */
  readonly congruence: readonly number[];
}
