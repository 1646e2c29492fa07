import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import {
  constantRecapture,
  effortRecapture,
  type Frame,
  occasionRecapture,
} from "../../src/survival/design.ts";
import { effectsDesign, type RandomIntervalProblem } from "../../src/survival/effects-design.ts";
import { laplaceOf } from "../../src/survival/laplace.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { rowLikelihood } from "../../src/survival/row-likelihood.ts";
import { maximiseRandomInterval } from "../../src/survival/random-interval.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf } from "../support/reference.ts";

const normals = (n: number, replicate: number) => {
  const random = randomStream(8, "laplace test", replicate);
  return Float64Array.from({ length: n }, () => random.normal());
};

export function smallProblem(n: number, strata: number, seed: number, animals = 8): RandomIntervalProblem {
  const random = randomStream(8, "laplace counts", seed);
  const frame: Frame = {
    strata: Array.from({ length: strata }, (_, g) => `stratum ${g}`),
    intervals: n,
    lengths: Float64Array.from(normals(n, seed + 1), (z) => Math.exp(z / 3)),
    forced: [],
    effort: normals(n, seed + 2),
  };
  const counts = () => {
    const seen = Array.from({ length: n }, (_, i) =>
      Array.from({ length: n }, (_, j) =>
        j < i ? 0 : Math.floor((1 + random.uniform() * animals) / (1 + j - i)),
      ),
    );
    return countsOf(
      seen.map((row) => row.reduce((a, b) => a + b, 0) + 1 + Math.floor((random.uniform() * animals) / 2)),
      seen,
    );
  };
  return {
    data: frame.strata.map(() => sufficientStatistics(counts())),
    frame,
    recapture: [
      constantRecapture(frame),
      occasionRecapture(frame),
      effortRecapture(frame, frame.effort!),
      { known: 0.8 },
    ][seed % 4],
    covariates: [0, 1].map((k) => ({ name: `x${k}`, values: normals(n, seed + 10 + k) })),
  };
}

describe("third derivatives", () => {
  test("agree with differences of the curvature, strata and unequal intervals included (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 6 }),
        fc.integer({ min: 1, max: 2 }),
        fc.nat(1000),
        (n, g, seed) => {
          const problem = smallProblem(n, g, seed);
          const model = effectsDesign(problem, [0]);
          const { design, survival: b } = model;
          const f = cjsLikelihood(problem.data, design);
          const x = Float64Array.from(normals(f.dimension, seed + 30));
          const u = normals(n, seed + 40);
          const columns = "known" in design.recapture ? [] : design.recapture.columns;
          const rows = g * n;
          const [eta, zeta] = [new Float64Array(rows), new Float64Array(rows)];
          for (let r = 0; r < rows; r++) {
            design.survival.columns.forEach((column, k) => {
              eta[r] += column[r] * x[k];
            });
            columns.forEach((column, k) => {
              zeta[r] += column[r] * x[b + n + k];
            });
          }
          const third = rowLikelihood(problem.data, design);
          const [byS, byR] = [new Float64Array(rows), new Float64Array(rows)];
          third.at(eta, zeta);
          third.addThird(u, byS, byR);
          const which = Int32Array.from({ length: n }, (_, t) => b + t);
          const form = (at: Float64Array) => {
            const w = new Float64Array(n * n);
            f.evaluate(at, new Float64Array(f.dimension));
            f.curvature(which, w);
            let sum = 0;
            for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) sum += u[i] * u[j] * w[i * n + j];
            return sum / 2;
          };
          const h = 1e-5;
          for (let k = 0; k < f.dimension; k++) {
            const [up, down] = [Float64Array.from(x), Float64Array.from(x)];
            up[k] += h;
            down[k] -= h;
            const difference = (form(up) - form(down)) / (2 * h);
            const all = [...design.survival.columns, ...columns];
            const by = k < b + n ? byS : byR;
            const exact = by.reduce((sum, value, r) => sum + value * all[k][r], 0);
            expect(Math.abs(difference - exact)).toBeLessThan(1e-6 * (1 + Math.abs(exact)));
          }
        },
      ),
      { numRuns: 60 },
    );
  });
});

describe("Laplace's approximation", () => {
  test("derivatives in coefficients and in σ² agree with differences, at σ² = 0 from above (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 2, max: 7 }),
        fc.integer({ min: 1, max: 2 }),
        fc.constantFrom(0, 1e-6, 0.04, 0.5, 2),
        fc.nat(1000),
        (n, strata, variance, seed) => {
          const problem = smallProblem(n, strata, seed);
          const laplace = laplaceOf(problem.data, effectsDesign(problem, [0]));
          const theta = normals(laplace.dimension, seed + 50).map((z) => 0.4 * z);
          const none = new Float64Array(n);
          const here = laplace.at(theta, variance, none);
          const value = (k: number, step: number) => {
            const moved = Float64Array.from(theta);
            if (k < theta.length) moved[k] += step;
            return laplace.at(moved, variance + (k < theta.length ? 0 : step), none).value;
          };
          for (let k = 0; k <= theta.length; k++) {
            const h = 1e-4;
            const onlyUp = k === theta.length && variance < 2 * h;
            // at the bound a one-sided difference of fourth order
            const difference = onlyUp
              ? (-25 * value(k, 0) +
                  48 * value(k, h) -
                  36 * value(k, 2 * h) +
                  16 * value(k, 3 * h) -
                  3 * value(k, 4 * h)) /
                (12 * h)
              : (value(k, -2 * h) - 8 * value(k, -h) + 8 * value(k, h) - value(k, 2 * h)) / (12 * h);
            expect(Math.abs(difference - here.gradient[k])).toBeLessThan(
              2e-6 * (1 + Math.abs(here.gradient[k])),
            );
          }
        },
      ),
      { numRuns: 60 },
    );
  });

  test("maximum", () => {
    const problem = smallProblem(12, 1, 4, 40);
    const max = maximiseRandomInterval(problem, [0]);
    console.log(max.minus2LogL, max.point.variance, max.iterations, max.violation, max.stopped);
  });
});
