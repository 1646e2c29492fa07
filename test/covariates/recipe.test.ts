import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Detrend, Transform } from "../../src/covariates/options.ts";
import { prepareCovariates } from "../../src/covariates/prepare.ts";
import { applyRecipe, effectPerUnit, outsideRange, undoRecipe } from "../../src/covariates/recipe.ts";
import { yearIndex } from "../../src/covariates/time.ts";
import { column } from "../../src/data/matrix.ts";
import { calendarYears, made, PLAIN } from "./made.ts";

const TRANSFORMS: (Transform | undefined)[] = [undefined, "log", "log1p", "square root", "logit"];
const DETRENDS: Detrend[] = ["none", "linear", "difference"];
const intervals = calendarYears(2000, 9);
const years = yearIndex(intervals);
const RAW = [0.2, 0.31, 0.12, 0.45, 0.6, 0.38, 0.71, 0.5, 0.9];

function recipeOf(transform: Transform | undefined, detrend: Detrend, raw = RAW) {
  const options = { ...PLAIN, detrend, transform: transform === undefined ? {} : { rain: transform } };
  const { matrix } = prepareCovariates([made("rain", raw)], intervals, options);
  return { recipe: matrix.recipes[0], standard: column(matrix.standard, 0) };
}

describe("apply and undo", () => {
  const cases = TRANSFORMS.flatMap((transform) => DETRENDS.map((detrend) => ({ transform, detrend })));
  test.each(cases)(
    "$transform, $detrend: applied to its own rows a recipe gives the matrix, and undone the values",
    ({ transform, detrend }) => {
      const { recipe, standard } = recipeOf(transform, detrend);
      // A differenced column begins with its second row, the first being known.
      const from = detrend === "difference" ? 1 : 0;
      const before = from === 1 ? RAW[0] : Number.NaN;
      const rows = RAW.slice(from);
      const again = applyRecipe(recipe, rows, years.slice(from), before);
      again.forEach((z, t) => {
        expect(z).toBeCloseTo(standard[t + from], 12);
      });
      undoRecipe(recipe, again, years.slice(from), before).forEach((value, t) => {
        expect(value).toBeCloseTo(rows[t], 11);
      });
    },
  );

  test("any new rows come back", () => {
    const rows = fc.array(fc.double({ min: 0.001, max: 0.999, noNaN: true }), { minLength: 1, maxLength: 9 });
    fc.assert(
      fc.property(rows, fc.constantFrom(...cases), (raw, { transform, detrend }) => {
        const { recipe } = recipeOf(transform, detrend);
        const z = applyRecipe(recipe, raw, years, 0.5);
        undoRecipe(recipe, z, years, 0.5).forEach((value, t) => {
          expect(Math.abs(value - raw[t])).toBeLessThan(1e-9);
        });
      }),
    );
  });

  test("next year's row lands on the recorded scale", () => {
    const { recipe } = recipeOf(undefined, "none");
    expect(applyRecipe(recipe, [recipe.centre + 2 * recipe.scale], [2009.5])[0]).toBeCloseTo(2, 12);
  });

  test("differences are not undone without a start", () => {
    const { recipe } = recipeOf(undefined, "difference");
    expect(() => undoRecipe(recipe, [0], [2001.5])).toThrow("differences add up only from a known value");
  });

  test("rows outside the recorded range are told, the ends are inside", () => {
    const { recipe } = recipeOf(undefined, "none");
    expect(outsideRange(recipe, [0.05, 0.12, 0.5, 0.9, 1.2, Number.NaN])).toEqual([0, 4]);
  });
});

describe("effects per original unit", () => {
  test("a step of one unit, or a doubling, moves the standardised value by what the effect says", () => {
    const beta = 0.7;
    const plain = recipeOf(undefined, "none").recipe;
    const step = applyRecipe(plain, [0.4, 1.4], years);
    expect(effectPerUnit(plain, beta)).toEqual({
      value: expect.closeTo(beta * (step[1] - step[0]), 12),
      per: "per mm",
    });
    const log = recipeOf("log", "none").recipe;
    const twice = applyRecipe(log, [0.3, 0.6], years);
    expect(effectPerUnit(log, beta)).toEqual({
      value: expect.closeTo(beta * (twice[1] - twice[0]), 12),
      per: "per doubling",
    });
    const log1p = recipeOf("log1p", "none").recipe;
    const grown = applyRecipe(log1p, [0.5, 2], years); // 1 + x from 1.5 to 3
    expect(effectPerUnit(log1p, beta).value).toBeCloseTo(beta * (grown[1] - grown[0]), 12);
    expect(effectPerUnit(recipeOf("square root", "none").recipe, beta).per).toContain("square root");
    expect(effectPerUnit(recipeOf("logit", "none").recipe, beta).per).toContain("logit");
  });
});
