import { describe, expect, test } from "vitest";
import { leaveOneIntervalOut, withoutInterval } from "../../src/screen/influence.ts";
import { outcomeInOrder, shiftYears } from "../../src/screen/permutation.ts";
import { designWith } from "../../src/screen/problem.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { drawStudy, SCREEN } from "../support/study.ts";

const { problem, recapture } = drawStudy(
  1,
  { intervals: 16, covariates: 3, marked: 40, residual: 0.1 },
  [-0.8],
);
const setting = {
  intervals: 16,
  covariates: 3,
  interval: { minus2LogL: recapture.intervalFit.minus2LogL, parameters: recapture.intervalFit.parameters },
  constantParameters: 2,
  sampleSize: 1500,
};

describe("leaving one interval out", () => {
  test("its survival is then its own: the fit there does not depend on the covariates' values in it", () => {
    const one = withoutInterval(problem, 4);
    const moved = {
      ...problem,
      covariates: problem.covariates.map(({ name, values }) => ({
        name,
        values: values.map((v, t) => (t === 4 ? 99 : v)),
      })),
    };
    const [a, b] = [one, withoutInterval(moved, 4)].map((each) => fitModel(each.data, designWith(each)));
    expect(b.minus2LogL).toBeCloseTo(a.minus2LogL, 9);
    expect(one.covariates[0].values[4]).toBe(0);
  });

  test("a strong covariate stands whichever interval is left out", () => {
    const rows = leaveOneIntervalOut(problem, setting, SCREEN);
    expect(rows).toHaveLength(16);
    expect(rows.every((row) => row.byYears.includes("x1"))).toBe(true);
  });
});

describe("circular shifts", () => {
  test("the unshifted order gives the observed gain; the share counts it, so it is at least 1/n", () => {
    const study = { problem, setting, options: SCREEN };
    const observed = outcomeInOrder(
      study,
      Int32Array.from({ length: 16 }, (_, t) => t),
    );
    expect(observed.chosenByYears).toBe(1);
    const share = shiftYears(study, observed.gain);
    expect(share).toBeGreaterThanOrEqual(1 / 16);
    expect(share).toBeLessThan(0.3);
    expect(shiftYears(study, 0)).toBe(1);
  });
});
