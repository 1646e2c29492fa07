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
  /** Linear trend removed: intercept and slope per year of interval mid-date index; 0, 0 if none. */
  readonly trend: readonly [number, number];
  readonly centre: number;
  readonly scale: number;
  /** Cells that were replaced by the column mean (row indices). */
  readonly filled: readonly number[];
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
}
