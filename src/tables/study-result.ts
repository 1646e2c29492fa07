import type { IntervalCovariate } from "../aggregate/result.ts";
import type { Diagnosis } from "../collinearity/result.ts";
import type { Comparison } from "../compare/compare.ts";
import type { Components } from "../components/result.ts";
import type { CovariateMatrix, LeftOut } from "../covariates/result.ts";
import type { Finding } from "../data/finding.ts";
import type { Interval, Occasion } from "../data/occasion.ts";
import type { Refusal } from "../layers/refusals.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Resampling } from "../simulate/resampling.ts";
import type { GoodnessOfFit } from "../survival/goodness-of-fit.ts";

/** Numbers caught at one occasion. */
export interface Caught {
  readonly occasion: string;
  readonly newlyMarked: number;
  readonly seenAgain: number;
}

/** What the stages of one run came to, as far as tables speak of it. */
export interface StudyResult {
  readonly occasions: readonly Occasion[];
  readonly intervals: readonly Interval[];
  readonly caught: readonly Caught[];
  readonly covariates: readonly IntervalCovariate[];
  readonly matrix: CovariateMatrix;
  readonly leftOut: readonly LeftOut[];
  readonly diagnosis: Diagnosis | undefined;
  readonly components: Components | undefined;
  /** Fit of the general model; undefined without captures, or where the screen was not reached. */
  readonly goodness: GoodnessOfFit | undefined;
  readonly screened: ScreenResult | undefined;
  /** What is chosen when the study is drawn again; undefined if not asked for. */
  readonly resampling: Resampling | undefined;
  readonly comparison: Comparison | undefined;
  readonly findings: readonly Finding[];
  /** What the layers' quality refused; empty or absent where none was asked. */
  readonly refusals?: readonly Refusal[];
}
