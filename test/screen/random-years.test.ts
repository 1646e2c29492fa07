import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { mean } from "../../src/math/quantile.ts";
import { randomStream } from "../../src/math/random.ts";
import { chooseByRandomIntervals } from "../../src/screen/random-years.ts";
import { twoStepCandidates, twoStepEvidence, twoStepProblem } from "../../src/screen/two-step-candidates.ts";
import { chooseByYears } from "../../src/screen/years.ts";
import { maximiseRandomInterval } from "../../src/survival/random-interval.ts";
import { drawnProblem } from "../survival/small-problem.ts";

const N = 18;
const K = 5;

/** Residual sums of squares of regressions of a made-up y on sets of K columns, by Gram–Schmidt. */
function regression(seed: number, effect: number) {
  const random = randomStream(11, "random years", seed);
  const draw = () => Float64Array.from({ length: N }, () => random.normal());
  const shared = draw();
  // columns 0 and 1 tell much the same story
  const columns = Array.from({ length: K }, (_, k) =>
    draw().map((value, t) => (k < 2 ? 0.9 * shared[t] + 0.4 * value : value)),
  );
  const y = draw().map((value, t) => value + effect * columns[0][t] + effect * columns[3][t]);
  const centred = (values: Float64Array) => values.map((value) => value - mean(values));
  const dot = (a: Float64Array, b: Float64Array) => a.reduce((sum, value, t) => sum + value * b[t], 0);
  const without = (a: Float64Array, b: Float64Array) =>
    a.map((value, t) => value - (dot(a, b) / dot(b, b)) * b[t]);
  const rss = (set: readonly number[]) => {
    const basis: Float64Array[] = [];
    for (const k of set) basis.push(basis.reduce(without, centred(columns[k])));
    const left = basis.reduce(without, centred(y));
    return dot(left, left);
  };
  const correlation = (a: number, b: number) => {
    const [u, v] = [centred(columns[a]), centred(columns[b])];
    return dot(u, v) / Math.sqrt(dot(u, u) * dot(v, v));
  };
  return { rss, correlation };
}

const SUBSETS = Array.from({ length: 2 ** K }, (_, code) =>
  Array.from({ length: K }, (_, k) => k).filter((k) => (code >> k) & 1),
);

describe("the choice by random intervals", () => {
  test("with D = n log RSS it is the choice by analysis of deviance on RSS: the F of regression (property)", () => {
    let chosen = 0;
    fc.assert(
      fc.property(fc.nat(1000), fc.constantFrom(0, 0.5, 1), (seed, effect) => {
        const { rss, correlation } = regression(seed, effect);
        const random = chooseByRandomIntervals(
          SUBSETS,
          (set) => N * Math.log(rss(set)),
          { intervals: N, covariates: K, spent: 1 },
          correlation,
        );
        const years = chooseByYears(
          SUBSETS,
          rss,
          {
            intervals: N,
            covariates: K,
            interval: { minus2LogL: 0, parameters: N + 1 },
            constantParameters: 2,
          },
          correlation,
        );
        chosen += random.chosen.length;
        expect(random.chosen).toEqual(years.chosen);
        expect(random.rivals).toEqual(years.rivals);
        expect(random.ambiguous).toEqual(years.ambiguous);
        expect(random.gain).toBeCloseTo(years.gain, 9);
        expect(random.alpha).toBe(Math.min(0.045, 0.1 / K));
      }),
      { numRuns: 60 },
    );
    expect(chosen).toBeGreaterThan(20);
  });

  test("neither the order of candidates nor that inside a set matters, and each set is fitted once", () => {
    const { rss, correlation } = regression(4, 1);
    const asked: string[] = [];
    const evidence = (set: readonly number[]) => {
      asked.push(set.join());
      return N * Math.log(rss(set));
    };
    const setting = { intervals: N, covariates: K, spent: 1 };
    const one = chooseByRandomIntervals(SUBSETS, evidence, setting, correlation);
    const asking = [...asked];
    const other = chooseByRandomIntervals(
      [...SUBSETS].reverse().map((set) => [...set].reverse()),
      evidence,
      setting,
      correlation,
    );
    expect(one.chosen.length).toBeGreaterThan(0);
    expect(other.chosen).toEqual(one.chosen);
    expect(other.gain).toBe(one.gain);
    expect(new Set(asking).size).toBe(asking.length);
  });

  test("nothing stands where no evidence is offered, nor among too few intervals", () => {
    const flat = chooseByRandomIntervals(
      SUBSETS,
      () => 100,
      { intervals: N, covariates: K, spent: 1 },
      () => 0,
    );
    expect([flat.chosen, flat.gain]).toEqual([[], 0]);
    const few = chooseByRandomIntervals(
      [[0, 1]],
      (set) => -1000 * set.length,
      { intervals: 6, covariates: 2, spent: 1 },
      () => 0,
    );
    expect(few.chosen).toEqual([]);
  });
});

describe("two-step candidates and evidence", () => {
  test("start with nothing, hold the covariates that matter, and weigh sets as Laplace does", () => {
    const problem = drawnProblem(14, 1, 4, 400, 0.3);
    const quick = twoStepProblem(problem);
    const sets = twoStepCandidates(quick, { steps: 40, downTo: 0.001, gamma: 1 });
    expect(sets[0]).toEqual([]);
    expect(sets.some((set) => set.join() === "0,1")).toBe(true);
    const evidence = twoStepEvidence(quick);
    for (const set of [[0], [1], [0, 1]]) {
      const exact =
        maximiseRandomInterval(problem, []).minus2LogL - maximiseRandomInterval(problem, set).minus2LogL;
      expect(Math.abs(evidence([]) - evidence(set) - exact)).toBeLessThan(0.05 + 0.05 * exact);
    }
  });
});
