import { describe, expect, test } from "vitest";
import { chooseOnPath } from "../../src/screen/choice.ts";
import { criteriaOf } from "../../src/screen/criterion.ts";
import type { LassoPath, PathStep } from "../../src/screen/path.ts";

const step = (lambda: number, active: readonly number[], minus2LogL: number): PathStep => ({
  lambda,
  estimates: new Float64Array(0),
  coefficients: new Float64Array(0),
  minus2LogL,
  objective: 0,
  active,
  residual: 0,
  stopped: "optimum",
});
const path: LassoPath = {
  lambdaMax: 4,
  weights: new Float64Array(2),
  steps: [step(4, [], 110), step(2, [0], 103), step(1, [0], 101), step(0.5, [0, 1], 100)],
};

describe("criteria by hand", () => {
  // −2 log L 100, k 4 of which 2 of K = 10 covariates, n 50, ĉ 1.6; log 50 = 3.912023, log C(10, 2) = log 45 = 3.806662
  const criteria = criteriaOf(
    { minus2LogL: 100, parameters: 4, active: 2 },
    { sampleSize: 50, covariates: 10, betweenAnimals: 1.6 },
  );

  test("BIC, AICc, extended BIC, QBIC, QAICc", () => {
    expect(criteria.bic).toBeCloseTo(100 + 4 * 3.912023, 5);
    expect(criteria.aicc).toBeCloseTo(100 + 8 + 40 / 45, 10);
    expect(criteria.extendedBic).toBeCloseTo(100 + 4 * 3.912023 + 3.806662, 5);
    expect(criteria.qbic).toBeCloseTo(62.5 + 5 * 3.912023, 5);
    expect(criteria.qaicc).toBeCloseTo(62.5 + 10 + 60 / 44, 10);
  });

  test("without ĉ a Q criterion is refused by name, with it QBIC at ĉ = 1 chooses as BIC does", () => {
    const step = (active: number[], minus2LogL: number) => ({
      lambda: 1,
      estimates: new Float64Array(0),
      coefficients: new Float64Array(3),
      minus2LogL,
      objective: 0,
      active,
      residual: 0,
      stopped: "optimum" as const,
    });
    const path = {
      lambdaMax: 1,
      weights: new Float64Array(3),
      steps: [step([], 120), step([0], 104), step([0, 1], 103)],
    };
    const none = () => Number.NaN;
    const choose = (options: Parameters<typeof chooseOnPath>[3]) =>
      chooseOnPath(path, 2, 60, options, none).index;
    expect(() => choose({ chooseBy: "QBIC", fit: "shrunken" })).toThrow("variance inflation between animals");
    expect(choose({ chooseBy: "QBIC", fit: "shrunken", betweenAnimals: 1 })).toBe(1);
    expect(choose({ chooseBy: "BIC", fit: "shrunken" })).toBe(1);
    // with ĉ = 6 the gain of 16 counts for less than its price of log 60
    expect(choose({ chooseBy: "QBIC", fit: "shrunken", betweenAnimals: 6 })).toBe(0);
  });
});

describe("choice on the path", () => {
  test("BIC = −2 log L + df·log n with df = selected + unpenalised (Schwarz 1978)", () => {
    const choice = chooseOnPath(path, 2, 100, { chooseBy: "BIC", fit: "shrunken" }, () => Number.NaN);
    expect(choice.rows.map((row) => row.bic)).toEqual([
      110 + 2 * Math.log(100),
      103 + 3 * Math.log(100),
      101 + 3 * Math.log(100),
      100 + 4 * Math.log(100),
    ]);
    expect(choice.index).toBe(2);
  });

  test("AICc = −2 log L + 2k + 2k(k+1)/(n − k − 1) (Hurvich & Tsai 1989), refused where it is nowhere defined", () => {
    const choice = chooseOnPath(path, 2, 10, { chooseBy: "AICc", fit: "shrunken" }, () => Number.NaN);
    expect(choice.rows[1].aicc).toBe(103 + 6 + 24 / 6);
    expect(() => chooseOnPath(path, 2, 3, { chooseBy: "AICc", fit: "shrunken" }, () => Number.NaN)).toThrow(
      "expected a sample size above the number of parameters plus 1, found AICc with n = 3 and 2 unpenalised parameters",
    );
  });

  test("ties go to the sparser model; the band holds every λ within 2 units", () => {
    const even: LassoPath = { ...path, steps: [step(4, [], 100), step(2, [0], 100 - Math.log(50))] };
    const choice = chooseOnPath(even, 2, 50, { chooseBy: "BIC", fit: "shrunken" }, () => Number.NaN);
    expect(choice.index).toBe(0);
    expect(choice.band).toEqual([0, 1]);
  });

  test("criteria at the refit use the refit's −2 log L", () => {
    const choice = chooseOnPath(path, 2, 100, { chooseBy: "BIC", fit: "refit" }, (set) =>
      set.length === 1 ? 90 : 120,
    );
    expect(choice.rows[1].bic).toBe(90 + 3 * Math.log(100));
    // of two steps with the same refit the earlier one is kept
    expect(choice.index).toBe(1);
  });
});
