import type { Matrix } from "../data/matrix.ts";

export interface CorrelationTable {
  readonly method: "Pearson" | "Spearman";
  /** What was taken out of both columns (partial correlation). */
  readonly given?: "year";
  /** `changes`: of the differences from each row to the next; the values themselves if not said. */
  readonly of?: "values" | "changes";
  readonly names: readonly string[];
  /** K × K. */
  readonly r: Matrix;
  /** Rows where both columns are present. */
  readonly n: Matrix;
  /**
   * Two-sided p by the t distribution on n − 2 (n − 3 for partial ones), exact for Spearman with n ≤ 10 and no ties;
   * NaN on the diagonal.
   */
  readonly p: Matrix;
  /** Holm-adjusted over the K(K−1)/2 pairs. */
  readonly holm: Matrix;
}

export interface Inflation {
  readonly name: string;
  /** Infinity where the others reproduce the column exactly. */
  readonly inflation: number;
  readonly tolerance: number;
}

export interface ConditionTable {
  /** `intercept` first. */
  readonly names: readonly string[];
  readonly singularValues: readonly number[];
  readonly indices: readonly number[];
  /** Rows are dimensions, columns coefficients; each column sums to 1. */
  readonly proportions: Matrix;
}

/** Exact linear dependency among up to 4 centred columns. */
export interface Dependency {
  readonly names: readonly string[];
  /**
   * `copy`: the same values; `rescaled`: one is the other in another unit or turned round; `sum`: one is the sum or
   * difference of the others; `combination`: anything else.
   */
  readonly kind?: "copy" | "rescaled" | "sum" | "combination";
  /** In words and in the units handed in, e.g. `all rain = winter rain + summer rain`. */
  readonly relation?: string;
}

/** What keeping one member of a cluster would keep of the others. */
export interface ClusterChoice {
  readonly keep: string;
  /** Mean and least |r| to the other members; 1 for a cluster of one. */
  readonly meanR: number;
  readonly leastR: number;
}

/** A set of columns that tell the same story; columns that stand alone are clusters of one. */
export interface Cluster {
  readonly members: readonly string[];
  /** The member with the largest mean |r| to the others. */
  readonly closest: string;
  readonly choices?: readonly ClusterChoice[];
}

export interface Merge {
  /** Negative: a single column, −1 − its index; else the index of an earlier merge. */
  readonly left: number;
  readonly right: number;
  readonly height: number;
}

export interface PruneStep {
  readonly dropped: string;
  readonly inflation: number;
  readonly reason: string;
  /** The user's decision, or the rule that chose the column. */
  readonly by?: "decision" | "inflation" | "priority";
}

export interface Diagnosis {
  readonly pearson: CorrelationTable;
  readonly spearman: CorrelationTable;
  /** Pearson and Spearman given the year: what is left when a shared linear trend is taken out. */
  readonly partial?: CorrelationTable;
  readonly partialSpearman?: CorrelationTable;
  /** Pearson of the changes from row to row. */
  readonly changes?: CorrelationTable;
  /** Rows without a missing cell, on which all but the correlations rest. */
  readonly completeRows?: number;
  readonly inflation: readonly Inflation[];
  readonly condition: ConditionTable;
  /** sqrt(λmax/λmin) of the correlation matrix; Infinity if singular. */
  readonly correlationCondition: number;
  readonly dependencies: readonly Dependency[];
  /** True if every column depends on the others, as always where K ≥ rows (n rows, centred, have rank n − 1). */
  readonly allDepend: boolean;
  readonly merges: readonly Merge[];
  /** Order of the columns along the tree. */
  readonly order: readonly number[];
  readonly clusters: readonly Cluster[];
  readonly pruning: readonly PruneStep[];
  /** What is left after pruning. */
  readonly kept: readonly string[];
}
