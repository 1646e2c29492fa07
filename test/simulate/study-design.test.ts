import { describe, expect, test } from "vitest";
import { mean } from "../../src/math/quantile.ts";
import { randomStream } from "../../src/math/random.ts";
import { drawCaptures } from "../../src/simulate/draw.ts";
import { drawStudy } from "../../src/simulate/replicate.ts";
import { ownDirections, residualEstimate } from "../../src/simulate/residual.ts";
import { newlyMarked, studyDesign } from "../../src/simulate/study-design.ts";
import { type Frame, occasionRecapture } from "../../src/survival/design.ts";
import { compareRecapture } from "../../src/survival/recapture-choice.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { drawStudy as drawKnown } from "../support/study.ts";

const SHAPE = { intervals: 16, covariates: 3, marked: 40, residual: 0.3 };
const known = drawKnown(11, SHAPE, [-0.6]);

describe("the design of a study", () => {
  test("what was newly marked comes back from drawn captures", () => {
    const marked = [5, 0, 12, 3, 30];
    const survival = new Float64Array(5).fill(0.7);
    const recapture = new Float64Array(5).fill(0.6);
    const drawn = drawCaptures({ stratum: "a", marked, survival, recapture }, randomStream(1, "m", 0));
    expect(Array.from(newlyMarked(drawn))).toEqual(marked);
  });

  test("animals lost on recapture are taken off the newly marked, by hand", () => {
    // 10 released at 1, of which 4 seen at 2, where 2 of these are lost and 5 are newly marked: 7 released
    const seen = { rows: 2, columns: 2, data: Float64Array.of(4, 1, 0, 3) };
    const counts = { stratum: "a", occasions: 3, released: Float64Array.of(10, 7), seen, animals: 15 };
    expect(Array.from(newlyMarked(sufficientStatistics(counts)))).toEqual([10, 3]);
  });

  test("recapture and mean survival are the constant fit's, near what the captures were drawn from", () => {
    const { strata } = studyDesign(known.problem);
    expect(strata.length).toBe(1);
    expect(Math.abs(strata[0].recapture[3] - 0.75)).toBeLessThan(0.06);
    expect(Math.abs(strata[0].baseline[3] - 0.9)).toBeLessThan(0.45);
    expect(Array.from(strata[0].marked)).toEqual(Array(16).fill(40));
  });

  test("each covariate acts the way its estimate in the study points", () => {
    expect(ownDirections(known.problem, [0])).toEqual([-1]);
    expect(ownDirections(drawKnown(11, SHAPE, [0.6]).problem, [0])).toEqual([1]);
  });
});

describe("residual variation from ĉ between years", () => {
  // Mean over drawn studies of the estimated variance against the one they were drawn with; the moment equation is for the
  // variance, so it is its mean that must come back. The diagonal of the
  // information leaves out what recapture and neighbours cost, so it is a tenth too small here.
  test.each([0, 0.4])("variance %d² comes back on average", (sd) => {
    const design = studyDesign(known.problem);
    const effects = [{ covariate: 0, perSd: 0.5 }];
    const found = Array.from({ length: 60 }, (_, r) => {
      const problem = drawStudy(design, { effects, residual: sd }, randomStream(5, "residual", r));
      const interval = compareRecapture(problem.data, problem.frame, "constant").intervalFit;
      const { betweenYears, df, sd: estimate } = residualEstimate(problem, [0], interval);
      expect(df).toBe(14);
      return { betweenYears, variance: estimate ** 2 };
    });
    const variance = mean(found.map((one) => one.variance));
    if (sd === 0) {
      // ĉ has mean 1 and sd √(2/14): 60 of them within 3 standard errors and a tenth for what is not quite χ²
      expect(Math.abs(mean(found.map((one) => one.betweenYears)) - 1)).toBeLessThan(0.25);
      expect(variance).toBeLessThan(0.03);
    } else expect(Math.abs(variance / sd ** 2 - 1)).toBeLessThan(0.2);
  });

  test("it comes back with strata, a forced covariate, recapture per occasion and unequal lengths too", () => {
    const { frame, covariates } = known.problem;
    const n = frame.intervals;
    const lengths = Float64Array.from(frame.lengths, (_, t) => (t % 4 === 0 ? 2 : 1));
    const two: Frame = { ...frame, strata: ["a", "b"], lengths, forced: [covariates[2]] };
    const strata = [1.4, 0.4].map((logit, g) => ({
      stratum: two.strata[g],
      marked: new Float64Array(n).fill(40),
      baseline: new Float64Array(n).fill(logit),
      recapture: Float64Array.from(lengths, (_, t) => (t % 2 === 0 ? 0.6 : 0.9)),
    }));
    const world = { frame: two, recapture: occasionRecapture(two), covariates, strata };
    const variances = Array.from({ length: 60 }, (_, r) => {
      const scenario = { effects: [{ covariate: 0, perSd: 0.5 }], residual: 0.4 };
      const problem = drawStudy(world, scenario, randomStream(6, "residual", r));
      const interval = compareRecapture(problem.data, two, "each occasion").intervalFit;
      return residualEstimate(problem, [0], interval).sd ** 2;
    });
    expect(Math.abs(mean(variances) / 0.4 ** 2 - 1)).toBeLessThan(0.25);
  });

  test("no variation is claimed where no degrees of freedom are left", () => {
    const interval = { minus2LogL: 0, parameters: 3 };
    expect(residualEstimate(known.problem, [0], interval).sd).toBe(0);
  });
});
