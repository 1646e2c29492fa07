import type { ColumnRecipe } from "../covariates/result.ts";
import type { RefittedSet, ScreenResult } from "../screen/screen.ts";
import { number, text, truth } from "./columns.ts";
import { recipeNamed } from "./recipe-named.ts";
import type { StudyResult } from "./study-result.ts";
import type { Table } from "./table.ts";

const SETS = [
  ["chosen by years", "byYears"],
  ["chosen by animals", "byAnimals"],
] as const;

function recipeOf(study: StudyResult, name: string): ColumnRecipe | undefined {
  return recipeNamed(study.matrix, name);
}

/** What a coefficient per sd is per unit of the covariate: only where the column was not transformed. */
function perUnit(recipe: ColumnRecipe | undefined, perSd: number): number | undefined {
  return recipe === undefined || recipe.transform !== undefined ? undefined : perSd / recipe.scale;
}

/** β ln 2/scale: what doubling the covariate does, after a logarithm. */
function perDoubling(recipe: ColumnRecipe | undefined, perSd: number): number | undefined {
  return recipe?.transform === "log" ? (perSd * Math.LN2) / recipe.scale : undefined;
}

/** Effects of what was chosen and what was forced in, refitted without penalty, in three units. */
export function refitEffectsTable(study: StudyResult, screened: ScreenResult): Table {
  const inflation = screened.options.betweenAnimals;
  const rowsOf = (model: string, set: RefittedSet) =>
    set.profiles.map(({ name, estimate, low, high }) => {
      const recipe = recipeOf(study, name);
      const se = set.fit.se[set.fit.names.indexOf(name)];
      return [
        model,
        name,
        set.names.includes(name),
        estimate,
        se,
        se * Math.sqrt(Math.max(1, inflation ?? 1)),
        low,
        high,
        Math.exp(estimate),
        perUnit(recipe, estimate),
        perUnit(recipe, low),
        perUnit(recipe, high),
        recipe?.transform === undefined ? recipe?.unit : undefined,
        perDoubling(recipe, estimate),
        perDoubling(recipe, low),
        perDoubling(recipe, high),
      ];
    });
  return {
    name: "refit-effects",
    title: "Effects after selection, refitted without penalty",
    description: `On logit apparent annual survival, with 95 % profile-likelihood intervals${inflation === undefined ? "" : `, widened by the variance inflation between animals (${Number(inflation.toPrecision(4))})`}. Intervals of what these data chose take the choice as made before looking and so are too narrow. An empty end: not determined; an infinite one: the likelihood never falls far enough.`,
    columns: [
      text("model", "model", "which choice"),
      text("covariate", "covariate", "name of the covariate"),
      truth("chosen", "chosen", "chosen on these data; otherwise always in the model"),
      number("effect", "effect", "logit per sd", "estimate"),
      number("se", "se", "logit per sd", "standard error; empty at a bound"),
      number("se_widened", "se, widened", "logit per sd", "times the root of the inflation between animals"),
      number("low", "low", "logit per sd", "lower end of the profile interval"),
      number("high", "high", "logit per sd", "upper end of the profile interval"),
      number("odds_ratio", "odds of surviving times", "per sd", "e to the effect"),
      number("effect_per_unit", "effect per unit", "logit per unit", "without transform only"),
      number("low_per_unit", "low per unit", "logit per unit", "lower end"),
      number("high_per_unit", "high per unit", "logit per unit", "upper end"),
      text("unit", "unit", "the unit"),
      number("effect_per_doubling", "effect per doubling", "logit", "after a logarithm only"),
      number("low_per_doubling", "low per doubling", "logit", "lower end"),
      number("high_per_doubling", "high per doubling", "logit", "upper end"),
    ],
    rows: SETS.flatMap(([model, key]) => rowsOf(model, screened[key])),
  };
}

/** The covariate's own value of a standardised one: undone to before the transform; NaN where that cannot be. */
function original(recipe: ColumnRecipe | undefined, standard: number): number | undefined {
  if (recipe === undefined) return undefined;
  const value = recipe.centre + recipe.scale * standard;
  switch (recipe.transform) {
    case undefined:
      return value;
    case "log":
      return Math.exp(value);
    case "log1p":
      return Math.expm1(value);
    case "square root":
      return value < 0 ? undefined : value * value;
    case "logit":
      return 1 / (1 + Math.exp(-value));
  }
}

/** Predicted survival over each covariate's observed range, the others at their mean. */
export function predictedSurvivalTable(study: StudyResult, screened: ScreenResult): Table {
  return {
    name: "predicted-survival",
    title: "Predicted apparent annual survival along each covariate",
    description:
      "All other covariates at their mean. Rows that are not observed lie beyond every value the study has: nothing in the data speaks of survival there. A detrended covariate is told as its departure from the trend.",
    columns: [
      text("model", "model", "which choice"),
      text("covariate", "covariate", "name of the covariate"),
      text("stratum", "stratum", "stratum of animals"),
      number("standardised", "standardised value", "sd", "as in the matrix"),
      number("value", "value", "as in unit", "before standardising and transform"),
      text("unit", "unit", "unit of the value"),
      number("survival", "apparent annual survival", "per year", "prediction"),
      number("low", "low", "per year", "lower end of the 95 % band, on the logit scale"),
      number("high", "high", "per year", "upper end of the 95 % band, on the logit scale"),
      truth("observed", "observed", "within the range of the values observed"),
    ],
    rows: SETS.flatMap(([model, key]) =>
      screened[key].predicted.flatMap(({ name, points }) => {
        const recipe = recipeOf(study, name);
        return points.map((one) => [
          model,
          name,
          one.stratum,
          one.value,
          original(recipe, one.value),
          recipe?.unit,
          one.survival,
          one.low,
          one.high,
          one.observed,
        ]);
      }),
    ),
  };
}
