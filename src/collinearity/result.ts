import type { Matrix } from "../data/matrix.ts";

export interface CorrelationTable {
  readonly method: "Pearson" | "Spearman";
  readonly names: readonly string[];
  /** K × K. */
  readonly r: Matrix;
  readonly n: Matrix;
  /** Two-sided p by the t distribution on n − 2; NaN on the diagonal. */
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
}

export interface Cluster {
  readonly members: readonly string[];
  /** The member with the largest mean |r| to the others. */
  readonly closest: string;
}

export interface Merge {
  /** Negative: a single column, −1 − index; else the index of an earlier merge. */
  readonly left: number;
  readonly right: number;
  readonly height: number;
}

export interface PruneStep {
  readonly dropped: string;
  readonly inflation: number;
  readonly reason: string;
}

export interface Diagnosis {
  readonly pearson: CorrelationTable;
  readonly spearman: CorrelationTable;
  readonly inflation: readonly Inflation[];
  readonly condition: ConditionTable;
  /** sqrt(λmax/λmin) of the correlation matrix; Infinity if singular. */
  readonly correlationCondition: number;
  readonly dependencies: readonly Dependency[];
  /** True if every column depends on the others (K ≥ rows − 1). */
  readonly allDepend: boolean;
  readonly merges: readonly Merge[];
  /** Order of the columns along the tree. */
  readonly order: readonly number[];
  readonly clusters: readonly Cluster[];
  readonly pruning: readonly PruneStep[];
  /** What is left after pruning. */
  readonly kept: readonly string[];
}
