import type { IntervalCovariate } from "../aggregate/result.ts";
import type { RawFinding } from "../data/finding.ts";
import { fromColumns } from "../data/matrix.ts";
import type { Interval } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import { mean, sampleSd } from "../math/quantile.ts";
import { checkNames, type RawColumn, rawColumns } from "./columns.ts";
import type { BaseValues, PrepareOptions } from "./options.ts";
import type { ColumnRecipe, LeftOut, Prepared } from "./result.ts";
import { differences, fitLine, type Line, withoutLine, yearIndex } from "./time.ts";
import { transformed } from "./transform.ts";

/** Fewest base years that give a mean and sd worth standardising by (methods §4). */
const LEAST_BASE_YEARS = 20;
/** A column whose sd is below this share of its largest value differs by rounding alone. */
const CONSTANT = 1e-12;

interface Column {
  readonly raw: RawColumn;
  readonly recipe: ColumnRecipe;
  readonly standard: Float64Array;
}

const present = (values: ArrayLike<number>): Float64Array =>
  Float64Array.from(values).filter((value) => !Number.isNaN(value));

const missingRows = (values: Float64Array): number[] =>
  Array.from(values.keys()).filter((t) => Number.isNaN(values[t]));

/** Missing cells in words: `2 of 20 intervals missing: 2003 to 2004 (Jan 2004: …); …`, the first three named. */
function missingText(raw: RawColumn, rows: readonly number[], intervals: readonly Interval[]): string {
  const told = rows.slice(0, 3).map((t) => `${intervals[t].name} (${raw.reasons[t] ?? "no value"})`);
  const more = rows.length > 3 ? `; and ${rows.length - 3} more` : "";
  return `${rows.length} of ${intervals.length} intervals missing: ${told.join("; ")}${more}`;
}

function refuseConstant(raw: RawColumn, values: Float64Array, options: PrepareOptions): never {
  const after = options.detrend === "none" ? "" : ` after detrending (${options.detrend})`;
  throw new InputError({
    name: "covariates.constant",
    expected: `values of ${raw.name} that differ between intervals`,
    found: `${values.length} times ${values[0]}${after}`,
    where: { cell: raw.name },
    remedy: "leave the covariate out, or choose another window or statistic",
  });
}

/** Mean and sd (n − 1) of the base years on the transformed scale. */
function baseMoments(raw: RawColumn, options: PrepareOptions): readonly [number, number] {
  const { standardise } = options;
  const years = standardise.type === "base" ? `${standardise.from} to ${standardise.to}` : "";
  const refuse = (name: string, expected: string, found: string, remedy: string): never => {
    throw new InputError({ name, expected, found, where: { cell: raw.name }, remedy });
  };
  if (options.detrend !== "none")
    return refuse(
      "covariates.base-detrend",
      "no detrending beside a base period",
      options.detrend,
      "standardise by the sample, or leave the trend in and put the year into both models",
    );
  if (raw.base === undefined)
    return refuse(
      "covariates.base-missing",
      `a season or calendar year, which every year of ${years} has`,
      "a window counted from occasions, or values without base years",
      "standardise by the sample, or give this covariate a season",
    );
  const values = present(
    transformed(raw.base, options.transform[raw.name], raw.name, (t) => `base year ${t + 1}`),
  );
  if (values.length < LEAST_BASE_YEARS)
    return refuse(
      "covariates.base-short",
      `at least ${LEAST_BASE_YEARS} complete years in the base ${years}`,
      String(values.length),
      "choose a longer base period, or standardise by the sample",
    );
  return [mean(values), sampleSd(values)];
}

/** The step that takes out a trend, and the line it took out. */
function detrended(
  values: Float64Array,
  years: Float64Array,
  options: PrepareOptions,
): { readonly values: Float64Array; readonly line: Line } {
  if (options.detrend === "linear") {
    const line = fitLine(years, values);
    return { values: withoutLine(line, years, values), line };
  }
  // The first interval has no difference; it is filled with the mean of the others below.
  if (options.detrend === "difference") return { values: differences(values, Number.NaN), line: [0, 0] };
  return { values, line: [0, 0] };
}

function constants(raw: RawColumn, values: Float64Array, options: PrepareOptions): readonly [number, number] {
  if (options.standardise.type === "none") return [0, 1];
  if (options.standardise.type === "base") return baseMoments(raw, options);
  return [mean(values), sampleSd(values)];
}

function prepareColumn(
  raw: RawColumn,
  years: Float64Array,
  intervals: readonly Interval[],
  options: PrepareOptions,
): Column {
  const transform = options.transform[raw.name];
  const shaped = transformed(raw.values, transform, raw.name, (t) => intervals[t].name);
  const { values: flat, line } = detrended(shaped, years, options);
  const filled = missingRows(flat);
  const centreOfRest = mean(present(flat));
  const full = flat.map((value) => (Number.isNaN(value) ? centreOfRest : value));
  // Against the values before detrending: what a perfect line leaves is rounding of their size.
  const size = present(shaped).reduce((most, value) => Math.max(most, Math.abs(value)), 0);
  if (!(sampleSd(full) > CONSTANT * size)) refuseConstant(raw, full, options);
  const [centre, scale] = constants(raw, full, options);
  if (!(scale > 0)) refuseConstant(raw, Float64Array.from(raw.base ?? full), options);
  const { name, theme, unit, definition } = raw;
  const known = present(raw.values);
  const recipe: ColumnRecipe = {
    name,
    theme,
    unit,
    definition,
    transform,
    detrend: options.detrend,
    trend: line,
    centre,
    scale,
    filled,
    range: [known.reduce((a, b) => Math.min(a, b)), known.reduce((a, b) => Math.max(a, b))],
  };
  return { raw, recipe, standard: full.map((value) => (value - centre) / scale) };
}

/** What the rule for missing cells makes of one column: kept, or left out with a finding. */
function missingFinding(
  raw: RawColumn,
  rows: readonly number[],
  intervals: readonly Interval[],
  options: PrepareOptions,
): RawFinding | undefined {
  if (rows.length === 0) return undefined;
  const text = missingText(raw, rows, intervals);
  const cell = `${raw.name}, ${intervals[rows[0]].name}`;
  if (options.incomplete === "stop")
    throw new InputError({
      name: "covariates.incomplete",
      expected: `a value of ${raw.name} in every interval`,
      found: text,
      where: { cell },
      remedy: "complete the records, or set `incomplete` to `leave out` or `mean`",
    });
  const filled = options.incomplete === "mean" && rows.length < intervals.length;
  const done = filled ? "filled with the column mean" : "the column leaves the matrix";
  return {
    kind: "incomplete-column",
    subject: raw.name,
    message: `${text}; ${done}`,
    where: { cell },
    count: rows.length,
    remedy: "complete the records, choose another window, or change `incomplete`",
  };
}

function firstDifference(intervals: readonly Interval[]): RawFinding {
  return {
    kind: "incomplete-column",
    subject: "all covariates",
    message: `${intervals[0].name} has no difference from an interval before it; filled with the mean difference`,
    where: { cell: intervals[0].name },
    count: 1,
    remedy: "detrend linearly, or put the year into both models, to keep the first interval's values",
  };
}

/**
 * The covariate matrix (methods §4): derive, transform, detrend, standardise, each step recorded per column. A
 * column with a missing cell leaves the matrix with a finding, is filled with the column mean (after detrending,
 * before standardising), or stops the run, as `incomplete` says; one without any value always leaves. Differencing
 * has no first interval, which is filled with the mean difference and recorded as such. Standardising by the sample
 * uses sd with n − 1; by a base period, the mean and sd of `base` (see `BaseValues`).
 *
 * Throws `covariates.constant`, `.impossible`, `.incomplete`, `.base-missing`, `.base-short`, `.base-detrend`,
 * `.unknown`, `.repeated`, `.rows`, `.derive-count`.
 */
export function prepareCovariates(
  covariates: readonly IntervalCovariate[],
  intervals: readonly Interval[],
  options: PrepareOptions,
  base?: BaseValues,
): Prepared {
  const raws = rawColumns(covariates, options.derive, intervals, base);
  checkNames(raws, Object.keys(options.transform), "prepare: transform");
  const years = yearIndex(intervals);
  const findings: RawFinding[] = [];
  const leftOut: LeftOut[] = [];
  const columns: Column[] = [];
  for (const raw of raws) {
    const rows = missingRows(raw.values);
    const finding = missingFinding(raw, rows, intervals, options);
    if (finding !== undefined) findings.push(finding);
    if (rows.length > 0 && (options.incomplete === "leave out" || rows.length === intervals.length))
      leftOut.push({ name: raw.name, reason: missingText(raw, rows, intervals) });
    else columns.push(prepareColumn(raw, years, intervals, options));
  }
  if (options.detrend === "difference" && columns.length > 0) findings.push(firstDifference(intervals));
  const matrix = {
    names: columns.map((one) => one.raw.name),
    recipes: columns.map((one) => one.recipe),
    rows: intervals.map((one) => one.name),
    raw: fromColumns(
      columns.map((one) => one.raw.values),
      intervals.length,
    ),
    standard: fromColumns(
      columns.map((one) => one.standard),
      intervals.length,
    ),
  };
  return { matrix, leftOut, findings };
}
