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

export type Statistic =
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
  | { readonly type: "degree-days"; readonly base: number; readonly cap: number };

export type Completeness =
  /** WMO-No. 1203 (2017). */
  | { readonly type: "wmo" }
  /** The older 5/3 rule: more than 5 missing, or more than 3 in a row. */
  | { readonly type: "five-three" }
  | { readonly type: "share"; readonly share: number };

export type Join = "mean of windows" | "mean of days";
