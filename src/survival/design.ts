/**
 * The two linear predictors on the logit scale. Rows are stratum × interval, stratum after stratum (G·n rows,
 * row g·n + t); for recapture row g·n + t speaks of occasion t + 1. Columns are kept one array each.
 */
export interface Part {
  /** The part in plain words, e.g. `winter rain + snow days`, `constant`, `each occasion`. */
  readonly words: string;
  readonly names: readonly string[];
  readonly columns: readonly Float64Array[];
}

export interface Design {
  readonly strata: number;
  readonly intervals: number;
  /** Δ_t in years, n. */
  readonly lengths: Float64Array;
  readonly survival: Part;
  /** Recapture probabilities to be estimated, or one that is known. */
  readonly recapture: Part | { readonly known: number };
}

/** Shape shared by all models of one study. */
export interface Frame {
  readonly strata: readonly string[];
  readonly intervals: number;
  readonly lengths: Float64Array;
  /** Covariates always in the survival part: names and values by interval. */
  readonly forced: readonly NamedColumn[];
  /** Effort by recapture occasion (n values), standardised; undefined if there is none. */
  readonly effort: Float64Array | undefined;
}

export interface NamedColumn {
  readonly name: string;
  /** n values, one per interval. */
  readonly values: Float64Array;
}

/** A value per interval, the same in every stratum. */
function overStrata(frame: Frame, values: Float64Array): Float64Array {
  const out = new Float64Array(frame.strata.length * frame.intervals);
  for (let g = 0; g < frame.strata.length; g++) out.set(values, g * frame.intervals);
  return out;
}

/** 1 in the rows of stratum g. */
function stratumColumn(frame: Frame, g: number): Float64Array {
  const out = new Float64Array(frame.strata.length * frame.intervals);
  return out.fill(1, g * frame.intervals, (g + 1) * frame.intervals);
}

function stratumColumns(frame: Frame): NamedColumn[] {
  return frame.strata
    .slice(1)
    .map((name, g) => ({ name: `${name} against ${frame.strata[0]}`, values: stratumColumn(frame, g + 1) }));
}

function assemble(words: string, columns: readonly NamedColumn[]): Part {
  return { words, names: columns.map((one) => one.name), columns: columns.map((one) => one.values) };
}

const ONES = (n: number) => new Float64Array(n).fill(1);

/** logit s = β0 + stratum effects + forced covariates + the covariates given. */
export function covariateSurvival(frame: Frame, covariates: readonly NamedColumn[]): Part {
  const rows = frame.strata.length * frame.intervals;
  const chosen = [...frame.forced, ...covariates];
  return assemble(chosen.length === 0 ? "constant" : chosen.map((one) => one.name).join(" + "), [
    { name: "survival at mean covariates", values: ONES(rows) },
    ...stratumColumns(frame),
    ...chosen.map((one) => ({ name: one.name, values: overStrata(frame, one.values) })),
  ]);
}

/** How many leading columns of `covariateSurvival` come before the covariates that are chosen. */
export function fixedSurvivalColumns(frame: Frame): number {
  return frame.strata.length + frame.forced.length;
}

/** logit s_t = β_t + stratum effects: a survival of its own for every interval. */
export function intervalSurvival(frame: Frame): Part {
  const indicators = Array.from({ length: frame.intervals }, (_, t) => {
    const values = new Float64Array(frame.intervals);
    values[t] = 1;
    return { name: `survival of interval ${t + 1}`, values: overStrata(frame, values) };
  });
  return assemble("each interval its own", [...indicators, ...stratumColumns(frame)]);
}

export function constantRecapture(frame: Frame): Part {
  return assemble("constant", [{ name: "recapture", values: ONES(frame.strata.length * frame.intervals) }]);
}

export function occasionRecapture(frame: Frame): Part {
  const indicators = Array.from({ length: frame.intervals }, (_, t) => {
    const values = new Float64Array(frame.intervals);
    values[t] = 1;
    return { name: `recapture at occasion ${t + 2}`, values: overStrata(frame, values) };
  });
  return assemble("each occasion its own", indicators);
}

/** logit p = α0 + α1 · effort, effort standardised over the recapture occasions. */
export function effortRecapture(frame: Frame, effort: Float64Array): Part {
  return assemble("by effort", [
    { name: "recapture at mean effort", values: ONES(frame.strata.length * frame.intervals) },
    { name: "effort (per sd)", values: overStrata(frame, effort) },
  ]);
}
