import type { Completeness, Infill, Join, Statistic, Window, YearRange } from "../aggregate/options.ts";
import type { CollinearityOptions } from "../collinearity/options.ts";
import type { ComponentOptions } from "../components/options.ts";
import type { PrepareOptions } from "../covariates/options.ts";
import type { FindingKind, Severity } from "../data/finding.ts";
import type { LayerOptions, PlaceUse } from "../layers/options.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { DuplicateRule, RecordOptions, StationListOptions } from "../stations/options.ts";
import type { CaptureOptions, OccasionOptions, PlaceOptions, ReadyMadeOptions } from "../study/options.ts";
import type { RecaptureChoice, SurvivalOptions } from "../survival/options.ts";

export interface StudyOptions {
  readonly title: string;
  /** True if places must be hidden in what is published. */
  readonly sensitive: boolean;
  /** To how many kilometres sensitive places are rounded. */
  readonly coarsenKm: number;
}

/** Which kinds of files the figures are written as, beside the page. */
export interface FigureOptions {
  readonly svg: boolean;
  readonly png: boolean;
}

interface CovariateName {
  readonly name: string;
  readonly theme: string;
  /** Its place in the file, where covariates kept apart by station have shifted those that follow. */
  readonly entry?: number;
}

/** How observations become one value per interval. */
export interface CovariateValues {
  readonly window: Window;
  readonly statistic: Statistic;
  readonly complete: Completeness;
  /** Unit of the values before the statistic, thresholds included; that of the source if not said. */
  readonly unit?: string;
  readonly anomaly?: { readonly by: "month" | "day"; readonly base: YearRange };
  readonly allowedMissing?: number;
}

/** From station records. */
export interface StationCovariate extends CovariateName, CovariateValues {
  readonly source: "stations";
  /** A key of `series` of at least one of the records. */
  readonly variable: string;
  /** Daily minima beside the maxima, for degree-days of extremes. */
  readonly second?: string;
  /** Names or identifiers as they are written; whether they exist is known once the list of stations is read. */
  readonly stations: "all" | readonly string[];
  readonly join: Join;
  readonly infill?: Infill;
  /** Stations are weighted by 1/distance^power to a place. */
  readonly weights?: { readonly near: string; readonly power: number };
}

/** From a layer at a place. */
export interface LayerCovariate extends CovariateName, CovariateValues {
  readonly source: "layer";
  readonly layer: string;
  readonly place: string;
  readonly use: PlaceUse;
}

/** From a table that has one value per interval. */
export interface ReadyMadeCovariate extends CovariateName {
  readonly source: "ready-made";
  readonly table: string;
  readonly column: string;
  readonly unit: string;
}

export type CovariateSpec = StationCovariate | LayerCovariate | ReadyMadeCovariate;

/** One other way to do the study; keys that are absent stay as they are. */
export interface Alternative {
  readonly name: string;
  /** The covariate that `window`, `lag` and `statistic` change. */
  readonly of?: string;
  readonly window?: Window;
  readonly lag?: number;
  readonly statistic?: Statistic;
  readonly standardise?: PrepareOptions["standardise"];
  readonly detrend?: PrepareOptions["detrend"];
  readonly chooseBy?: ScreenOptions["chooseBy"];
  readonly sampleSize?: ScreenOptions["sampleSize"];
  readonly recapture?: RecaptureChoice;
  readonly yearTrend?: boolean;
}

export interface SensitivityOptions {
  /** Permutations of years over the study and all alternatives together; 0 for none. */
  readonly permutations: number;
  readonly alternatives: readonly Alternative[];
}

/** Findings of one file or subject that are treated otherwise. */
export interface FindingException {
  readonly file?: string;
  readonly subject?: string;
  readonly do: Severity;
  readonly note: string;
}

export interface FindingPolicy {
  readonly do: Severity;
  readonly except: readonly FindingException[];
}

/** A whole pipeline file as the program uses it: every default filled in, every reference within it checked. */
export interface Spec {
  readonly schema: 1;
  readonly study: StudyOptions;
  /** Folder of all inputs, as written: relative to the pipeline file, or absolute. */
  readonly data: string;
  /** Folder of the results, as written. */
  readonly output: string;
  readonly seed: number;
  /** Absent only where every covariate is ready-made and the captures need no dates. */
  readonly occasions?: OccasionOptions;
  /** Absent: the pipeline only builds the covariate set. */
  readonly captures?: CaptureOptions;
  readonly places: Readonly<Record<string, PlaceOptions>>;
  readonly stations?: StationListOptions;
  readonly records: readonly RecordOptions[];
  readonly layers: Readonly<Record<string, LayerOptions>>;
  readonly readyMade: Readonly<Record<string, ReadyMadeOptions>>;
  /** In the order of the file: one is written at the key path `["covariates", entry]`, `entry` being its index if not said. */
  readonly covariates: readonly CovariateSpec[];
  readonly prepare: PrepareOptions;
  readonly collinearity: CollinearityOptions;
  readonly components: ComponentOptions;
  readonly survival: SurvivalOptions;
  readonly recapture: RecaptureChoice;
  /** Covariates that recapture goes by, where `recapture` is `covariates`. */
  readonly recaptureCovariates?: readonly string[];
  readonly screen: ScreenOptions;
  /** Absent: only the study as it stands is run. */
  readonly sensitivity?: SensitivityOptions;
  readonly figures: FigureOptions;
  readonly findings: Readonly<Record<FindingKind, FindingPolicy>>;
  readonly duplicates: DuplicateRule;
}
