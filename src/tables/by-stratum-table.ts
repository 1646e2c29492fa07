import { number, text } from "./columns.ts";
import type { StudyResult } from "./study-result.ts";
import type { Table } from "./table.ts";

/** Covariates whose values differ between strata: a row per covariate, stratum and interval; undefined without any. */
export function byStratumTable({ matrix, intervals }: StudyResult): Table | undefined {
  if (matrix.byStratum === undefined) return undefined;
  return {
    name: "covariates-by-stratum",
    title: "Covariates by stratum",
    description:
      "Covariates put together from others, one for each stratum: values after transform and detrending, and standardised over all strata and intervals together, as the models have them.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      text("stratum", "stratum", "stratum of animals"),
      text("interval", "interval", "name of the interval"),
      text("made_from", "made from", "the covariate that gives the stratum its values"),
      number("value", "value", "as in unit", "after transform and detrending"),
      text("unit", "unit", "unit before the transform"),
      number("standardised", "standardised value", "sd", "as the models have it"),
    ],
    rows: matrix.byStratum.flatMap(({ recipe, strata, parts, values }) =>
      strata.flatMap((stratum, g) =>
        intervals.map((interval, t) => {
          const z = values[g * intervals.length + t];
          const value = recipe.centre + recipe.scale * z;
          return [recipe.name, stratum, interval.name, parts[g], value, recipe.unit, z];
        }),
      ),
    ),
  };
}
