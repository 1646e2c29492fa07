export interface CollinearityOptions {
  readonly warn: { readonly correlation: number; readonly inflation: number; readonly condition: number };
  /** Clusters hold together at |r| of at least this (average linkage on 1 − |r|). */
  readonly cluster: number;
  /** The user's own decisions, applied before the screen. */
  readonly decisions: readonly { readonly drop: string; readonly keep?: string; readonly note: string }[];
}
