import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { InputError } from "../../src/errors.ts";
import { randomStream } from "../../src/math/random.ts";
import {
  constantRecapture,
  covariateSurvival,
  type Frame,
  intervalSurvival,
  occasionRecapture,
} from "../../src/survival/design.ts";
import { type Fit, fitModel } from "../../src/survival/fit.ts";
import { compareRecapture, designOf } from "../../src/survival/recapture-choice.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf } from "../support/reference.ts";

const frameOf = (intervals: number, strata: readonly string[] = ["all"]): Frame => ({
  strata,
  intervals,
  lengths: new Float64Array(intervals).fill(1),
  forced: [],
  effort: undefined,
});
/** Everyone is met at the next occasion or never. */
const nextTime = (numbers: readonly number[]) =>
  numbers.map((number, i) => numbers.map((_, j) => (i === j ? number : 0)));
const dataOf = (released: readonly number[], seen: readonly (readonly number[])[], stratum = "all") =>
  sufficientStatistics(countsOf(released, seen, stratum));
const same = (n: number, value: number) => new Array<number>(n).fill(value);

/** What every fit must be, whatever the data: numbers are numbers, and what has no standard error is named. */
function sound(fit: Fit): Fit {
  expect(fit.stopped).toBe("optimum");
  expect(Number.isFinite(fit.minus2LogL)).toBe(true);
  const named = new Set([...fit.atBound, ...fit.notSeparable.flat()]);
  fit.names.forEach((name, k) => {
    expect(Number.isFinite(fit.estimates[k])).toBe(true);
    if (named.has(name)) expect(fit.se[k]).toBeNaN();
    else expect(fit.se[k]).toBeGreaterThan(0);
  });
  for (const rate of [...fit.survival, ...fit.recapture]) {
    expect(rate.value >= 0 && rate.value <= 1).toBe(true);
    expect(Number.isNaN(rate.se) || rate.se > 0).toBe(true);
    if (!Number.isNaN(rate.se)) expect(rate.low <= rate.value && rate.value <= rate.high).toBe(true);
  }
  return fit;
}

const nameOf = (run: () => unknown): string => {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return error.facts.name;
    throw error;
  }
  return "nothing was thrown";
};

describe("degenerate data", () => {
  test("nobody met again, no releases, no animals: refused by name before anything is fitted", () => {
    for (const data of [
      dataOf(same(4, 10), nextTime(same(4, 0))),
      dataOf(same(4, 0), nextTime(same(4, 0))),
      dataOf([1, 0, 0, 0], nextTime(same(4, 0))),
    ])
      expect(nameOf(() => compareRecapture([data], frameOf(4), "choose"))).toBe("survival.nobody-met-again");
  });

  test("all always seen: −2 log L is 0, survival and recapture are at 1 and named, no standard error", () => {
    const frame = frameOf(5);
    for (const survival of [covariateSurvival(frame, []), intervalSurvival(frame)])
      for (const recapture of [constantRecapture(frame), occasionRecapture(frame)]) {
        const fit = sound(
          fitModel([dataOf(same(5, 10), nextTime(same(5, 10)))], designOf(frame, survival, recapture)),
        );
        expect(fit.minus2LogL).toBeCloseTo(0, 7);
        expect(fit.atBound).toEqual(fit.names);
        for (const rate of [...fit.survival, ...fit.recapture]) {
          expect(rate.value).toBeCloseTo(1, 7);
          expect(rate.se).toBeNaN();
        }
      }
  });

  test("one animal, met at occasions 1, 2 and 4: survival at 1, recapture 2 of 3", () => {
    const frame = frameOf(3);
    const data = [
      dataOf(
        [1, 1, 0],
        [
          [1, 0, 0],
          [0, 0, 1],
          [0, 0, 0],
        ],
      ),
    ];
    const fit = sound(
      fitModel(data, designOf(frame, covariateSurvival(frame, []), constantRecapture(frame))),
    );
    // p̂ = 2/3 where φ = 1: −2 log (2/3 · 1/3 · 2/3)
    expect(fit.minus2LogL).toBeCloseTo(-2 * Math.log(4 / 27), 8);
    expect(fit.atBound).toEqual(["survival at mean covariates"]);
    expect(fit.recapture[0].value).toBeCloseTo(2 / 3, 8);
    expect(fit.recapture[0].se).toBeCloseTo(Math.sqrt(2 / 27), 6);
  });

  test("two occasions: only the product of survival and recapture, 8 of 20", () => {
    const frame = frameOf(1);
    const fit = sound(
      fitModel([dataOf([20], [[8]])], designOf(frame, intervalSurvival(frame), occasionRecapture(frame))),
    );
    expect(fit.parameters).toBe(1);
    expect(fit.notSeparable).toEqual([["survival of interval 1", "recapture at occasion 2"]]);
    expect(fit.survival[0].value * fit.recapture[0].value).toBeCloseTo(0.4, 8);
  });

  test("an occasion with no captures: its recapture is 0, and the survivals around it only as a product", () => {
    const frame = frameOf(4);
    const data = [
      dataOf(
        [20, 0, 20, 20],
        [
          [0, 9, 2, 0],
          [0, 0, 0, 0],
          [0, 0, 12, 3],
          [0, 0, 0, 11],
        ],
      ),
    ];
    const fit = sound(fitModel(data, designOf(frame, intervalSurvival(frame), occasionRecapture(frame))));
    expect(fit.atBound).toEqual(["recapture at occasion 2"]);
    expect(fit.recapture[0].value).toBeLessThan(1e-6);
    expect(fit.notSeparable).toEqual([
      ["survival of interval 1", "survival of interval 2"],
      ["survival of interval 4", "recapture at occasion 5"],
    ]);
    // 8 coefficients, two of which only stretch a product
    expect(fit.parameters).toBe(6);
    // the same data without that occasion, where the first interval spans it
    const short = frameOf(3);
    const without = [
      dataOf(
        [20, 20, 20],
        [
          [9, 2, 0],
          [0, 12, 3],
          [0, 0, 11],
        ],
      ),
    ];
    const direct = fitModel(without, designOf(short, intervalSurvival(short), occasionRecapture(short)));
    expect(fit.minus2LogL).toBeCloseTo(direct.minus2LogL, 8);
    expect(fit.survival[0].value * fit.survival[1].value).toBeCloseTo(direct.survival[0].value, 6);
    expect(fit.survival[2].se).toBeCloseTo(direct.survival[1].se, 6);
  });

  test("a stratum with no recaptures: its survival is 0, at a bound; the other stratum as if alone", () => {
    const frame = frameOf(4, ["a", "b"]);
    const seen = [
      [10, 2, 1, 0],
      [0, 11, 3, 1],
      [0, 0, 12, 3],
      [0, 0, 0, 9],
    ];
    const a = dataOf(same(4, 20), seen, "a");
    const b = dataOf(same(4, 20), nextTime(same(4, 0)), "b");
    const fit = sound(
      fitModel([a, b], designOf(frame, covariateSurvival(frame, []), constantRecapture(frame))),
    );
    const alone = frameOf(4, ["a"]);
    const one = fitModel([a], designOf(alone, covariateSurvival(alone, []), constantRecapture(alone)));
    expect(fit.atBound).toEqual(["b against a"]);
    expect(fit.survival[4].value).toBeLessThan(1e-6);
    expect(fit.survival[0].value).toBeCloseTo(one.survival[0].value, 6);
    expect(fit.survival[0].se).toBeCloseTo(one.survival[0].se, 6);
    expect(fit.minus2LogL).toBeCloseTo(one.minus2LogL, 6);
    // with everything per occasion, the last survival and recapture of a are named together, though recapture ran to 1
    const free = sound(fitModel([a, b], designOf(frame, intervalSurvival(frame), occasionRecapture(frame))));
    expect(free.notSeparable).toEqual([["survival of interval 4", "recapture at occasion 5"]]);
    const empty = sound(
      fitModel(
        [a, dataOf(same(4, 0), nextTime(same(4, 0)), "b")],
        designOf(frame, covariateSurvival(frame, []), constantRecapture(frame)),
      ),
    );
    expect(empty.notSeparable).toEqual([["b against a"]]);
    expect(empty.survival[4].se).toBeNaN();
  });

  test("a covariate that separates: at its bound, and rates inside (0, 1) keep their standard error", () => {
    const frame = frameOf(6);
    const x = { name: "x", values: Float64Array.from([1, -1, 1, -1, 1, -1]) };
    const whole = [dataOf(same(6, 20), nextTime([20, 0, 20, 0, 20, 0]))];
    for (const recapture of [constantRecapture(frame), { known: 1 }]) {
      const fit = sound(fitModel(whole, designOf(frame, covariateSurvival(frame, [x]), recapture)));
      expect(fit.minus2LogL).toBeCloseTo(0, 6);
      expect(fit.atBound).toContain("x");
    }
    const half = [dataOf(same(6, 20), nextTime([20, 9, 20, 8, 20, 11]))];
    const fit = sound(fitModel(half, designOf(frame, covariateSurvival(frame, [x]), { known: 1 })));
    expect(fit.atBound).toEqual(["survival at mean covariates", "x"]);
    expect(fit.survival[0].se).toBeNaN();
    // 28 of 60: binomial standard error
    expect(fit.survival[1].value).toBeCloseTo(28 / 60, 8);
    expect(fit.survival[1].se).toBeCloseTo(Math.sqrt((28 * 32) / 60 ** 3), 6);
  });

  test("equal columns and more columns than intervals: named, once; survival is still estimated as it should be", () => {
    const frame = frameOf(6);
    const values = Float64Array.from([1, 2, 0, 1, -1, -3]);
    const data = [
      dataOf(same(6, 20), [
        [8, 1, 0, 0, 0, 0],
        [0, 9, 2, 0, 0, 0],
        [0, 0, 10, 0, 0, 0],
        [0, 0, 0, 11, 1, 0],
        [0, 0, 0, 0, 9, 1],
        [0, 0, 0, 0, 0, 12],
      ]),
    ];
    const fitWith = (columns: readonly Float64Array[]) =>
      fitModel(
        data,
        designOf(
          frame,
          covariateSurvival(
            frame,
            columns.map((column, k) => ({ name: `z${k}`, values: column })),
          ),
          constantRecapture(frame),
        ),
      );
    const one = sound(fitWith([values]));
    const two = sound(fitWith([values, values]));
    expect(two.notSeparable).toEqual([["z0", "z1"]]);
    expect(two.parameters).toBe(one.parameters);
    expect(two.minus2LogL).toBeCloseTo(one.minus2LogL, 9);
    two.survival.forEach((rate, t) => expect(rate.se).toBeCloseTo(one.survival[t].se, 6));
    const random = randomStream(4, "many columns", 0);
    const many = sound(
      fitWith(Array.from({ length: 30 }, () => Float64Array.from({ length: 6 }, () => random.normal()))),
    );
    const free = fitModel(data, designOf(frame, intervalSurvival(frame), constantRecapture(frame)));
    expect(many.notSeparable.length).toBe(1);
    expect(many.parameters).toBe(7);
    expect(many.minus2LogL).toBeCloseTo(free.minus2LogL, 7);
    many.survival.forEach((rate, t) => expect(rate.se).toBeCloseTo(free.survival[t].se, 5));
  });

  test("refused by name: a column with a gap, a known recapture that the captures contradict, effort missing", () => {
    const frame = frameOf(2);
    const data = [
      dataOf(
        [10, 10],
        [
          [4, 2],
          [0, 5],
        ],
      ),
    ];
    const gap = covariateSurvival(frame, [{ name: "rain", values: Float64Array.from([1, Number.NaN]) }]);
    expect(nameOf(() => fitModel(data, designOf(frame, gap, constantRecapture(frame))))).toBe(
      "survival.column-not-finite",
    );
    const none = covariateSurvival(frame, []);
    for (const known of [0, 1, 1.5, Number.NaN])
      expect(nameOf(() => fitModel(data, designOf(frame, none, { known })))).toBe("survival.known-recapture");
    expect(nameOf(() => compareRecapture(data, frame, "effort"))).toBe("survival.no-effort");
  });

  test("small counts of any kind end in an optimum with numbers, or nothing at all (property)", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 5 }), fc.nat(5000), (n, seed) => {
        const random = randomStream(11, "small counts", seed);
        const few = () => (random.uniform() < 0.5 ? 0 : random.below(4));
        const seen = Array.from({ length: n }, (_, i) =>
          Array.from({ length: n }, (_, j) => (j < i ? 0 : few())),
        );
        const released = seen.map((row) => row.reduce((a, b) => a + b, 0) + few());
        const frame = frameOf(n);
        const data = [dataOf(released, seen)];
        for (const recapture of [constantRecapture(frame), occasionRecapture(frame)])
          for (const survival of [covariateSurvival(frame, []), intervalSurvival(frame)])
            sound(fitModel(data, designOf(frame, survival, recapture)));
      }),
      { numRuns: 150 },
    );
  });
});
