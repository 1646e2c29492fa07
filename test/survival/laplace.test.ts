import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { occasionRecapture } from "../../src/survival/design.ts";
import {
  type EffectsDesign,
  effectsDesign,
  type RandomIntervalProblem,
} from "../../src/survival/effects-design.ts";
import { laplaceOf } from "../../src/survival/laplace.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { rowLikelihood } from "../../src/survival/row-likelihood.ts";
import { drawnProblem, normals, smallProblem } from "./small-problem.ts";

/** The logits of the rows at a coefficient vector (β, ε, α). */
function logitsOf({ design, survival: b, intervals: n }: EffectsDesign, x: Float64Array) {
  const columns = "known" in design.recapture ? [] : design.recapture.columns;
  const rows = design.strata * n;
  const [eta, zeta] = [new Float64Array(rows), new Float64Array(rows)];
  for (let r = 0; r < rows; r++) {
    design.survival.columns.forEach((column, k) => {
      eta[r] += column[r] * x[k];
    });
    columns.forEach((column, k) => {
      zeta[r] += column[r] * x[b + n + k];
    });
  }
  return [eta, zeta] as const;
}

describe("the likelihood by rows", () => {
  test("value, gradient and curvature are those of the likelihood by coefficients (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 6 }),
        fc.integer({ min: 1, max: 3 }),
        fc.nat(1000),
        (n, g, seed) => {
          const problem = smallProblem(n, g, seed);
          const model = effectsDesign(problem, [0, 1]);
          const { design } = model;
          const f = cjsLikelihood(problem.data, design);
          const x = Float64Array.from(normals(f.dimension, seed + 30));
          const rows = rowLikelihood(problem.data, design);
          const gradient = new Float64Array(f.dimension);
          const value = f.evaluate(x, gradient);
          expect(Math.abs(rows.at(...logitsOf(model, x)) - value)).toBeLessThan(1e-11 * Math.abs(value));
          rows.curvature(true);
          const d = f.dimension;
          const curvature = new Float64Array(d * d);
          f.curvature(
            Int32Array.from({ length: d }, (_, k) => k),
            curvature,
          );
          const survives = design.survival.columns.length;
          const columns = [
            ...design.survival.columns,
            ...("known" in design.recapture ? [] : design.recapture.columns),
          ];
          const block = (i: number, j: number, r: number, u: number) => {
            const at = (r - (r % n)) * n;
            const [a, b] = [r % n, u % n];
            if (i < survives && j < survives) return rows.survivalSurvival[at + a * n + b];
            if (i < survives) return rows.survivalRecapture[at + a * n + b];
            if (j < survives) return rows.survivalRecapture[at + b * n + a];
            return rows.recaptureRecapture[at + a * n + b];
          };
          for (let i = 0; i < d; i++) {
            const by = i < survives ? rows.bySurvival : rows.byRecapture;
            const slope = by.reduce((sum, one, r) => sum + one * columns[i][r], 0);
            expect(Math.abs(slope - gradient[i])).toBeLessThan(1e-10 * (1 + Math.abs(value)));
            for (let j = 0; j < d; j++) {
              let sum = 0;
              for (let r = 0; r < g * n; r++)
                for (let t = 0; t < n; t++) {
                  const u = r - (r % n) + t;
                  sum += columns[i][r] * columns[j][u] * block(i, j, r, u);
                }
              expect(Math.abs(sum - curvature[i * d + j])).toBeLessThan(1e-10 * (1 + Math.abs(value)));
            }
          }
        },
      ),
      { numRuns: 60 },
    );
  });
});

describe("the slopes of a weighted sum of the curvature", () => {
  test("keep their relative precision where a recapture runs away: they fall like e^−ζ", () => {
    const n = 6;
    const problem = smallProblem(n, 1, 1);
    const model = effectsDesign(problem, [0]);
    const rows = rowLikelihood(problem.data, {
      ...model.design,
      recapture: occasionRecapture(problem.frame),
    });
    const eta = normals(n, 50);
    const half = normals(n * n, 51);
    const weights = half.map((value, i) => value + half[(i % n) * n + Math.floor(i / n)]);
    const slope = (zeta: number) => {
      const [byS, byR] = [new Float64Array(n), new Float64Array(n)];
      rows.at(eta, new Float64Array(n).fill(zeta, 2, 3));
      rows.curvature(false);
      rows.slopesOfTrace(weights, byS, byR);
      return byR[2];
    };
    // (1 + e^−ζ) of what is left is 1 to rounding from here on
    const [near, far] = [slope(40), slope(300)];
    expect(near).not.toBe(0);
    expect(Math.abs((far / near) * Math.exp(260) - 1)).toBeLessThan(1e-9);
  });

  test("agree with differences of it, strata and unequal intervals included (property)", () => {
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
          const half = normals(n * n, seed + 40);
          // symmetric, else any
          const weights = Float64Array.from(
            { length: n * n },
            (_, i) => half[i] + half[(i % n) * n + Math.floor(i / n)],
          );
          const columns = "known" in design.recapture ? [] : design.recapture.columns;
          const rows = g * n;
          const third = rowLikelihood(problem.data, design);
          const [byS, byR] = [new Float64Array(rows), new Float64Array(rows)];
          third.at(...logitsOf(model, x));
          third.curvature(false);
          third.slopesOfTrace(weights, byS, byR);
          const which = Int32Array.from({ length: n }, (_, t) => b + t);
          const form = (at: Float64Array) => {
            const w = new Float64Array(n * n);
            f.evaluate(at, new Float64Array(f.dimension));
            f.curvature(which, w);
            let sum = 0;
            for (let i = 0; i < n * n; i++) sum += weights[i] * w[i];
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
          // what a search asks for is the same point without the information
          const lean = laplace.at(theta, variance, none, false);
          expect(lean.value).toBe(here.value);
          for (let k = 0; k <= theta.length; k++)
            expect(Math.abs(lean.gradient[k] - here.gradient[k])).toBeLessThan(
              1e-9 * (1 + Math.abs(here.gradient[k])),
            );
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

  test("agrees with numerical integration over the effects; four times the animals, a quarter of the error", () => {
    // Trapezoidal sums over ±9 posterior standard deviations: exact to rounding for smooth integrands that die out.
    for (const n of [2, 3]) {
      const errors = [1, 4, 16].map((times) => {
        const small = drawnProblem(n, 1, 4 * n, 200, 0.5);
        const grown = (values: Float64Array) => values.map((value) => value * times);
        const problem: RandomIntervalProblem = {
          ...small,
          data: small.data.map((one) => ({
            ...one,
            alive: grown(one.alive),
            seen: grown(one.seen),
            passed: grown(one.passed),
            lastSeen: grown(one.lastSeen),
          })),
        };
        const model = effectsDesign(problem, []);
        const theta = Float64Array.of(0.6, 0.85); // the truth: survival .65, recapture .7
        const variance = 0.4;
        const point = laplaceOf(problem.data, model).at(theta, variance, new Float64Array(n));
        const f = cjsLikelihood(problem.data, model.design);
        const x = new Float64Array(f.dimension);
        model.fixed.forEach((k, i) => {
          x[k] = theta[i];
        });
        const which = Int32Array.from({ length: n }, (_, t) => model.survival + t);
        x.set(point.effects, model.survival);
        f.evaluate(x, new Float64Array(f.dimension));
        const w = new Float64Array(n * n);
        f.curvature(which, w);
        const sds = Array.from(
          problem.frame.lengths,
          (length, t) => 1 / Math.sqrt(w[t * n + t] + length / variance),
        );
        const points = n === 2 ? 121 : 61;
        const gradient = new Float64Array(f.dimension);
        let sum = 0;
        const walk = (t: number) => {
          if (t === n) {
            let exponent = f.evaluate(x, gradient) - point.joint;
            for (let u = 0; u < n; u++)
              exponent += (0.5 * x[which[u]] ** 2 * problem.frame.lengths[u]) / variance;
            sum += Math.exp(-exponent);
            return;
          }
          for (let i = 0; i < points; i++) {
            x[which[t]] = point.effects[t] + sds[t] * 9 * ((2 * i) / (points - 1) - 1);
            walk(t + 1);
          }
        };
        walk(0);
        // steps of the grid, and the normalising constants of the prior
        let log = Math.log(sum) - point.joint;
        for (let t = 0; t < n; t++)
          log +=
            Math.log((18 * sds[t]) / (points - 1)) -
            0.5 * Math.log((2 * Math.PI * variance) / problem.frame.lengths[t]);
        return point.value + log;
      });
      // the error of Laplace's approximation is O(1/animals) (Tierney & Kadane 1986)
      expect(Math.abs(errors[0])).toBeLessThan(0.006 * n);
      expect(Math.abs(errors[0] / errors[1] - 3.6)).toBeLessThan(0.4);
      expect(Math.abs(errors[1] / errors[2] - 3.9)).toBeLessThan(0.15);
    }
  });
});
