export type KeepRule =
  | { readonly type: "broken stick" }
  | { readonly type: "eigenvalue" }
  | { readonly type: "parallel"; readonly replicates: number; readonly quantile: number }
  | { readonly type: "share"; readonly share: number }
  | { readonly type: "number"; readonly number: number };

/** Over all columns, within each theme, or within groups that the user names; columns in no group form one of their own. */
export type Within = "all" | "themes" | Readonly<Record<string, readonly string[]>>;

export interface ComponentOptions {
  readonly keep: KeepRule;
  readonly within: Within;
  /** A second set of loadings by which the components kept can be named. */
  readonly simplify: "none" | "varimax" | "sparse";
  /** Bootstrap samples of the intervals for the intervals of loadings; 0 for none. */
  readonly resamples: number;
}
