import { expect, test } from "vitest";
import { joinStrata } from "../../src/covariates/by-stratum.ts";
import type { ColumnRecipe, CovariateMatrix } from "../../src/covariates/result.ts";
import { fromColumns } from "../../src/data/matrix.ts";
import { mean, sampleSd } from "../../src/math/quantile.ts";

const north = [42, 71, 18, 95];
const south = [12, 9, 25, 4];
const recipe = (name: string, values: readonly number[], unit = "cm"): ColumnRecipe => ({
  name,
  theme: "snow",
  unit,
  definition: `mean of ${name}`,
  transform: undefined,
  detrend: "none",
  trend: [0, 0],
  centre: mean(values),
  scale: sampleSd(values),
  filled: [],
  range: [Math.min(...values), Math.max(...values)],
});
const standard = (values: readonly number[]) =>
  values.map((value) => (value - mean(values)) / sampleSd(values));
const matrix: CovariateMatrix = {
  names: ["north", "south", "same"],
  recipes: [recipe("north", north), recipe("south", south), recipe("same", south, "mm")],
  rows: ["a", "b", "c", "d"],
  raw: fromColumns([north, south, south], 4),
  standard: fromColumns([standard(north), standard(south), standard(south)], 4),
};
const strata = ["site: north", "site: south"];

test("standardised over strata and intervals together, in the order of the strata", () => {
  const joined = joinStrata(matrix, "snow", strata, ["north", "south"], { type: "sample" });
  const all = [...north, ...south];
  // mean and sd (n − 1) of the eight values: 34.5 and √(7498/7) by hand
  expect(joined.recipe.centre).toBeCloseTo(34.5, 12);
  expect(joined.recipe.scale).toBeCloseTo(Math.sqrt(7498 / 7), 10);
  all.forEach((value, r) => {
    expect(joined.recipe.centre + joined.recipe.scale * joined.values[r]).toBeCloseTo(value, 12);
  });
  expect(mean(joined.values)).toBeCloseTo(0, 12);
  expect(sampleSd(joined.values)).toBeCloseTo(1, 12);
  expect(joined.recipe.range).toEqual([4, 95]);
  expect(joined.recipe.definition).toBe("site: north: mean of north; site: south: mean of south");
});

test("unstandardised values stay in their unit", () => {
  const { values } = joinStrata(matrix, "snow", strata, ["north", "south"], { type: "none" });
  [...north, ...south].forEach((value, r) => {
    expect(values[r]).toBeCloseTo(value, 12);
  });
});

test("unlike units and a covariate that left the matrix are refused by name", () => {
  const join = (parts: readonly string[]) => () =>
    joinStrata(matrix, "snow", strata, parts, { type: "sample" });
  expect(join(["north", "same"])).toThrow("expected one unit in all strata, found north in cm, same in mm");
  expect(join(["north", "gone"])).toThrow("found gone, which was left out for missing values");
});
