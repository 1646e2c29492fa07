import { describe, expect, test } from "vitest";
import { chooseOnPath } from "../../src/screen/choice.ts";
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
