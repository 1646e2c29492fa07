import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { noPenalty, weightedL1 } from "../../src/solve/penalty.ts";
import { proximalNewton } from "../../src/solve/proximal-newton.ts";
import type { Smooth } from "../../src/solve/smooth.ts";
import { reference } from "../support/reference.ts";

interface GaussianLasso {
  readonly data: {
    Q_XtX: number[][];
    c_Xt_y_centred: number[];
    weighted: { Q: number[][]; c: number[]; penalty_weights: number[] };
  };
  readonly expected: {
    lasso: { lambda_max_total: number; lambda_total: number[]; coef: number[][] };
    adaptive_lasso: {
      weights_1_over_abs_ols: number[];
      lambda_max_total: number;
      path: { lambda_total: number; coef: number[] }[];
    };
    weighted_quadratic_unpenalised_intercept: {
      path: { lambda_total: number; coef_intercept_first: number[] }[];
    };
  };
}

/** ½ bᵀQb − cᵀb. */
function quadratic(q: readonly (readonly number[])[], c: readonly number[]): Smooth {
  return {
    dimension: c.length,
    evaluate: (b, gradient) => {
      let value = 0;
      c.forEach((cell, i) => {
        gradient[i] = q[i].reduce((sum, entry, j) => sum + entry * b[j], 0) - cell;
        value += 0.5 * b[i] * (gradient[i] - cell);
      });
      return value;
    },
    curvature: (which, out) => {
      which.forEach((a, i) => {
        which.forEach((b, j) => {
          out[i * which.length + j] = q[a][b];
        });
      });
    },
  };
}

/** ½/n Σ (y − b0 − xᵀb)², the intercept first. */
function leastSquares(x: readonly (readonly number[])[], y: readonly number[]): Smooth {
  const d = x[0].length + 1;
  const rows = x.map((row) => [1, ...row]);
  return {
    dimension: d,
    evaluate: (b, gradient) => {
      gradient.fill(0);
      let value = 0;
      rows.forEach((row, i) => {
        const left = row.reduce((sum, cell, k) => sum + cell * b[k], -y[i]);
        value += (left * left) / 2 / y.length;
        row.forEach((cell, k) => {
          gradient[k] += (left * cell) / y.length;
        });
      });
      return value;
    },
    curvature: (which, out) => {
      which.forEach((a, i) => {
        which.forEach((b, j) => {
          out[i * which.length + j] = rows.reduce((sum, row) => sum + row[a] * row[b], 0) / y.length;
        });
      });
    },
  };
}

describe("proximal Newton", () => {
  test("the conditions of Karush, Kuhn and Tucker hold on random weighted problems (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 12 }),
        fc.nat(10_000),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (k, seed, share) => {
          const random = randomStream(seed, "lasso", k);
          const x = Array.from({ length: 25 }, () => Array.from({ length: k }, () => random.normal()));
          const y = x.map((row) => row[0] - (row[1] ?? 0) + random.normal());
          const weights = Float64Array.from({ length: k + 1 }, (_, i) =>
            i === 0 ? 0 : 0.2 + random.uniform() * 3,
          );
          const solution = proximalNewton(
            leastSquares(x, y),
            weightedL1(share, weights),
            new Float64Array(k + 1),
            {
              tolerance: 1e-12,
              iterations: 100,
            },
          );
          expect(solution.stopped).toBe("optimum");
          expect(solution.violation).toBeLessThanOrEqual(1e-12);
        },
      ),
      { numRuns: 200 },
    );
  });

  test("a function with negative curvature at the start still ends at its minimum", () => {
    // f(x) = x⁴/4 − x²/2: curvature −1 at 0, minima at ±1
    const wave: Smooth = (() => {
      let at = 0;
      return {
        dimension: 1,
        evaluate: (x: Float64Array, gradient: Float64Array) => {
          at = x[0];
          gradient[0] = at ** 3 - at;
          return at ** 4 / 4 - at ** 2 / 2;
        },
        curvature: (_which: Int32Array, out: Float64Array) => {
          out[0] = 3 * at ** 2 - 1;
        },
      };
    })();
    const solution = proximalNewton(wave, noPenalty, Float64Array.from([0.1]), {
      tolerance: 1e-12,
      iterations: 100,
    });
    expect(solution.stopped).toBe("optimum");
    expect(solution.x[0]).toBeCloseTo(1, 10);
  });

  test("a start outside the domain is named", () => {
    const nowhere: Smooth = { dimension: 1, evaluate: () => Number.POSITIVE_INFINITY, curvature: () => {} };
    expect(
      proximalNewton(nowhere, noPenalty, new Float64Array(1), { tolerance: 1e-9, iterations: 9 }).stopped,
    ).toBe("start outside the domain");
  });

  // Efron, Hastie, Johnstone & Tibshirani (2004) diabetes data; I_gaussian_lasso.json, made with scikit-learn 1.2 and
  // numpy; its tolerance is 1e-7 absolute on coefficients of size 1 to 800.
  const file = reference<GaussianLasso>("I_gaussian_lasso");
  const walk = (
    smooth: Smooth,
    weights: Float64Array,
    path: readonly { lambda: number; coef: readonly number[] }[],
  ) => {
    let x: Float64Array = new Float64Array(smooth.dimension);
    for (const { lambda, coef } of path) {
      const solution = proximalNewton(smooth, weightedL1(lambda, weights), x, {
        tolerance: 1e-9,
        iterations: 50,
      });
      expect(solution.violation).toBeLessThan(1e-8);
      coef.forEach((value, k) => {
        expect(Math.abs(solution.x[k] - value)).toBeLessThan(1e-7);
      });
      x = solution.x;
    }
  };

  test("Gaussian lasso path of the diabetes data", () => {
    const { lasso } = file.expected;
    walk(
      quadratic(file.data.Q_XtX, file.data.c_Xt_y_centred),
      new Float64Array(10).fill(1),
      lasso.lambda_total.map((lambda, i) => ({ lambda, coef: lasso.coef[i] })),
    );
  });

  test("adaptive path of the diabetes data", () => {
    const { adaptive_lasso: adaptive } = file.expected;
    walk(
      quadratic(file.data.Q_XtX, file.data.c_Xt_y_centred),
      Float64Array.from(adaptive.weights_1_over_abs_ols),
      adaptive.path.map((one) => ({ lambda: one.lambda_total, coef: one.coef })),
    );
  });

  test("observation weights and an unpenalised intercept", () => {
    const { weighted } = file.data;
    walk(
      quadratic(weighted.Q, weighted.c),
      Float64Array.from(weighted.penalty_weights),
      file.expected.weighted_quadratic_unpenalised_intercept.path.map((one) => ({
        lambda: one.lambda_total,
        coef: one.coef_intercept_first,
      })),
    );
  });
});

test("a start where the curvature has all but vanished: the way back is found, however far the model's minimum lies", () => {
  // −log of 3 deaths among 50: f = 47 log(1 + e^−x) + 3 log(1 + e^x), least at log(47/3); at −54.7 its curvature is 8e-23
  const binomial: Smooth = {
    dimension: 1,
    evaluate: ([x], gradient) => {
      gradient[0] = 3 / (1 + Math.exp(-x)) - 47 / (1 + Math.exp(x));
      const softplus = (z: number) => Math.max(z, 0) + Math.log1p(Math.exp(-Math.abs(z)));
      last = x;
      return 47 * softplus(-x) + 3 * softplus(x);
    },
    curvature: (_, out) => {
      out[0] = 50 / ((1 + Math.exp(-last)) * (1 + Math.exp(last)));
    },
  };
  let last = 0;
  for (const start of [-54.7, -30, 3, 30]) {
    const found = proximalNewton(binomial, noPenalty, Float64Array.of(start), {
      tolerance: 1e-9,
      iterations: 200,
    });
    expect(found.stopped, String(start)).toBe("optimum");
    expect(found.x[0]).toBeCloseTo(Math.log(47 / 3), 9);
  }
});
