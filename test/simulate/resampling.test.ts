import { describe, expect, test } from "vitest";
import { conditionalDesign, randomIntervalDesign } from "../../src/simulate/resampled-worlds.ts";
import { resampleStudies, summarise } from "../../src/simulate/resampling.ts";
import { fitRandomInterval } from "../../src/survival/random-interval.ts";
import { drawStudy, SCREEN } from "../support/study.ts";

const { problem, recapture } = drawStudy(
  1,
  { intervals: 14, covariates: 3, marked: 40, residual: 0.2 },
  [-0.8],
);

describe("worlds that a study is drawn again from", () => {
  test("new years: the linear predictors of the random-interval model, effects of years at 0", () => {
    const [intercept, slope, p] = fitRandomInterval(problem, [0]).coefficients.map((one) => one.estimate);
    const [stratum] = randomIntervalDesign(problem, [0]).strata;
    problem.covariates[0].values.forEach((x, t) => {
      expect(stratum.baseline[t]).toBeCloseTo(intercept + slope * x, 12);
      expect(stratum.recapture[t]).toBeCloseTo(1 / (1 + Math.exp(-p)), 12);
    });
    expect(stratum.marked).toEqual(new Float64Array(14).fill(40));
    // the null has no covariate in it
    expect(new Set(randomIntervalDesign(problem, []).strata[0].baseline).size).toBe(1);
  });

  test("same years: every year's own survival", () => {
    const [stratum] = conditionalDesign(problem, recapture.intervalFit).strata;
    recapture.intervalFit.survival.forEach((one, t) => {
      expect(1 / (1 + Math.exp(-stratum.baseline[t]))).toBeCloseTo(Math.min(0.999, one.value), 10);
    });
  });
});

describe("resampling", () => {
  const chunk = (world: readonly number[], residual: number, from: number, to: number) => ({
    design: randomIntervalDesign(problem, world),
    residual,
    options: { ...SCREEN, steps: 20 },
    seed: 3,
    stream: `test ${world}`,
    from,
    to,
  });

  test("a strong effect comes back with its direction, and hardly anything from the null", () => {
    const strong = resampleStudies(chunk([0], 0.2, 0, 10));
    const found = strong.filter((one) =>
      one.byYears.some((pick) => pick.covariate === 0 && pick.sign === -1),
    );
    expect(found.length).toBeGreaterThanOrEqual(8);
    const none = resampleStudies(chunk([], 0.4, 0, 10));
    expect(none.filter((one) => one.byYears.length > 0).length).toBeLessThanOrEqual(4);
  });

  test("how replicates are cut into chunks changes nothing", () => {
    const whole = resampleStudies(chunk([0], 0.2, 0, 4));
    expect([...resampleStudies(chunk([0], 0.2, 0, 1)), ...resampleStudies(chunk([0], 0.2, 1, 4))]).toEqual(
      whole,
    );
  });

  test("counts become shares: frequency, direction, both together, the same set again", () => {
    const pick = (covariate: number, sign: number) => ({ covariate, sign });
    const resamples = [
      { byYears: [pick(0, -1)], byAnimals: [pick(0, -1), pick(2, 1)] },
      { byYears: [pick(0, -1), pick(1, 1)], byAnimals: [] },
      { byYears: [pick(0, 1)], byAnimals: [] },
      { byYears: [], byAnimals: [] },
    ];
    const summary = summarise("new years", resamples, [0], [-1, 1, 1]);
    expect([...summary.byYears]).toEqual([0.75, 0.25, 0]);
    expect([...summary.byAnimals]).toEqual([0.25, 0, 0.25]);
    expect(summary.sameSign[0]).toBeCloseTo(2 / 3, 12);
    expect(summary.sameSign[2]).toBeNaN();
    expect(summary.together[0 * 3 + 1]).toBe(0.25);
    expect([summary.anythingByYears, summary.anythingByAnimals, summary.sameByYears]).toEqual([
      0.75, 0.25, 0.5,
    ]);
  });
});
