import { describe, expect, test } from "vitest";
import { mean } from "../../src/math/quantile.ts";
import { type Random, randomStream } from "../../src/math/random.ts";
import { correctedLagOne, inflation, lagOne, memoryOf } from "../../src/screen/memory.ts";
import { chooseByRandomIntervals } from "../../src/screen/random-years.ts";
import { twoStepProblem } from "../../src/screen/two-step-candidates.ts";
import { drawnProblem } from "../survival/small-problem.ts";

function series(n: number, memory: number, random: Random): Float64Array {
  const out = Float64Array.from({ length: n }, () => random.normal());
  for (let t = 1; t < n; t++) out[t] = memory * out[t - 1] + Math.sqrt(1 - memory * memory) * out[t];
  return out;
}

describe("memory from year to year", () => {
  test("lag-one correlation by hand: 1, 2, 3, 4 has (−1.5·−.5 + −.5·.5 + .5·1.5)/5 = .25", () => {
    expect(lagOne([1, 2, 3, 4])).toBeCloseTo(0.25, 12);
    expect(lagOne([3, 3, 3])).toBe(0);
    expect(correctedLagOne([1, 2, 3, 4])).toBe(0.25 + 1.75 / 4);
  });

  test("the correction takes away two thirds or more of what short series fall short by (20 years, ρ = .3 and .6)", () => {
    for (const rho of [0.3, 0.6]) {
      const all = Array.from({ length: 2000 }, (_, r) => series(20, rho, randomStream(12, `lag ${rho}`, r)));
      const raw = mean(all.map((one) => lagOne(one)));
      const mended = mean(all.map((one) => correctedLagOne(one)));
      expect(raw).toBeLessThan(rho - 0.06);
      // (1 + 3ρ)/n is some five sixths of the whole bias at n = 20, and is worked out at r, which lacks 3/n of it:
      // .83 · .85 = .71 of the bias goes
      expect(Math.abs(mended - rho)).toBeLessThan((rho - raw) / 3);
      expect(mended).toBeLessThan(rho);
    }
  });

  test("inflation is the variance of a cross-product of two autoregressions against that of white noise", () => {
    // Bartlett (1935): n · var(mean of x_t e_t) → (1 + ρρ′)/(1 − ρρ′)
    const [n, replicates] = [400, 1500];
    const sums = Array.from({ length: replicates }, (_, r) => {
      const random = randomStream(12, "cross", r);
      const [x, e] = [series(n, 0.6, random), series(n, 0.7, random)];
      return x.reduce((sum, value, t) => sum + value * e[t], 0) / Math.sqrt(n);
    });
    const variance = mean(sums.map((one) => one * one));
    // relative standard error of a variance from 1500 draws: 3.7 %
    expect(Math.abs(variance / inflation(0.6, 0.7) - 1)).toBeLessThan(0.11);
    expect([inflation(-0.5, 0.6), inflation(0.6, 0), inflation(-0.5, -0.6)]).toEqual([1, 1, 1]);
  });

  test("where nothing remembers the choice is untouched, and much memory lets a weak term go by name", () => {
    const evidence = (set: readonly number[]) =>
      100 - (set.includes(0) ? 11 : 0) - (set.includes(1) ? 60 : 0);
    const setting = { intervals: 20, covariates: 2, spent: 1 };
    const sets = [[], [0], [1], [0, 1]];
    const none = chooseByRandomIntervals(sets, evidence, setting, () => 0);
    expect(none.chosen).toEqual([0, 1]);
    const white = chooseByRandomIntervals(
      sets,
      evidence,
      setting,
      () => 0,
      () => 1,
    );
    expect({ ...white }).toEqual({ ...none });
    const long = chooseByRandomIntervals(
      sets,
      evidence,
      setting,
      () => 0,
      () => 3,
    );
    expect(long.chosen).toEqual([1]);
    expect(long.byMemory).toEqual([0]);
    expect(long.gain).toBeGreaterThan(0);
  });

  test("the residual is taken without the term itself: a term cannot hide the memory it takes away", () => {
    const problem = drawnProblem(24, 1, 4, 400, 0);
    const slow = Float64Array.from({ length: 24 }, (_, t) => Math.sin((2 * Math.PI * t) / 24));
    const survival = slow.map((value) => 1 / (1 + Math.exp(-0.6 - 1.2 * value)));
    // logits that follow the slow covariate: everything but the residual with it is remembered
    const quick = twoStepProblem({ ...problem, covariates: [{ name: "slow", values: slow }] });
    const logits = survival.map((s) => Math.log(s / (1 - s)));
    const rotated = Float64Array.from(quick.two.rotation, (row) =>
      row.reduce((sum, u, t) => sum + u * logits[t], 0),
    );
    const made = { ...quick.two, logits, rotated };
    const memory = memoryOf(
      { ...problem, covariates: [{ name: "slow", values: slow }] },
      {
        ...quick,
        two: made,
        rotated: { ...quick.rotated, two: made },
      },
    );
    expect(memory(0, [])).toBeCloseTo(inflation(0.9, 0.9), 10);
  });
});
