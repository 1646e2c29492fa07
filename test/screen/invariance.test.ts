import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { lassoPath } from "../../src/screen/path.ts";
import type { ScreenProblem } from "../../src/screen/problem.ts";
import { adaptiveWeights } from "../../src/screen/weights.ts";
import { countsFrom, type History } from "../../src/study/histories.ts";
import { constantRecapture } from "../../src/survival/design.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { drawStudy, standardise } from "../support/study.ts";
import { drawHistories } from "../survival/draw-histories.ts";

const statistics = (histories: readonly History[], occasions: number) =>
  countsFrom(histories, occasions).map(sufficientStatistics);

describe("what the screen must not depend on", () => {
  test("animals in another order, or grouped by history: the very same statistics (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 8 }),
        fc.integer({ min: 1, max: 12 }),
        fc.nat(1000),
        (T, marked, seed) => {
          const random = randomStream(31, "invariance", seed);
          const drawn = ["a", "b"].flatMap((stratum) =>
            drawHistories(
              { occasions: T, marked, survival: 0.7, recapture: 0.5, loss: 0.1, stratum },
              random,
            ),
          );
          const expected = statistics(drawn, T);
          const order = random.permutation(drawn.length);
          expect(
            statistics(
              Array.from(order, (i) => drawn[i]),
              T,
            ),
          ).toEqual(expected);
          const groups = new Map<string, History>();
          for (const one of drawn) {
            const key = JSON.stringify([one.stratum, one.seen, one.lost]);
            groups.set(key, { ...one, number: (groups.get(key)?.number ?? 0) + 1 });
          }
          expect(statistics([...groups.values()].reverse(), T)).toEqual(expected);
        },
      ),
      { numRuns: 60 },
    );
  });

  const pathOf = (problem: ScreenProblem) => {
    const { weights } = adaptiveWeights(problem, 1);
    return lassoPath(problem, weights, { steps: 25, downTo: 0.001 });
  };
  /** Paths are solved to 1e-8 of λ_max; coefficients then agree to about that over the curvature. */
  const close = (a: number, b: number) => expect(Math.abs(a - b)).toBeLessThan(1e-6);

  test("columns in other units, then standardised: the same path (property)", () => {
    fc.assert(
      fc.property(
        fc.nat(500),
        fc.integer({ min: -6, max: 6 }),
        fc.double({ min: -50, max: 50, noNaN: true }),
        (seed, power, offset) => {
          const shape = { intervals: 14, covariates: 4, marked: 40, residual: 0.1 };
          const { problem } = drawStudy(seed, shape, [-0.6]);
          const scaled = problem.covariates.map((one, k) => ({
            ...one,
            values: standardise(one.values.map((value) => (value + offset * (k % 2)) * 10 ** power)),
          }));
          const [one, two] = [pathOf(problem), pathOf({ ...problem, covariates: scaled })];
          expect(Math.abs(two.lambdaMax / one.lambdaMax - 1)).toBeLessThan(1e-8);
          one.steps.forEach((step, i) => {
            step.estimates.forEach((value, k) => close(two.steps[i].estimates[k], value));
            close(two.steps[i].objective, step.objective);
          });
        },
      ),
      { numRuns: 8 },
    );
  });

  test("covariates in another order: the same path in that order (property)", () => {
    fc.assert(
      fc.property(fc.nat(500), (seed) => {
        const shape = { intervals: 14, covariates: 5, marked: 40, residual: 0.1 };
        const { problem } = drawStudy(seed, shape, [-0.6, 0.4]);
        const order = randomStream(seed, "order of covariates", 0).permutation(5);
        const covariates = Array.from(order, (k) => problem.covariates[k]);
        const [one, two] = [pathOf(problem), pathOf({ ...problem, covariates })];
        expect(Math.abs(two.lambdaMax / one.lambdaMax - 1)).toBeLessThan(1e-8);
        one.steps.forEach((step, i) =>
          order.forEach((k, place) => close(two.steps[i].coefficients[place], step.coefficients[k])),
        );
      }),
      { numRuns: 8 },
    );
  });

  test("strata in another order: the same likelihood along the path", () => {
    const { problem } = drawStudy(12, { intervals: 10, covariates: 3, marked: 30, residual: 0.1 }, [-0.6]);
    const other = drawStudy(13, { intervals: 10, covariates: 1, marked: 30, residual: 0.1 }, [0.2]).problem;
    const of = (data: ScreenProblem["data"]) => {
      const frame = { ...problem.frame, strata: data.map((_, g) => `stratum ${g}`) };
      return pathOf({ ...problem, data, frame, recapture: constantRecapture(frame) });
    };
    const [one, two] = [of([problem.data[0], other.data[0]]), of([other.data[0], problem.data[0]])];
    expect(Math.abs(two.lambdaMax / one.lambdaMax - 1)).toBeLessThan(1e-8);
    one.steps.forEach((step, i) => {
      close(two.steps[i].minus2LogL, step.minus2LogL);
      step.coefficients.forEach((value, k) => close(two.steps[i].coefficients[k], value));
    });
  });
});
