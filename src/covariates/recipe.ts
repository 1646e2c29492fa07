import { InputError } from "../errors.ts";
import type { ColumnRecipe } from "./result.ts";
import { differences, withoutLine } from "./time.ts";
import { backTransformed, transformed } from "./transform.ts";

/**
 * New rows of a column on the recorded scale: transform, detrend, (x − centre) / scale.
 *
 * @param raw values in the original unit, in order of time
 * @param years their times as `yearIndex` gives them
 * @param before for a differenced column, the value in the interval before the first of `raw`
 * @param rowName how an error names row t
 */
export function applyRecipe(
  recipe: ColumnRecipe,
  raw: ArrayLike<number>,
  years: ArrayLike<number>,
  before = Number.NaN,
  rowName: (t: number) => string = (t) => `row ${t + 1}`,
): Float64Array {
  const shaped = transformed(raw, recipe.transform, recipe.name, rowName);
  const flat =
    recipe.detrend === "difference"
      ? differences(shaped, transformed([before], recipe.transform, recipe.name, () => "the row before")[0])
      : recipe.detrend === "linear"
        ? withoutLine(recipe.trend, years, shaped)
        : shaped;
  return flat.map((value) => (value - recipe.centre) / recipe.scale);
}

/**
 * Standardised values back to the original unit: the inverse of `applyRecipe`. A differenced column needs the value
 * `before` its first row; throws `covariates.no-start` without it.
 */
export function undoRecipe(
  recipe: ColumnRecipe,
  standard: ArrayLike<number>,
  years: ArrayLike<number>,
  before = Number.NaN,
): Float64Array {
  const { centre, scale, transform, detrend, trend } = recipe;
  const flat = Float64Array.from(standard, (z) => z * scale + centre);
  if (detrend === "difference") {
    if (Number.isNaN(before))
      throw new InputError({
        name: "covariates.no-start",
        expected: `the value of ${recipe.name} before the first row`,
        found: "none",
        where: { cell: recipe.name },
        remedy: "differences add up only from a known value: give it",
      });
    let level = transformed([before], transform, recipe.name, () => "the row before")[0];
    return flat.map((step) => {
      level += step;
      return backTransformed(level, transform);
    });
  }
  return flat.map((value, t) =>
    backTransformed(detrend === "linear" ? value + trend[0] + trend[1] * years[t] : value, transform),
  );
}

/** An effect in terms a reader can use. */
interface UnitEffect {
  readonly value: number;
  /** What it is per, e.g. `per mm`, `per doubling`. */
  readonly per: string;
}

/**
 * An effect per standard deviation as one per original unit: β / scale; after a log, per doubling, β ln 2 / scale
 * (of 1 + x after log1p). After a square root or a logit, whose unit step depends on where one stands, it is per
 * unit of the transformed value.
 */
export function effectPerUnit(recipe: ColumnRecipe, perSd: number): UnitEffect {
  const per = perSd / recipe.scale;
  const unit = recipe.unit === "1" || recipe.unit === "" ? "unit" : recipe.unit;
  switch (recipe.transform) {
    case "log":
      return { value: per * Math.LN2, per: "per doubling" };
    case "log1p":
      return { value: per * Math.LN2, per: "per doubling of 1 + value" };
    case "square root":
      return { value: per, per: `per unit of the square root (${unit})` };
    case "logit":
      return { value: per, per: "per unit of the logit" };
    case undefined:
      return { value: per, per: `per ${unit}` };
  }
}

/** Rows whose raw value lies outside what the recipe was made on, with the recorded range. */
export function outsideRange(recipe: ColumnRecipe, raw: ArrayLike<number>): number[] {
  const { range } = recipe;
  if (range === undefined) return [];
  return Array.from({ length: raw.length }, (_, t) => t).filter(
    (t) => raw[t] < range[0] || raw[t] > range[1],
  );
}
