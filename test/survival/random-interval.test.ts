import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { tQuantile } from "../../src/math/distributions.ts";
import { mean } from "../../src/math/quantile.ts";
import { randomStream } from "../../src/math/random.ts";
import { drawCaptures } from "../../src/simulate/draw.ts";
import { constantRecapture, covariateSurvival, type Frame } from "../../src/survival/design.ts";
import { effectsDesign, type RandomIntervalProblem } from "../../src/survival/effects-design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { glsFit, rotateColumns } from "../../src/survival/gls.ts";
import { laplaceOf } from "../../src/survival/laplace.ts";
import { fitRandomInterval, maximiseRandomInterval } from "../../src/survival/random-interval.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import type { SufficientStatistics } from "../../src/survival/statistics.ts";
import { twoStep } from "../../src/survival/two-step.ts";
import { drawnProblem, normals, smallProblem } from "./small-problem.ts";

/** Expected sufficient statistics: what `drawCaptures` gives on average, times the number marked. */
function expected(
  n: number,
  marked: number,
  survival: Float64Array,
  recapture: number,
): SufficientStatistics {
  const [alive, seen, passed, lastSeen] = [0, 1, 2, 3].map(() => new Float64Array(n));
  const released = new Float64Array(n);
  let releases = 0;
  for (let i = 0; i < n; i++) {
    released[i] += marked;
    releases += released[i];
    lastSeen[i] = released[i];
    let there = released[i];
    for (let j = i; j < n; j++) {
      const m = there * survival[j] * recapture;
      there *= survival[j] * (1 - recapture);
      for (let t = i; t <= j; t++) alive[t] += m;
      for (let t = i; t < j; t++) passed[t] += m;
      seen[j] += m;
      lastSeen[i] -= m;
      if (j + 1 < n) released[j + 1] += m;
    }
  }
  return { stratum: "all", alive, seen, passed, lastSeen, releases };
}

function plainFrame(n: number): Frame {
  return {
    strata: ["all"],
    intervals: n,
    lengths: new Float64Array(n).fill(1),
    forced: [],
    effort: undefined,
  };
}

const inverseLogit = (eta: number) => 1 / (1 + Math.exp(-eta));

describe("random interval effects", () => {
  test("at σ² = 0 the value, the coefficients and their errors are those of the ordinary fit (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 4, max: 8 }),
        fc.integer({ min: 1, max: 2 }),
        fc.nat(1000),
        (n, g, seed) => {
          const problem = smallProblem(n, g, 4 * seed, 30);
          const design = designOf(
            problem.frame,
            covariateSurvival(problem.frame, [problem.covariates[0]]),
            problem.recapture,
          );
          const fit = fitModel(problem.data, design);
          const laplace = laplaceOf(problem.data, effectsDesign(problem, [0]));
          const none = laplace.at(fit.estimates, 0, new Float64Array(n));
          expect(Math.abs(2 * none.value - fit.minus2LogL)).toBeLessThan(1e-12 * fit.minus2LogL);
          // and it is reached without a jump
          const near = laplace.at(fit.estimates, 1e-10, new Float64Array(n));
          expect(Math.abs(near.value - none.value - 1e-10 * none.gradient[laplace.dimension])).toBeLessThan(
            1e-10,
          );
        },
      ),
      { numRuns: 40 },
    );
  });

  test("where there is no variation between years σ is exactly 0 and the fit is the ordinary one", () => {
    const n = 10;
    const frame = plainFrame(n);
    const x = normals(n, 3);
    const problem: RandomIntervalProblem = {
      data: [
        expected(
          n,
          40,
          x.map((value) => inverseLogit(0.8 - 0.5 * value)),
          0.7,
        ),
      ],
      frame,
      recapture: constantRecapture(frame),
      covariates: [{ name: "x", values: x }],
    };
    const fit = fitRandomInterval(problem, [0]);
    expect([fit.sigma, fit.sigmaReml]).toEqual([0, 0]);
    expect(Array.from(fit.modes)).toEqual(new Array(n).fill(0));
    const plain = fitModel(
      problem.data,
      designOf(frame, covariateSurvival(frame, problem.covariates), problem.recapture),
    );
    expect(fit.minus2LogL).toBeCloseTo(plain.minus2LogL, 8);
    fit.coefficients.forEach((one, k) => {
      expect(one.estimate).toBeCloseTo(plain.estimates[k], 7);
      expect(one.se).toBeCloseTo(plain.se[k], 7);
    });
    // truth back from expected counts
    expect(fit.coefficients[0].estimate).toBeCloseTo(0.8, 6);
    expect(fit.coefficients[1].estimate).toBeCloseTo(-0.5, 6);
  });

  test("with very many animals it is the Gaussian model of the logits: two steps and Laplace agree", () => {
    const n = 14;
    const frame = plainFrame(n);
    const [x, e] = [normals(n, 4), normals(n, 5)];
    const problem: RandomIntervalProblem = {
      data: [
        expected(
          n,
          20_000,
          x.map((value, t) => inverseLogit(0.8 - 0.4 * value + 0.3 * e[t])),
          0.7,
        ),
      ],
      frame,
      recapture: constantRecapture(frame),
      covariates: [{ name: "x", values: x }],
    };
    const fit = fitRandomInterval(problem, [0]);
    const gaussian = rotateColumns(twoStep(problem), [new Float64Array(n).fill(1), x]);
    const reml = glsFit(gaussian, [0, 1], "REML");
    expect(Math.abs(fit.sigmaReml / reml.sigma - 1)).toBeLessThan(1e-3);
    expect(Math.abs(fit.sigma / glsFit(gaussian, [0, 1], "ML").sigma - 1)).toBeLessThan(1e-3);
    for (const k of [0, 1]) {
      expect(Math.abs(fit.coefficients[k].estimate - reml.coefficients[k])).toBeLessThan(1e-3);
      expect(Math.abs(fit.coefficients[k].se / Math.sqrt(reml.covariance.data[3 * k]) - 1)).toBeLessThan(
        1e-3,
      );
    }
    // REML/ML is √(n/(n − k)) where the logits' own errors are negligible
    expect(fit.sigmaReml / fit.sigma).toBeCloseTo(Math.sqrt(n / (n - 2)), 3);
  });

  test("σ by restricted likelihood does not change when a constant is added to a covariate", () => {
    // The determinant of the information changes by a factor that is free of σ; its diagonal alone would not.
    const n = 12;
    const frame = plainFrame(n);
    const [x, e] = [normals(n, 6), normals(n, 7)];
    const rates = x.map((value, t) => inverseLogit(0.6 - 0.4 * value + 0.6 * e[t]));
    const sigmaWith = (shift: number) =>
      fitRandomInterval(
        {
          data: [expected(n, 40, rates, 0.6)],
          frame,
          recapture: constantRecapture(frame),
          covariates: [{ name: "x", values: x.map((value) => value + shift) }],
        },
        [0],
      ).sigmaReml;
    expect(sigmaWith(0)).toBeGreaterThan(0.1);
    expect(sigmaWith(3)).toBeCloseTo(sigmaWith(0), 5);
  });

  test("no neighbour of the maximum is higher, and it does not depend on where the search began", () => {
    for (let seed = 0; seed < 12; seed++) {
      const problem = drawnProblem(9, 1 + (seed % 2), seed, 30, 0.6);
      const found = maximiseRandomInterval(problem, [0]);
      expect(found.stopped).toBe("optimum");
      const { theta, variance, effects, value } = found.point;
      for (let k = 0; k <= theta.length; k++)
        for (const step of [-1e-3, 1e-3]) {
          const moved = theta.map((one, i) => one + (i === k ? step : 0));
          const other = Math.max(0, variance + (k === theta.length ? step : 0));
          expect(found.laplace.at(moved, other, effects).value).toBeGreaterThanOrEqual(value - 1e-10);
        }
    }
  });

  test("order of covariates, order of animals and the unit of a covariate change nothing but their names", () => {
    const n = 11;
    const frame = plainFrame(n);
    const [a, b, e] = [normals(n, 6), normals(n, 7), normals(n, 8)];
    const truth = {
      stratum: "all",
      marked: new Float64Array(n).fill(15),
      survival: a.map((value, t) => inverseLogit(0.7 - 0.4 * value + 0.4 * e[t])),
      recapture: new Float64Array(n).fill(0.7),
    };
    const random = randomStream(9, "order", 1);
    const halves = [drawCaptures(truth, random), drawCaptures(truth, random)];
    const sum = ([p, q]: readonly SufficientStatistics[]): SufficientStatistics => {
      const add = (u: Float64Array, v: Float64Array) => u.map((value, t) => value + v[t]);
      return {
        stratum: "all",
        alive: add(p.alive, q.alive),
        seen: add(p.seen, q.seen),
        passed: add(p.passed, q.passed),
        lastSeen: add(p.lastSeen, q.lastSeen),
        releases: p.releases + q.releases,
      };
    };
    const make = (data: SufficientStatistics, columns: readonly Float64Array[]): RandomIntervalProblem => ({
      data: [data],
      frame,
      recapture: constantRecapture(frame),
      covariates: columns.map((values, k) => ({ name: `x${k}`, values })),
    });
    const one = fitRandomInterval(make(sum(halves), [a, b]), [0, 1]);
    const other = fitRandomInterval(
      make(sum([halves[1], halves[0]]), [b.map((value) => 10 * value), a]),
      [0, 1],
    );
    expect(one.sigmaReml).toBeGreaterThan(0);
    expect(other.minus2LogL).toBeCloseTo(one.minus2LogL, 8);
    expect(other.sigma).toBeCloseTo(one.sigma, 6);
    expect(other.sigmaReml).toBeCloseTo(one.sigmaReml, 5);
    expect(other.coefficients[2].estimate).toBeCloseTo(one.coefficients[1].estimate, 5);
    expect(other.coefficients[1].estimate).toBeCloseTo(one.coefficients[2].estimate / 10, 5);
    expect(other.coefficients[2].high).toBeCloseTo(one.coefficients[1].high, 5);
    // on either side of the estimate alike, Student's t: two covariates and a mean spend 3 of the intervals
    for (const { estimate, se, low, high } of one.coefficients) {
      expect(high - estimate).toBeCloseTo(tQuantile(0.975, n - 3) * se, 10);
      expect(estimate - low).toBeCloseTo(high - estimate, 10);
    }
  });

  test("truth comes back on average, and σ by maximum likelihood falls short of it (60 data sets)", () => {
    const n = 17;
    const frame = plainFrame(n);
    const fits = Array.from({ length: 60 }, (_, r) => {
      const random = randomStream(9, "truth", r);
      const x = Float64Array.from({ length: n }, () => random.normal());
      const truth = {
        stratum: "all",
        marked: new Float64Array(n).fill(40),
        survival: x.map((value) => inverseLogit(0.9 - 0.5 * value + 0.5 * random.normal())),
        recapture: new Float64Array(n).fill(0.75),
      };
      return fitRandomInterval(
        {
          data: [drawCaptures(truth, random)],
          frame,
          recapture: constantRecapture(frame),
          covariates: [{ name: "x", values: x }],
        },
        [0],
      );
    });
    const slopes = fits.map((fit) => fit.coefficients[1].estimate);
    const se = Math.sqrt(mean(fits.map((fit) => fit.coefficients[1].se ** 2)) / 60);
    expect(Math.abs(mean(slopes) + 0.5)).toBeLessThan(3 * se);
    // σ̂ of 17 years has a standard deviation near .12
    expect(Math.abs(Math.sqrt(mean(fits.map((fit) => fit.sigmaReml ** 2))) - 0.5)).toBeLessThan(0.05);
    expect(mean(fits.map((fit) => fit.sigma))).toBeLessThan(mean(fits.map((fit) => fit.sigmaReml)));
    expect(fits[0].df).toBe(15);
    expect(fits.every((fit) => fit.stopped === "optimum")).toBe(true);
  });
});
