import type { ColumnRecipe, CovariateMatrix } from "../covariates/result.ts";

/** What was done to a covariate of a model, whether it has a column in the matrix or is one by stratum. */
export function recipeNamed(matrix: CovariateMatrix, name: string): ColumnRecipe | undefined {
  return (
    matrix.recipes.find((one) => one.name === name) ??
    matrix.byStratum?.find((one) => one.recipe.name === name)?.recipe
  );
}
