import { column } from "../data/matrix.ts";
import { InputError } from "../errors.ts";
import { mean, sampleSd } from "../math/quantile.ts";
import type { Standardise } from "./options.ts";
import type { ColumnRecipe, CovariateMatrix, StratumColumn } from "./result.ts";

/**
 * One covariate from columns of the matrix, a column for each stratum: what they are after transform and detrending,
 * x = centre + scale · z of each, standardised anew over all G·n rows (sd with n − 1), so that an effect per sd is the same
 * change of the covariate in every stratum.
 *
 * @param parts the column of each stratum
 * Throws `survival.stratum-left-out`, `survival.strata-units` and `covariates.constant`.
 */
export function joinStrata(
  matrix: CovariateMatrix,
  name: string,
  strata: readonly string[],
  parts: readonly string[],
  standardise: Standardise,
): StratumColumn {
  const places = parts.map((part) => {
    const k = matrix.names.indexOf(part);
    if (k < 0) throw leftOut(name, part);
    return k;
  });
  const recipes = places.map((k) => matrix.recipes[k]);
  const units = new Set(recipes.map((one) => one.unit));
  if (units.size > 1) throw unequalUnits(name, recipes);
  const n = matrix.standard.rows;
  const joined = new Float64Array(strata.length * n);
  places.forEach((k, g) => {
    const { centre, scale } = matrix.recipes[k];
    joined.set(
      column(matrix.standard, k).map((z) => centre + scale * z),
      g * n,
    );
  });
  const [centre, scale] = standardise.type === "none" ? [0, 1] : [mean(joined), sampleSd(joined)];
  if (!(scale > 0)) throw constant(name, joined[0]);
  const [first] = recipes;
  const recipe: ColumnRecipe = {
    ...first,
    name,
    definition: strata.map((stratum, g) => `${stratum}: ${recipes[g].definition}`).join("; "),
    trend: [0, 0],
    centre,
    scale,
    filled: [],
    ...rangeOf(recipes),
  };
  return { recipe, strata, parts, values: joined.map((value) => (value - centre) / scale) };
}

function rangeOf(recipes: readonly ColumnRecipe[]): Pick<ColumnRecipe, "range"> {
  const ranges = recipes.flatMap((one) => (one.range === undefined ? [] : [one.range]));
  if (ranges.length < recipes.length) return {};
  return { range: [Math.min(...ranges.map(([low]) => low)), Math.max(...ranges.map(([, high]) => high))] };
}

function leftOut(name: string, part: string): InputError {
  return new InputError({
    name: "survival.stratum-left-out",
    expected: "every covariate that gives a stratum its values in the matrix",
    found: `${part}, which was left out for missing values`,
    where: { cell: `survival > covariates by stratum > ${name}` },
    remedy: "choose another window or rule of completeness, or prepare: { incomplete: mean }",
  });
}

function unequalUnits(name: string, recipes: readonly ColumnRecipe[]): InputError {
  return new InputError({
    name: "survival.strata-units",
    expected: "one unit in all strata",
    found: recipes.map((one) => `${one.name} in ${one.unit}`).join(", "),
    where: { cell: `survival > covariates by stratum > ${name}` },
    remedy: "give the covariates the same unit",
  });
}

function constant(name: string, value: number): InputError {
  return new InputError({
    name: "covariates.constant",
    expected: `values of ${name} that differ between strata or intervals`,
    found: `always ${value}`,
    where: { cell: `survival > covariates by stratum > ${name}` },
    remedy: "leave the covariate out, or choose another window or statistic",
  });
}
