import type { Series } from "../data/series.ts";

/** A day of the year without a year. `day` 0 stands for the last day of the month. */
export interface MonthDay {
  readonly month: number;
  readonly day: number;
}

/** One end of a span: so many days before or after an occasion's mid-date. */
export interface SpanEnd {
  /** Negative before, positive after. */
  readonly days: number;
  /** `start`: the occasion that opens the interval; `end`: the one that closes it. */
  readonly of: "start" | "end";
}

/** One period for each interval (methods §1). */
export type Window =
  /** First to last day, both included; may cross the new year. */
  | { readonly type: "season"; readonly from: MonthDay; readonly to: MonthDay; readonly lag: number }
  /** From one end up to, not including, the other. */
  | { readonly type: "span"; readonly from: SpanEnd; readonly to: SpanEnd; readonly lag: number }
  | { readonly type: "interval"; readonly lag: number }
  | { readonly type: "year"; readonly lag: number };

/** First and last year, both included. */
export interface YearRange {
  readonly from: number;
  readonly to: number;
}

/** What one station's values in one window can be made into without looking outside the window. */
export type WindowStatistic =
  | { readonly type: "mean" | "sum" | "minimum" | "maximum" | "range" | "sd" | "median" }
  | { readonly type: "quantile"; readonly probability: number }
  /** Days strictly below / above the threshold, in the covariate's unit before the statistic. */
  | { readonly type: "days below" | "days above"; readonly threshold: number; readonly orEqual: boolean }
  | { readonly type: "share below" | "share above"; readonly threshold: number; readonly orEqual: boolean }
  | {
      readonly type: "longest run below" | "longest run above";
      readonly threshold: number;
      readonly orEqual: boolean;
    }
  /** Σ max(0, min(x, cap) − base) over days. */
  | { readonly type: "degree-days"; readonly base: number; readonly cap: number }
  /** Σ max(0, base − x) over days. */
  | { readonly type: "degree-days below"; readonly base: number }
  /** Sum, or mean, of the daily values above the threshold alone. */
  | { readonly type: "sum above" | "mean above"; readonly threshold: number; readonly orEqual: boolean }
  /** Day of the window, 1 = its first day, of the first or last value past the threshold; none: missing. */
  | {
      readonly type: "first day below" | "first day above" | "last day below" | "last day above";
      readonly threshold: number;
      readonly orEqual: boolean;
    }
  /** Least-squares slope over the observations' mid-days, per day. */
  | { readonly type: "trend" }
  /** Mean of the `count` largest sums or means over `days` days in a row that share no day. */
  | { readonly type: "largest sums" | "largest means"; readonly days: number; readonly count: number }
  /** ETCCDI growing-season length of a window of twelve months, from daily mean temperature in degC. */
  | { readonly type: "growing season" };

/** ETCCDI indices by their published names or abbreviations; temperatures in degC, rain in mm. */
export type EtccdiIndex =
  | "frost days"
  | "icing days"
  | "summer days"
  | "tropical nights"
  | "growing-season length"
  | "TXx"
  | "TNn"
  | "Rx1day"
  | "Rx5day"
  | "SDII"
  | "R10mm"
  | "R20mm"
  | "CDD"
  | "CWD"
  | "PRCPTOT";

export type Statistic =
  | WindowStatistic
  /** From the daily maximum (`series`) and minimum (`second`): 1 clips the mean, 2 clips both first. */
  | {
      readonly type: "degree-days of extremes";
      readonly base: number;
      readonly cap: number;
      readonly method: 1 | 2;
    }
  | { readonly type: "index"; readonly index: EtccdiIndex }
  /** Rain on days above the wet-day 95th percentile (type 7) of the base years. */
  | { readonly type: "R95pTOT"; readonly base: YearRange }
  /** Standardised precipitation index of the window's sum; seasons and years only. */
  | { readonly type: "SPI"; readonly base: YearRange };

export type Completeness =
  /** WMO-No. 1203 (2017). */
  | { readonly type: "wmo" }
  /** The older 5/3 rule: more than 5 missing, or more than 3 in a row. */
  | { readonly type: "five-three" }
  | { readonly type: "share"; readonly share: number };

export type Join = "mean of windows" | "mean of days";

/** How a station's short gaps are filled from its neighbours before anything else is done (never silently). */
export interface Infill {
  /** `regression` on the best-correlated neighbour, or the normal-ratio method (totals only). */
  readonly method: "regression" | "normal ratio";
  /** Longest gap that is filled, in days. */
  readonly longest: number;
}

/** All that is needed to make one covariate. */
export interface CovariateDefinition {
  readonly name: string;
  readonly theme: string;
  /** The unit of the series, and so of every threshold. */
  readonly unit: string;
  readonly window: Window;
  readonly statistic: Statistic;
  readonly complete: Completeness;
  readonly join: Join;
  /** One or more per site; those of one site are put end to end. Already in `unit`. */
  readonly series: readonly Series[];
  /** Daily minima for a statistic of two series; each site needs both. */
  readonly second?: readonly Series[];
  /** Values become departures from the site's base mean of the calendar month, or day, before the window. */
  readonly anomaly?: { readonly by: "month" | "day"; readonly base: YearRange };
  readonly infill?: Infill;
  /** Weights of the stations when they are joined, and in words where they come from; equal if not said. */
  readonly weights?: { readonly bySite: ReadonlyMap<string, number>; readonly words: string };
  /** Other stations' series of the same variable, in `unit`: infilling may use them, nothing else does. */
  readonly neighbours?: readonly Series[];
  /** The same for `second`. */
  readonly secondNeighbours?: readonly Series[];
  /** Missing days that counts, runs and degree-days may have in a window; 0 if not said. */
  readonly allowedMissing?: number;
}
