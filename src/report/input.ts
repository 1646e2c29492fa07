import type { IntervalCovariate } from "../aggregate/result.ts";
import type { CollinearityOptions } from "../collinearity/options.ts";
import type { Diagnosis } from "../collinearity/result.ts";
import type { Comparison } from "../compare/compare.ts";
import type { Components } from "../components/result.ts";
import type { CovariateMatrix } from "../covariates/result.ts";
import type { Finding } from "../data/finding.ts";
import type { Interval, Occasion } from "../data/occasion.ts";
import type { Where } from "../data/place.ts";
import type { Series, Site } from "../data/series.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Resampling } from "../simulate/resampling.ts";
import type { GoodnessOfFit } from "../survival/goodness-of-fit.ts";
import type { Table } from "../tables/table.ts";

/** A layer to lie under the map: row-major values, row 0 in the north, corners in WGS 84 degrees. */
export interface MapLayer {
  /** What the values are, e.g. `greenness`. */
  readonly variable: string;
  readonly title: string;
  readonly unit: string;
  readonly width: number;
  readonly height: number;
  readonly values: Float64Array;
  readonly west: number;
  readonly east: number;
  readonly south: number;
  readonly north: number;
}

/** One observed series behind a covariate, thinned to at most one value a month for the picture. */
export interface ShownSeries {
  readonly covariate: string;
  readonly series: Series;
}

/** All the page shows. Places are coarsened before they come here when the study is sensitive. */
export interface ReportInput {
  readonly title: string;
  readonly version: string;
  readonly sensitive: boolean;
  /** Side of the grid to which places were coarsened, km; 0 if they were not. */
  readonly coarsenedKm: number;
  readonly occasions: readonly Occasion[];
  readonly intervals: readonly Interval[];
  /** Numbers caught by occasion; empty for counts tables and covariate sets. */
  readonly caught: readonly {
    readonly occasion: string;
    readonly newlyMarked: number;
    readonly seenAgain: number;
  }[];
  /** NaN where not known. */
  readonly animals: number;
  /** Candidates with their value, window and completeness per interval. */
  readonly covariates: readonly IntervalCovariate[];
  readonly matrix: CovariateMatrix;
  readonly leftOut: readonly { readonly name: string; readonly reason: string }[];
  readonly shown: readonly ShownSeries[];
  readonly places: readonly Where[];
  readonly stations: readonly Site[];
  /** Which covariates were read of a layer at which place. */
  readonly readAt?: readonly { readonly covariate: string; readonly place: string }[];
  readonly map: MapLayer | undefined;
  readonly warn: CollinearityOptions["warn"];
  /** The mean absolute r at which the tree of clusters was cut. */
  readonly cut?: number;
  readonly diagnosis: Diagnosis | undefined;
  readonly components: Components | undefined;
  readonly screened: ScreenResult | undefined;
  readonly comparison: Comparison | undefined;
  /** Fit of the general model; undefined where no captures were read. */
  readonly goodness?: GoodnessOfFit | undefined;
  /** What is chosen when the study is drawn again; undefined if not asked for. */
  readonly resampling?: Resampling | undefined;
  readonly findings: readonly Finding[];
  readonly tables: readonly Table[];
  /** The run record as pretty JSON, places redacted. */
  readonly record: string;
}
