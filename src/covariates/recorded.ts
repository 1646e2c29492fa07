import { isoDay, parseIsoDay } from "../data/day.ts";
import type { Interval } from "../data/occasion.ts";
import { InputError } from "../errors.ts";
import type { Detrend, Transform } from "./options.ts";
import type { ColumnRecipe, CovariateMatrix } from "./result.ts";

/** The number of the layout of recorded recipes. */
const LAYOUT = 1;

/** One column's recipe with what the first new row may need of the last recorded one. */
export interface RecordedColumn extends ColumnRecipe {
  /** Value before the transform in the last recorded interval; NaN if it was missing. */
  readonly last: number;
}

/** How a covariate matrix was prepared, enough to put new intervals on the same scale. */
export interface RecordedPreparation {
  readonly columns: readonly RecordedColumn[];
  /** Name and end of the last recorded interval; the end is NaN where the intervals have no dates. */
  readonly lastInterval: string;
  readonly end: number;
}

/** The recipes of a matrix as plain JSON; missing numbers are null. `readPreparation` is its inverse. */
export function preparationJson(matrix: CovariateMatrix, intervals: readonly Interval[]): unknown {
  const { recipes, raw } = matrix;
  const at = intervals.length - 1;
  const orNull = (value: number) => (Number.isFinite(value) ? value : null);
  return {
    layout: LAYOUT,
    lastInterval: at < 0 ? "" : intervals[at].name,
    end: at >= 0 && Number.isFinite(intervals[at].end) ? isoDay(intervals[at].end) : null,
    columns: recipes.map((one, k) => ({
      name: one.name,
      theme: one.theme,
      unit: one.unit,
      definition: one.definition,
      transform: one.transform ?? null,
      detrend: one.detrend,
      trend: one.trend,
      centre: one.centre,
      scale: one.scale,
      filled: one.filled,
      range: one.range ?? null,
      last: at < 0 ? null : orNull(raw.data[at * raw.columns + k]),
    })),
  };
}

/** Reads recipes back. Throws `covariates.recipes-unreadable`. */
export function readPreparation(value: unknown, file: string): RecordedPreparation {
  if (
    !isObject(value) ||
    value.layout !== LAYOUT ||
    !Array.isArray(value.columns) ||
    !isText(value.lastInterval)
  )
    throw unreadable(file, "other contents");
  const columns = value.columns.map((one: unknown, k) => {
    const column = readColumn(one);
    if (column === undefined) throw unreadable(file, `column ${k + 1} with other contents`);
    return column;
  });
  const end = isText(value.end) ? parseIsoDay(value.end) : Number.NaN;
  return { columns, lastInterval: value.lastInterval, end };
}

const TRANSFORMS: readonly Transform[] = ["log", "log1p", "square root", "logit"];
const DETRENDS: readonly Detrend[] = ["none", "linear", "difference"];

function readColumn(one: unknown): RecordedColumn | undefined {
  if (!isObject(one)) return undefined;
  const { name, theme, unit, definition, trend, centre, scale, filled, range, last } = one;
  const transform = TRANSFORMS.find((each) => each === one.transform);
  const detrend = DETRENDS.find((each) => each === one.detrend);
  const texts = isText(name) && isText(theme) && isText(unit) && isText(definition);
  if (!texts || detrend === undefined || (transform === undefined && one.transform !== null))
    return undefined;
  if (!isPair(trend) || !isNumber(centre) || !isNumber(scale) || !(scale > 0)) return undefined;
  if (!Array.isArray(filled) || !filled.every(isNumber)) return undefined;
  const recipe = { name, theme, unit, definition, transform, detrend, trend, centre, scale, filled };
  const known = isPair(range) ? { range } : {};
  return { ...recipe, ...known, last: isNumber(last) ? last : Number.NaN };
}

function isObject(value: unknown): value is Readonly<Record<string, unknown>> {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}

function isText(value: unknown): value is string {
  return typeof value === "string";
}

function isNumber(value: unknown): value is number {
  return typeof value === "number" && Number.isFinite(value);
}

function isPair(value: unknown): value is readonly [number, number] {
  return Array.isArray(value) && value.length === 2 && value.every(isNumber);
}

function unreadable(file: string, found: string): InputError {
  return new InputError({
    name: "covariates.recipes-unreadable",
    expected: `recorded recipes of layout ${LAYOUT}`,
    found,
    where: { file },
    remedy: "run the earlier pipeline again with this version, so that it records its recipes",
  });
}
