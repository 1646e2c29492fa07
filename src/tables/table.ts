/** A cell: text, a number (NaN = missing), a truth value, or nothing. */
export type Cell = string | number | boolean | undefined;

export interface TableColumn {
  /** Machine name: lower case, underscores. */
  readonly name: string;
  /** What a person reads above the column. */
  readonly title: string;
  readonly type: "text" | "number" | "integer" | "truth";
  /** Unit of the values; `1` for pure numbers; undefined for text. */
  readonly unit?: string;
  readonly description: string;
}

/** One output table, used by the page, the CSV and JSON files alike. */
export interface Table {
  /** File stem, e.g. `covariates-standardised`. */
  readonly name: string;
  readonly title: string;
  readonly description: string;
  readonly columns: readonly TableColumn[];
  readonly rows: readonly (readonly Cell[])[];
}
