export interface CollinearityOptions {
  readonly warn: { readonly correlation: number; readonly inflation: number; readonly condition: number };
  /** Clusters hold together at |r| of at least this (average linkage on 1 − |r|). */
  readonly cluster: number;
  /**
   * Most important first: pruning drops the last of these that is too inflated, unlisted columns before listed ones.
   * Without it pruning drops the column with the largest inflation.
   */
  readonly priority?: readonly string[];
  /** The user's own decisions, applied before the screen. */
  readonly decisions: readonly { readonly drop: string; readonly keep?: string; readonly note: string }[];
}
