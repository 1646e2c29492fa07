import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import {
  constantRecapture,
  covariateSurvival,
  type Design,
  effortRecapture,
  type Frame,
  intervalSurvival,
  occasionRecapture,
} from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf } from "../support/reference.ts";

const normals = (n: number, replicate: number) => {
  const random = randomStream(7, "likelihood test", replicate);
  return Float64Array.from({ length: n }, () => random.normal());
};

function frameOf(strata: number, n: number, replicate: number): Frame {
  return {
    strata: Array.from({ length: strata }, (_, g) => `stratum ${g}`),
    intervals: n,
    // some of one year exactly, which needs no powers
    lengths: Float64Array.from(normals(n, replicate + 1), (z) => (z > 0.5 ? 1 : Math.exp(z / 2))),
    forced: [],
    effort: normals(n, replicate + 2),
  };
}

/** Intervals, strata, and a seed. */
const SIZES = [fc.integer({ min: 1, max: 7 }), fc.integer({ min: 1, max: 3 }), fc.nat(1000)] as const;

function randomCounts(n: number, replicate: number) {
  const random = randomStream(7, "counts", replicate);
  const seen = Array.from({ length: n }, (_, i) =>
    Array.from({ length: n }, (_, j) => (j < i ? 0 : Math.floor(random.uniform() * 8))),
  );
  const released = seen.map((row) => row.reduce((a, b) => a + b, 0) + Math.floor(random.uniform() * 10));
  return countsOf(released, seen);
}

describe("likelihood", () => {
  test("gradient and curvature agree with central differences (property)", () => {
    fc.assert(
      fc.property(...SIZES, (n, strata, seed) => {
        const frame = frameOf(strata, n, seed);
        const covariates = [0, 1].map((k) => ({ name: `x${k}`, values: normals(n, seed + 10 + k) }));
        const recapture = [
          constantRecapture(frame),
          occasionRecapture(frame),
          effortRecapture(frame, frame.effort!),
        ][seed % 3];
        const design = designOf(frame, covariateSurvival(frame, covariates), recapture);
        const data = frame.strata.map((_, g) => sufficientStatistics(randomCounts(n, seed + g)));
        const f = cjsLikelihood(data, design);
        const x = Float64Array.from(normals(f.dimension, seed + 20));
        const gradient = new Float64Array(f.dimension);
        f.evaluate(x, gradient);
        const which = Int32Array.from({ length: f.dimension }, (_, k) => k);
        const curvature = new Float64Array(f.dimension ** 2);
        f.curvature(which, curvature);
        const up = new Float64Array(f.dimension);
        const down = new Float64Array(f.dimension);
        const h = 1e-5;
        for (let k = 0; k < f.dimension; k++) {
          const at = x[k];
          x[k] = at + h;
          const high = f.evaluate(x, up);
          x[k] = at - h;
          const low = f.evaluate(x, down);
          x[k] = at;
          expect(Math.abs((high - low) / (2 * h) - gradient[k])).toBeLessThan(
            1e-6 * (1 + Math.abs(gradient[k])),
          );
          for (let j = 0; j < f.dimension; j++) {
            const difference = (up[j] - down[j]) / (2 * h);
            expect(Math.abs(difference - curvature[k * f.dimension + j])).toBeLessThan(
              1e-6 * (1 + Math.abs(difference)),
            );
          }
        }
      }),
      { numRuns: 60 },
    );
  });

  test("agrees with a sum over every unseen state of single histories (brute force)", () => {
    // P(history | first seen) = Σ over the interval of death of Π φ, (1 − φ), p, q
    const n = 4;
    const phi = [0.7, 0.55, 0.8, 0.6];
    const p = [0.5, 0.9, 0.35, 0.65];
    const probability = (history: readonly number[]) => {
      const first = history.indexOf(1);
      let total = 0;
      for (let dies = first; dies <= n; dies++) {
        // alive up to occasion `dies`, dead from the next one on
        let one = dies < n ? 1 - phi[dies] : 1;
        for (let t = first; t < dies; t++) one *= phi[t] * (history[t + 1] ? p[t] : 1 - p[t]);
        if (history.some((seen, t) => seen && t > dies)) one = 0;
        total += one;
      }
      return total;
    };
    const frame: Frame = { ...frameOf(1, n, 0), lengths: new Float64Array(n).fill(1) };
    const design = designOf(frame, intervalSurvival(frame), occasionRecapture(frame));
    const logit = (value: number) => Math.log(value / (1 - value));
    const x = Float64Array.from([...phi.map(logit), ...p.map(logit)]);
    for (let code = 1; code < 2 ** (n + 1); code++) {
      const history = Array.from({ length: n + 1 }, (_, t) => (code >> t) & 1);
      if (history.indexOf(1) === n) continue;
      const released = new Array(n).fill(0);
      const seen = Array.from({ length: n }, () => new Array(n).fill(0));
      let at = -1;
      history.forEach((here, t) => {
        if (!here) return;
        if (at >= 0) seen[at][t - 1] += 1;
        if (t < n) released[t] += 1;
        at = t;
      });
      const value = cjsLikelihood([sufficientStatistics(countsOf(released, seen))], design).evaluate(
        x,
        new Float64Array(8),
      );
      expect(Math.exp(-value)).toBeCloseTo(probability(history), 12);
    }
  });

  test("truth comes back from expected counts: strata and unequal intervals", () => {
    const n = 6;
    const lengths = Float64Array.from([1, 2, 0.5, 1, 3, 1]);
    const frame: Frame = { strata: ["adult", "young"], intervals: n, lengths, forced: [], effort: undefined };
    const [b0, young, slope, p] = [1.1, -0.6, 0.4, 0.65];
    const x = normals(n, 99);
    const counts = [0, young].map((shift) => {
      const phi = Array.from(
        x,
        (value, t) => (1 / (1 + Math.exp(-(b0 + shift + slope * value)))) ** lengths[t],
      );
      const seen = Array.from({ length: n }, (_, i) =>
        Array.from({ length: n }, (_, j) => {
          if (j < i) return 0;
          let cell = 1e6 * p;
          for (let t = i; t <= j; t++) cell *= phi[t] * (t < j ? 1 - p : 1);
          return cell;
        }),
      );
      return sufficientStatistics(countsOf(new Array(n).fill(1e6), seen));
    });
    const fit = fitModel(
      counts,
      designOf(frame, covariateSurvival(frame, [{ name: "x", values: x }]), constantRecapture(frame)),
    );
    expect(fit.stopped).toBe("optimum");
    [b0, young, slope, Math.log(p / (1 - p))].forEach((truth, k) =>
      expect(fit.estimates[k]).toBeCloseTo(truth, 8),
    );
  });

  test("extreme rates stay finite: all always seen, nobody ever seen again, two occasions", () => {
    const frame: Frame = {
      strata: ["all"],
      intervals: 1,
      lengths: new Float64Array([1]),
      forced: [],
      effort: undefined,
    };
    const build = (design: Frame): Design =>
      designOf(design, covariateSurvival(design, []), constantRecapture(design));
    const one = fitModel([sufficientStatistics(countsOf([20], [[8]]))], build(frame));
    expect(one.notSeparable).toEqual([["survival at mean covariates", "recapture"]]);
    expect(one.survival[0].value * one.recapture[0].value).toBeCloseTo(0.4, 8);
    const three: Frame = { ...frame, intervals: 2, lengths: new Float64Array([1, 1]) };
    const always = fitModel(
      [
        sufficientStatistics(
          countsOf(
            [10, 10],
            [
              [10, 0],
              [0, 10],
            ],
          ),
        ),
      ],
      build(three),
    );
    expect(always.minus2LogL).toBeCloseTo(0, 6);
    expect(always.survival[0].value).toBeCloseTo(1, 6);
    expect(always.atBound).toEqual(["survival at mean covariates", "recapture"]);
    expect(always.survival[0].se).toBeNaN();
    const never = fitModel(
      [
        sufficientStatistics(
          countsOf(
            [10, 10],
            [
              [0, 0],
              [0, 0],
            ],
          ),
        ),
      ],
      build(three),
    );
    expect(never.minus2LogL).toBeCloseTo(0, 5);
    expect(Number.isFinite(never.estimates[0])).toBe(true);
  });
});

describe("with everybody seen, recapture known to be 1", () => {
  const known = { known: 1 };
  /** Every released animal is met at the next occasion or never. */
  const binomial = (n: number, replicate: number) => {
    const random = randomStream(7, "binomial counts", replicate);
    const alive = Array.from({ length: n }, () => 1 + Math.floor(random.uniform() * 20));
    const dead = alive.map(() => 1 + Math.floor(random.uniform() * 20));
    return {
      alive,
      released: alive.map((a, t) => a + dead[t]),
      data: sufficientStatistics(
        countsOf(
          alive.map((a, t) => a + dead[t]),
          alive.map((a, t) => alive.map((_, j) => (j === t ? a : 0))),
        ),
      ),
    };
  };

  test("value, gradient and information are those of a binomial regression in closed form (property)", () => {
    fc.assert(
      fc.property(...SIZES, (n, g, seed) => {
        const frame = { ...frameOf(g, n, seed), lengths: new Float64Array(n).fill(1) };
        const covariates = [0, 1].map((k) => ({ name: `x${k}`, values: normals(n, seed + 10 + k) }));
        const design = designOf(frame, covariateSurvival(frame, covariates), known);
        const drawn = frame.strata.map((_, i) => binomial(n, 10 * seed + i));
        const f = cjsLikelihood(
          drawn.map((one) => one.data),
          design,
        );
        const d = f.dimension;
        const x = normals(d, seed + 20);
        const gradient = new Float64Array(d);
        const value = f.evaluate(x, gradient);
        const information = new Float64Array(d * d);
        f.curvature(
          Int32Array.from({ length: d }, (_, k) => k),
          information,
        );
        // −log L = Σ N log(1 + e^η) − yη; its gradient Xᵀ(Ns − y) and XᵀDX, D = N s(1 − s) (McCullagh & Nelder 1989, §4.4)
        const { columns } = design.survival;
        const [slope, curve] = [new Float64Array(d), new Float64Array(d * d)];
        let expected = 0;
        for (let r = 0; r < g * n; r++) {
          const { alive, released } = drawn[Math.floor(r / n)];
          const [y, N] = [alive[r % n], released[r % n]];
          const eta = columns.reduce((sum, column, k) => sum + column[r] * x[k], 0);
          const s = 1 / (1 + Math.exp(-eta));
          expected += N * Math.log1p(Math.exp(eta)) - y * eta;
          for (let i = 0; i < d; i++) {
            slope[i] += columns[i][r] * (N * s - y);
            for (let j = 0; j < d; j++) curve[i * d + j] += N * s * (1 - s) * columns[i][r] * columns[j][r];
          }
        }
        const scale = 1 + Math.abs(expected);
        expect(Math.abs(value - expected)).toBeLessThan(1e-12 * scale);
        for (let i = 0; i < d; i++) expect(Math.abs(gradient[i] - slope[i])).toBeLessThan(1e-11 * scale);
        for (let i = 0; i < d * d; i++)
          expect(Math.abs(information[i] - curve[i])).toBeLessThan(1e-11 * scale);
      }),
      { numRuns: 100 },
    );
  });

  test("the information agrees with differences of the gradient at any lengths, on any working set (property)", () => {
    fc.assert(
      fc.property(...SIZES, (n, g, seed) => {
        const frame = frameOf(g, n, seed);
        const covariates = [0, 1, 2].map((k) => ({ name: `x${k}`, values: normals(n, seed + 10 + k) }));
        const design = designOf(frame, covariateSurvival(frame, covariates), known);
        const f = cjsLikelihood(
          frame.strata.map((_, i) => binomial(n, 10 * seed + i).data),
          design,
        );
        const d = f.dimension;
        const x = normals(d, seed + 20);
        const which = Int32Array.from({ length: d }, (_, k) => k).filter(
          (k) => (seed >> k) % 2 === 0 || k === 0,
        );
        const m = which.length;
        const out = new Float64Array(m * m);
        f.evaluate(x, new Float64Array(d));
        f.curvature(which, out);
        const h = 1e-5;
        which.forEach((k, i) => {
          const [up, down] = [Float64Array.from(x), Float64Array.from(x)];
          const [above, below] = [new Float64Array(d), new Float64Array(d)];
          up[k] += h;
          down[k] -= h;
          f.evaluate(up, above);
          f.evaluate(down, below);
          which.forEach((l, j) => {
            const difference = (above[l] - below[l]) / (2 * h);
            expect(Math.abs(out[i * m + j] - difference)).toBeLessThan(1e-6 * (1 + Math.abs(difference)));
          });
        });
      }),
      { numRuns: 100 },
    );
  });

  test("one survival per interval: y/N, with the binomial's standard error on the logit", () => {
    const n = 6;
    const frame = { ...frameOf(1, n, 3), lengths: new Float64Array(n).fill(1) };
    const { alive, released, data } = binomial(n, 3);
    const fit = fitModel([data], designOf(frame, intervalSurvival(frame), known));
    alive.forEach((y, t) => {
      const N = released[t];
      expect(fit.survival[t].value).toBeCloseTo(y / N, 10);
      expect(fit.se[t]).toBeCloseTo(Math.sqrt(N / (y * (N - y))), 8);
    });
  });
});
