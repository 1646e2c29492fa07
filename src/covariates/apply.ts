import type { RawFinding } from "../data/finding.ts";
import { fromColumns } from "../data/matrix.ts";
import type { Interval } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import { nearestName } from "../math/nearest-name.ts";
import type { RawColumn } from "./columns.ts";
import { applyRecipe, outsideRange } from "./recipe.ts";
import type { RecordedColumn, RecordedPreparation } from "./recorded.ts";
import type { CovariateMatrix, LeftOut } from "./result.ts";
import { yearIndex } from "./time.ts";

/** A new value outside the range that the recipe was made on. */
export interface OutOfRange {
  readonly covariate: string;
  readonly interval: string;
  readonly value: number;
  readonly unit: string;
  readonly least: number;
  readonly greatest: number;
  /** On the recorded scale. */
  readonly standard: number;
}

export interface Applied {
  readonly matrix: CovariateMatrix;
  readonly outside: readonly OutOfRange[];
  /** New covariates that have no recorded recipe. */
  readonly leftOut: readonly LeftOut[];
  readonly findings: readonly RawFinding[];
}

/**
 * New intervals on the recorded scale (methods §4): each recorded column is transformed, detrended, centred and divided
 * by the constants that were recorded, never by its own. A missing value stays missing. Linear trends go on along the
 * recorded line; a differenced column needs the interval before its first, which is the last recorded one if the new
 * intervals follow it. Findings: `out-of-range`, `definition-differs`, `incomplete-column`.
 *
 * Throws `covariates.apply-missing`, `.apply-unit`, `.apply-undated`, and `.impossible` for a value that the recorded
 * transform has no answer to.
 */
export function applyPreparation(
  recorded: RecordedPreparation,
  columns: readonly RawColumn[],
  intervals: readonly Interval[],
): Applied {
  const years = yearIndex(intervals);
  const follows = intervals.length > 0 && intervals[0].start === recorded.end;
  const findings: RawFinding[] = [];
  const outside: OutOfRange[] = [];
  const done = recorded.columns.map((recipe) => {
    const raw = columnFor(recipe, columns);
    if (raw.definition !== recipe.definition) findings.push(definitionFinding(recipe, raw));
    if (recipe.detrend === "linear" && intervals.some((one) => !Number.isFinite(one.start + one.end)))
      throw undated(recipe);
    const before = follows ? recipe.last : Number.NaN;
    const standard = applyRecipe(recipe, raw.values, years, before, (t) => intervals[t].name);
    if (recipe.detrend === "difference" && Number.isNaN(before))
      findings.push(startFinding(recipe, recorded, intervals));
    const [least, greatest] = recipe.range ?? [Number.NaN, Number.NaN];
    const out = outsideRange(recipe, raw.values).map((t) => ({
      covariate: recipe.name,
      interval: intervals[t].name,
      value: raw.values[t],
      unit: recipe.unit,
      least,
      greatest,
      standard: standard[t],
    }));
    outside.push(...out);
    if (out.length > 0) findings.push(rangeFinding(out, intervals.length));
    return { raw: raw.values, standard };
  });
  const known = new Set(recorded.columns.map((one) => one.name));
  const rows = intervals.length;
  return {
    matrix: {
      names: recorded.columns.map((one) => one.name),
      recipes: recorded.columns.map(({ last: _, ...recipe }) => ({ ...recipe, filled: [] })),
      rows: intervals.map((one) => one.name),
      raw: fromColumns(
        done.map((one) => one.raw),
        rows,
      ),
      standard: fromColumns(
        done.map((one) => one.standard),
        rows,
      ),
    },
    outside,
    leftOut: columns
      .filter((one) => !known.has(one.name))
      .map(({ name }) => ({ name, reason: "it has no recorded recipe" })),
    findings,
  };
}

function columnFor(recipe: RecordedColumn, columns: readonly RawColumn[]): RawColumn {
  const { name, unit } = recipe;
  const column = columns.find((one) => one.name === name);
  if (column === undefined) {
    const names = columns.map((one) => one.name);
    const near = nearestName(name, names);
    throw new InputError({
      name: "covariates.apply-missing",
      expected: `a covariate named ${JSON.stringify(name)}, as in the recorded preparation`,
      found: names.map((one) => JSON.stringify(one)).join(", "),
      where: { cell: "covariates" },
      remedy:
        near === undefined
          ? "add it to the new pipeline, as it was"
          : `rename ${JSON.stringify(near)} if it is the same`,
    });
  }
  if (column.unit !== unit)
    throw new InputError({
      name: "covariates.apply-unit",
      expected: `${name} in ${unit}, as recorded`,
      found: column.unit,
      where: { cell: name },
      remedy: "write the recorded unit: the constants hold for no other",
    });
  return column;
}

function undated({ name }: RecordedColumn): InputError {
  return new InputError({
    name: "covariates.apply-undated",
    expected: `intervals with dates, since the recorded preparation of ${name} takes out a trend`,
    found: "intervals without dates",
    where: { cell: name },
    remedy: "give the occasions dates",
  });
}

function definitionFinding(recipe: RecordedColumn, raw: RawColumn): RawFinding {
  return {
    kind: "definition-differs",
    subject: recipe.name,
    message: `recorded as "${recipe.definition}", now "${raw.definition}": the recorded constants may not hold`,
    where: { cell: recipe.name },
    remedy: "define the covariate as it was, or warn of it if the two mean the same",
  };
}

function startFinding(
  recipe: RecordedColumn,
  recorded: RecordedPreparation,
  intervals: readonly Interval[],
): RawFinding {
  const first = intervals.length > 0 ? intervals[0].name : "the first";
  return {
    kind: "incomplete-column",
    subject: recipe.name,
    message: `${first} does not follow ${recorded.lastInterval}, the last recorded interval, so it has no difference`,
    where: { cell: `${recipe.name}, ${first}` },
    count: 1,
    remedy: "begin the new intervals where the recorded ones end",
  };
}

function rangeFinding(out: readonly OutOfRange[], intervals: number): RawFinding {
  const [{ covariate, unit, least, greatest }] = out;
  const short = (value: number) => String(Number(value.toPrecision(5)));
  const told = out.slice(0, 3).map((one) => `${one.interval} (${short(one.value)})`);
  const more = out.length > 3 ? `; and ${out.length - 3} more` : "";
  return {
    kind: "out-of-range",
    subject: covariate,
    message:
      `${out.length} of ${intervals} intervals lie outside the recorded ${short(least)} to ${short(greatest)} ${unit}: ` +
      `${told.join("; ")}${more}; what was fitted says nothing there`,
    where: { cell: `${covariate}, ${out[0].interval}` },
    count: out.length,
    remedy: "take predictions for these intervals as extrapolation",
  };
}
