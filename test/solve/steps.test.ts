import { describe, expect, test } from "vitest";
import { noPenalty, weightedL1 } from "../../src/solve/penalty.ts";
import { proximalNewton } from "../../src/solve/proximal-newton.ts";
import type { Smooth } from "../../src/solve/smooth.ts";

// What the path of the iteration must keep to where one Newton step is not enough.

const OPTIONS = { tolerance: 1e-12, iterations: 100 };

/** A function of each coordinate alone: f, f′ and f″ in one variable, and how often it was evaluated. */
function separable(
  d: number,
  f: (x: number, k: number) => number,
  slope: (x: number, k: number) => number,
  bend: (x: number, k: number) => number,
): Smooth & { readonly values: number[] } {
  let at = new Float64Array(d);
  const values: number[] = [];
  return {
    dimension: d,
    values,
    evaluate: (x, gradient) => {
      at = x.slice();
      x.forEach((one, k) => {
        gradient[k] = slope(one, k);
      });
      const value = x.reduce((sum, one, k) => sum + f(one, k), 0);
      values.push(value);
      return value;
    },
    curvature: (which, out) => {
      out.fill(0);
      which.forEach((k, i) => {
        out[i * which.length + i] = bend(at[k], k);
      });
    },
  };
}

/** ½ Σ (x − c)²: with weighted L1 the solution is c softly thresholded (Donoho & Johnstone 1994). */
const parabolas = (c: readonly number[]) =>
  separable(
    c.length,
    (x, k) => (x - c[k]) ** 2 / 2,
    (x, k) => x - c[k],
    () => 1,
  );
const soft = (c: number, threshold: number) => Math.sign(c) * Math.max(0, Math.abs(c) - threshold);

describe("steps of proximal Newton", () => {
  test("forty coordinates that all violate their condition, many equally: soft thresholds, objective by hand", () => {
    const c = Array.from({ length: 40 }, (_, k) => (k % 4 === 0 ? -3 : 1 + (k % 5)));
    const weights = Float64Array.from(c, (_, k) => 1 + (k % 3));
    const start = new Float64Array(40);
    const solution = proximalNewton(parabolas(c), weightedL1(0.7, weights), start, OPTIONS);
    const expected = c.map((one, k) => soft(one, 0.7 * weights[k]));
    expect(solution.stopped).toBe("optimum");
    expected.forEach((one, k) => {
      expect(solution.x[k]).toBeCloseTo(one, 12);
    });
    const smooth = c.reduce((sum, one, k) => sum + (expected[k] - one) ** 2 / 2, 0);
    const penalty = expected.reduce((sum, one, k) => sum + 0.7 * weights[k] * Math.abs(one), 0);
    expect(solution.smooth).toBeCloseTo(smooth, 10);
    expect(solution.objective).toBeCloseTo(smooth + penalty, 10);
    // At most ten of them enter in one step.
    expect(solution.iterations).toBeGreaterThanOrEqual(4);
  });

  test("the start stays as it was given, over one step and over many", () => {
    const start = Float64Array.of(2, -1);
    proximalNewton(parabolas([5, 5]), weightedL1(1, Float64Array.of(1, 1)), start, OPTIONS);
    expect(Array.from(start)).toEqual([2, -1]);
    const far = Float64Array.of(3, -3);
    // cosh x − 2x: f″ = f + 2x, several steps from 3 and from −3
    const curve = separable(
      2,
      (x) => Math.cosh(x) - 2 * x,
      (x) => Math.sinh(x) - 2,
      Math.cosh,
    );
    const solution = proximalNewton(curve, noPenalty, far, OPTIONS);
    expect(solution.iterations).toBeGreaterThan(3);
    expect(Array.from(far)).toEqual([3, -3]);
    for (const x of solution.x) expect(x).toBeCloseTo(Math.asinh(2), 12);
  });

  test("where the start is the optimum nothing is stepped", () => {
    const target = parabolas([5, -2]);
    const solution = proximalNewton(target, noPenalty, Float64Array.of(5, -2), OPTIONS);
    expect(solution).toMatchObject({ stopped: "optimum", iterations: 0, violation: 0 });
    expect(target.values.length).toBe(1);
  });

  test("a slope that does not belong to its function is told by the reason of the stop, at the start", () => {
    const lying = separable(
      2,
      (x) => (x - 5) ** 2 / 2,
      (x) => 5 - x,
      () => 1,
    );
    const solution = proximalNewton(lying, noPenalty, Float64Array.of(1, 2), OPTIONS);
    expect(solution.stopped).toBe("no lower point");
    expect(Array.from(solution.x)).toEqual([1, 2]);
    expect(solution.smooth).toBe(12.5);
    expect(solution.violation).toBe(4);
  });

  test("an optimum in the last step that is allowed counts; one step less is too few", () => {
    const once = { ...OPTIONS, iterations: 1 };
    const none = { ...OPTIONS, iterations: 0 };
    const penalty = weightedL1(1, Float64Array.of(1));
    expect(proximalNewton(parabolas([5]), penalty, Float64Array.of(0), once)).toMatchObject({
      stopped: "optimum",
      iterations: 1,
    });
    expect(proximalNewton(parabolas([5]), penalty, Float64Array.of(0), none).stopped).toBe(
      "too many iterations",
    );
  });

  test.each([
    ["without a penalty", 0],
    ["with one", 0.25],
  ])("log cosh from 3, where a whole Newton step goes much too far, %s", (_, lambda) => {
    // f = log cosh x − ½ x, f′ = tanh x − ½, f″ = 1/cosh² x. Minimum where tanh x = ½ − λ: x = atanh(½ − λ).
    const wave = separable(
      1,
      (x) => Math.log(Math.cosh(x)) - x / 2,
      (x) => Math.tanh(x) - 0.5,
      (x) => 1 / Math.cosh(x) ** 2,
    );
    const penalty = lambda === 0 ? noPenalty : weightedL1(lambda, Float64Array.of(1));
    const solution = proximalNewton(wave, penalty, Float64Array.of(3), OPTIONS);
    expect(solution.stopped).toBe("optimum");
    expect(solution.x[0]).toBeCloseTo(Math.atanh(0.5 - lambda), 10);
    // The whole step was tried and refused: its value is above the start's.
    expect(wave.values[1]).toBeGreaterThan(wave.values[0]);
    expect(solution.objective).toBeCloseTo(
      Math.log(Math.cosh(solution.x[0])) - solution.x[0] / 2 + lambda * solution.x[0],
      12,
    );
  });

  test("no curvature at all at the start", () => {
    // f = 1 − cos x from ½π: f″ = cos x = 0 there, minimum at 0.
    const wave = separable(
      1,
      (x) => 1 - Math.cos(x),
      (x) => Math.sin(x),
      (x) => Math.cos(x) * (Math.abs(x - Math.PI / 2) < 1e-12 ? 0 : 1),
    );
    const solution = proximalNewton(wave, noPenalty, Float64Array.of(Math.PI / 2), OPTIONS);
    expect(solution.stopped).toBe("optimum");
    expect(Math.cos(solution.x[0])).toBeCloseTo(1, 12);
  });

  test("negative curvature in one direction, positive in the other", () => {
    // f = (x² − 1)²/4 + 2(y − 3)² from (0.1, 0): minimum at (1, 3).
    const [f, slope, bend] = [
      (x: number, k: number) => (k === 0 ? (x * x - 1) ** 2 / 4 : 2 * (x - 3) ** 2),
      (x: number, k: number) => (k === 0 ? x * (x * x - 1) : 4 * (x - 3)),
      (x: number, k: number) => (k === 0 ? 3 * x * x - 1 : 4),
    ];
    const solution = proximalNewton(
      separable(2, f, slope, bend),
      noPenalty,
      Float64Array.of(0.1, 0),
      OPTIONS,
    );
    expect(solution.stopped).toBe("optimum");
    expect(solution.x[0]).toBeCloseTo(1, 10);
    expect(solution.x[1]).toBeCloseTo(3, 10);
  });
});
