import type { RawFinding } from "../data/finding.ts";
import type { Matrix } from "../data/matrix.ts";
import type { Detrend, Transform } from "./options.ts";

/** What was done to one column, enough to do it to new rows and to undo it. */
export interface ColumnRecipe {
  readonly name: string;
  readonly theme: string;
  /** Unit before the transform. */
  readonly unit: string;
  readonly definition: string;
  readonly transform: Transform | undefined;
  readonly detrend: Detrend;
  /** Linear trend removed: intercept and slope per year of `yearIndex` of the intervals; 0, 0 if none. */
  readonly trend: readonly [number, number];
  readonly centre: number;
  readonly scale: number;
  /** Cells that were replaced by the column mean (row indices). */
  readonly filled: readonly number[];
  /** Smallest and largest recorded value before the transform, so that new rows beyond them can be told. */
  readonly range?: readonly [number, number];
}

/** The prepared covariates: rows are intervals, columns covariates. */
export interface CovariateMatrix {
  readonly names: readonly string[];
  readonly recipes: readonly ColumnRecipe[];
  /** Names of the rows (intervals). */
  readonly rows: readonly string[];
  /** Before preparation (after derive), T−1 × K. */
  readonly raw: Matrix;
  /** After transform, detrend and standardise, T−1 × K. */
  readonly standard: Matrix;
  /** Covariates by stratum, which have no column here; none if not said. */
  readonly byStratum?: readonly StratumColumn[];
}

/** A covariate whose values differ between strata, put together from columns of the matrix. */
export interface StratumColumn {
  /** Centre and scale over all G·n rows. */
  readonly recipe: ColumnRecipe;
  readonly strata: readonly string[];
  /** The column of the matrix that each stratum takes its values from. */
  readonly parts: readonly string[];
  /** Standardised over all rows, G·n, stratum after stratum. */
  readonly values: Float64Array;
}

/** A covariate that did not enter the matrix. */
export interface LeftOut {
  readonly name: string;
  readonly reason: string;
}

export interface Prepared {
  readonly matrix: CovariateMatrix;
  readonly leftOut: readonly LeftOut[];
  readonly findings: readonly RawFinding[];
}
