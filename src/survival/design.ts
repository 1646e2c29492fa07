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
  /** 1 where an interval ends at no occasion, so that nobody can be seen there; none if not said. */
  readonly closed?: Uint8Array;
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
  /** Differences between strata on the logit scale; if not said, every stratum against the first. */
  readonly contrasts?: {
    readonly survival: readonly NamedColumn[];
    readonly recapture: readonly NamedColumn[];
  };
  /**
   * Where covariates have values by stratum: the group of each stratum, from 0. Strata of a group share all covariates, and one
   * survival per interval is one per group × interval, since nothing less contains every model with such covariates.
   */
  readonly groups?: Int32Array;
  /** Where intervals are split into years: the interval each of the n years is of, ascending from 0. */
  readonly yearsOf?: Int32Array;
  /** Covariates of a recapture part by covariates, of the interval that the occasion closes. */
  readonly recaptureCovariates?: readonly NamedColumn[];
}

export interface NamedColumn {
  readonly name: string;
  /** n values, one per interval, the same in every stratum; or G·n, one per row. */
  readonly values: Float64Array;
}

/** Intervals between occasions: n, or fewer where some are split into years. */
export function occasionIntervals(frame: Frame): number {
  return frame.yearsOf === undefined ? frame.intervals : frame.yearsOf[frame.intervals - 1] + 1;
}

/** 1 where a year of a split interval ends at no occasion; undefined where nothing is split. */
export function closedYears({ yearsOf }: Frame): Uint8Array | undefined {
  if (yearsOf === undefined) return undefined;
  return Uint8Array.from(yearsOf, (interval, t) => (yearsOf[t + 1] === interval ? 1 : 0));
}

/** A value per interval, the same in every stratum; values by row stay as they are. */
function overStrata(frame: Frame, values: Float64Array): Float64Array {
  const rows = frame.strata.length * frame.intervals;
  if (values.length === rows) return values;
  const out = new Float64Array(rows);
  for (let g = 0; g < frame.strata.length; g++) out.set(values, g * frame.intervals);
  return out;
}

/** 1 in the rows of stratum g. */
function stratumColumn(frame: Frame, g: number): Float64Array {
  const out = new Float64Array(frame.strata.length * frame.intervals);
  return out.fill(1, g * frame.intervals, (g + 1) * frame.intervals);
}

function stratumColumns(frame: Frame, part: "survival" | "recapture"): readonly NamedColumn[] {
  if (frame.contrasts !== undefined) return frame.contrasts[part];
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
    ...stratumColumns(frame, "survival"),
    ...chosen.map((one) => ({ name: one.name, values: overStrata(frame, one.values) })),
  ]);
}

/** Differences between strata in the survival part. */
export function survivalContrasts(frame: Frame): number {
  return frame.contrasts === undefined ? frame.strata.length - 1 : frame.contrasts.survival.length;
}

/** Differences between strata in a recapture part by strata. */
export function recaptureContrasts(frame: Frame): number {
  return frame.contrasts === undefined ? frame.strata.length - 1 : frame.contrasts.recapture.length;
}

/** How many leading columns of `covariateSurvival` come before the covariates that are chosen. */
export function fixedSurvivalColumns(frame: Frame): number {
  return 1 + survivalContrasts(frame) + frame.forced.length;
}

/** 1 in the rows of interval t between occasions, that is in all its years where it is split. */
function intervalColumn(frame: Frame, t: number): Float64Array {
  const values = new Float64Array(frame.intervals);
  for (let row = 0; row < values.length; row++)
    if ((frame.yearsOf === undefined ? row : frame.yearsOf[row]) === t) values[row] = 1;
  return overStrata(frame, values);
}

/** Groups of strata with a survival per interval of their own; one where covariates are the same in all strata. */
export function survivalGroups({ groups }: Frame): number {
  return groups === undefined ? 1 : Math.max(...groups) + 1;
}

/** 1 in the rows of the strata of a group at the intervals where `values` (n) is. */
export function inGroup({ strata, intervals, groups }: Frame, group: number, values: Float64Array) {
  return Float64Array.from({ length: strata.length * intervals }, (_, r) =>
    groups?.[Math.floor(r / intervals)] === group ? values[r % intervals] : 0,
  );
}

/** Differences between strata that a survival per group × interval leaves: those that are not the same all over a group. */
function contrastsWithin(frame: Frame, groups: Int32Array): readonly NamedColumn[] {
  const n = frame.intervals;
  return stratumColumns(frame, "survival").filter(({ values }) =>
    groups.some((group, g) => values[g * n] !== values[groups.indexOf(group) * n]),
  );
}

/**
 * logit s_t = β_t + stratum effects: a survival of its own for every interval, and for every group of strata where covariates
 * have values by stratum. The years of a split interval share it: captures tell their product alone.
 */
export function intervalSurvival(frame: Frame): Part {
  const { groups } = frame;
  if (groups !== undefined) {
    const indicators = Array.from({ length: survivalGroups(frame) * occasionIntervals(frame) }, (_, i) => {
      const [group, t] = [i % survivalGroups(frame), Math.floor(i / survivalGroups(frame))];
      return {
        name: `survival of interval ${t + 1}, ${frame.strata[groups.indexOf(group)]}`,
        values: inGroup(frame, group, intervalColumn(frame, t).subarray(0, frame.intervals)),
      };
    });
    return assemble("each stratum and interval its own", [...indicators, ...contrastsWithin(frame, groups)]);
  }
  const indicators = Array.from({ length: occasionIntervals(frame) }, (_, t) => ({
    name: `survival of interval ${t + 1}`,
    values: intervalColumn(frame, t),
  }));
  return assemble("each interval its own", [...indicators, ...stratumColumns(frame, "survival")]);
}

export function constantRecapture(frame: Frame): Part {
  return assemble("constant", [{ name: "recapture", values: ONES(frame.strata.length * frame.intervals) }]);
}

export function occasionRecapture(frame: Frame): Part {
  const indicators = Array.from({ length: occasionIntervals(frame) }, (_, t) => ({
    name: `recapture at occasion ${t + 2}`,
    values: intervalColumn(frame, t),
  }));
  return assemble("each occasion its own", indicators);
}

/** logit p = α0 + α1 · effort, effort standardised over the recapture occasions. */
export function effortRecapture(frame: Frame, effort: Float64Array): Part {
  return assemble("by effort", [
    { name: "recapture at mean effort", values: ONES(frame.strata.length * frame.intervals) },
    { name: "effort (per sd)", values: overStrata(frame, effort) },
  ]);
}

/** logit p = α0 + Σ α_k x_k, the covariates of the interval that the occasion closes. */
export function covariateRecapture(frame: Frame, covariates: readonly NamedColumn[]): Part {
  return assemble(`by ${covariates.map((one) => one.name).join(" + ")}`, [
    { name: "recapture at mean covariates", values: ONES(frame.strata.length * frame.intervals) },
    ...covariates.map((one) => ({
      name: `recapture: ${one.name}`,
      values: overStrata(frame, one.values),
    })),
  ]);
}

/** A recapture part with differences between strata added to it. */
export function withStrata(frame: Frame, part: Part): Part {
  const contrasts = stratumColumns(frame, "recapture");
  return {
    words: part.words === "constant" ? "by stratum" : `${part.words}, by stratum`,
    names: [...part.names, ...contrasts.map((one) => `recapture: ${one.name}`)],
    columns: [...part.columns, ...contrasts.map((one) => one.values)],
  };
}
