import { describe, expect, test } from "vitest";
import { silentProgress } from "../../src/effects/effects.ts";
import { permuteYears } from "../../src/screen/permutation.ts";
import { runProcedure } from "../../src/screen/procedure.ts";
import { PERMUTATION_TASK, screen } from "../../src/screen/screen.ts";
import { drawStudy, inProcess, SCREEN } from "../support/study.ts";

const effects = {
  progress: silentProgress,
  parallel: inProcess({ [PERMUTATION_TASK]: permuteYears }),
};
const shape = { intervals: 20, covariates: 6, marked: 40, residual: 0.1 };

describe("the screen", () => {
  test("two strong covariates are found by animals and by years, with certificates and agreeing starts", async () => {
    const { problem, recapture } = drawStudy(1, shape, [-0.8, 0.8]);
    const { result, findings } = await screen(problem, recapture, SCREEN, 800, 1, effects);
    expect(result.byYears.names).toEqual(["x1", "x2"]);
    expect(result.byAnimals.names).toEqual(expect.arrayContaining(["x1", "x2"]));
    expect(result.starts).toEqual({ starts: 12, agree: 12, best: expect.closeTo(0, 6) });
    expect(Math.max(...result.path.steps.map((step) => step.residual))).toBeLessThanOrEqual(1e-8);
    expect(result.permutation?.p).toBe(1 / 20);
    expect(result.byYears.deviance.share).toBeGreaterThan(0.8);
    expect(findings.filter((one) => one.kind === "not-separable")).toEqual([]);
  });

  test("where nothing is to be found and nothing is chosen, p is 1", async () => {
    const { problem, recapture } = drawStudy(4, { ...shape, residual: 0.4 }, []);
    const { result } = await screen(problem, recapture, SCREEN, 800, 1, effects);
    expect(result.byYears.names).toEqual([]);
    expect(result.permutation?.p).toBe(1);
  });

  test("permutations do not depend on how replicates are cut into chunks", () => {
    const { problem, recapture } = drawStudy(2, { ...shape, intervals: 12 }, [-0.6]);
    const setting = {
      intervals: 12,
      covariates: 6,
      interval: {
        minus2LogL: recapture.intervalFit.minus2LogL,
        parameters: recapture.intervalFit.parameters,
      },
      constantParameters: 2,
      sampleSize: 700,
    };
    const chunk = (from: number, to: number) =>
      permuteYears({ problem, setting, options: SCREEN, seed: 3, from, to });
    expect([...chunk(0, 2), ...chunk(2, 5)]).toEqual(chunk(0, 5));
    expect(chunk(0, 5).some((one) => one.gain === 0)).toBe(true);
  });

  test("the order of the covariates changes nothing but the order", () => {
    const { problem, recapture } = drawStudy(3, shape, [-0.7, 0.7]);
    const setting = {
      intervals: 20,
      covariates: 6,
      interval: {
        minus2LogL: recapture.intervalFit.minus2LogL,
        parameters: recapture.intervalFit.parameters,
      },
      constantParameters: 2,
      sampleSize: 1500,
    };
    const turned = { ...problem, covariates: [...problem.covariates].reverse() };
    const [a, b] = [runProcedure(problem, setting, SCREEN), runProcedure(turned, setting, SCREEN)];
    expect(b.byYears.chosen.map((k) => 5 - k).sort()).toEqual([...a.byYears.chosen]);
    expect(b.byAnimals.map((k) => 5 - k).sort()).toEqual([...a.byAnimals]);
    expect(b.path.lambdaMax).toBeCloseTo(a.path.lambdaMax, 8);
    a.path.steps.forEach((step, i) => {
      step.coefficients.forEach((value, k) => {
        expect(Math.abs(b.path.steps[i].coefficients[5 - k] - value)).toBeLessThan(1e-7);
      });
    });
  });
});
