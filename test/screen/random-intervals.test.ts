import { describe, expect, test } from "vitest";
import { randomIntervalEvidence } from "../../src/screen/random-intervals.ts";
import { drawStudy } from "../support/study.ts";

describe("the random-interval model of the covariates chosen by years", () => {
  test("covariates that drive survival take the variance between years with them", () => {
    const { problem } = drawStudy(
      1,
      { intervals: 18, covariates: 4, marked: 40, residual: 0.05 },
      [-0.8, 0.7],
    );
    const evidence = randomIntervalEvidence(problem, [0, 1]);
    expect(evidence.settled).toBe(true);
    expect(evidence.explained).toBeGreaterThan(0.9);
    expect(evidence.effects.map((one) => one.name)).toEqual(["x1", "x2"]);
    const [first] = evidence.effects;
    expect(first.low).toBeLessThan(-0.8 + 0.3);
    expect(first.high).toBeLessThan(0);
  });

  test("with nothing chosen nothing is explained and there are no effects", () => {
    const { problem } = drawStudy(9, { intervals: 18, covariates: 4, marked: 40, residual: 0.4 }, []);
    const evidence = randomIntervalEvidence(problem, []);
    expect(evidence.explained).toBeCloseTo(0, 12);
    expect(evidence.sigma).toBe(evidence.sigmaWithout);
    expect(evidence.sigma).toBeGreaterThan(0.1);
    expect(evidence.effects).toEqual([]);
  });
});
