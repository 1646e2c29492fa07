export type Transform = "log" | "log1p" | "square root" | "logit";
export type Detrend = "none" | "linear" | "difference";
export type IncompleteRule = "leave out" | "mean" | "stop";
export type Standardise =
  | { readonly type: "sample" }
  | { readonly type: "base"; readonly from: number; readonly to: number }
  | { readonly type: "none" };

export interface DeriveOptions {
  readonly name: string;
  readonly theme: string;
  readonly unit: string;
  readonly rule: "difference" | "ratio" | "product" | "square" | "mean";
  readonly of: readonly string[];
}

export interface PrepareOptions {
  readonly derive: readonly DeriveOptions[];
  readonly transform: Readonly<Record<string, Transform>>;
  readonly detrend: Detrend;
  readonly incomplete: IncompleteRule;
  readonly standardise: Standardise;
}

/**
 * Values of each covariate, by name, in the years of the base period (the season that ends in each year, both end
 * years included; NaN where a year has none). A covariate whose window is counted from occasions has no entry.
 */
export type BaseValues = ReadonlyMap<string, ArrayLike<number>>;
