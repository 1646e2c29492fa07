import { describe, expect, test } from "vitest";
import { chooseByYears } from "../../src/screen/years.ts";

const setting = {
  intervals: 20,
  covariates: 4,
  interval: { minus2LogL: 1000, parameters: 21 },
  constantParameters: 2,
};
/** D(S) − D_t by set, as if years were normal: 19 intervals' worth of deviance, less what a covariate explains. */
const leftBy = (table: Readonly<Record<string, number>>, other: number) => (set: readonly number[]) =>
  1000 + (table[[...set].sort().join(",")] ?? other);
const unrelated = () => 0;

describe("the choice by years", () => {
  test("a covariate that explains most of the deviance between years stands, and its gain is what the formula says", () => {
    const refit = leftBy({ "": 100, "0": 20, "0,1": 19.9 }, 90);
    const choice = chooseByYears([[], [0], [0, 1]], refit, setting, unrelated);
    expect(choice.chosen).toEqual([0]);
    // n log(100/20) − n log(1 + F_{α;1,18}/18), α = .1/4; F_{.025;1,18} = 5.9781 (from memory, the usual tables)
    expect(choice.gain).toBeCloseTo(20 * Math.log(5) - 20 * Math.log(1 + 5.9781 / 18), 3);
    expect(choice.alpha).toBe(0.025);
  });

  test("what does not reach the bar of few years is let go, however many animals stand behind it", () => {
    // F = 18 (100/80 − 1) = 4.5, p ≈ .048 > .025: 20 units of deviance would be overwhelming if animals counted
    expect(chooseByYears([[], [0]], leftBy({ "": 100, "0": 80 }, 99), setting, unrelated).chosen).toEqual([]);
  });

  test("sets larger than ⌊(n − 2)/3⌋ are not weighed", () => {
    const small = { ...setting, intervals: 5, interval: { minus2LogL: 1000, parameters: 6 } };
    const choice = chooseByYears([[0, 1]], leftBy({ "": 100, "0,1": 0.01 }, 50), small, unrelated);
    expect(choice.weighed).toEqual([]);
    expect(choice.chosen).toEqual([]);
  });

  test("a covariate that tells the same story and would do as well is named as a rival", () => {
    const refit = leftBy({ "": 100, "0": 20, "1": 21 }, 95);
    const twins = (a: number, b: number) => (a + b === 1 ? 0.9 : 0);
    const choice = chooseByYears([[0]], refit, setting, twins);
    expect(choice.chosen).toEqual([0]);
    expect(choice.rivals).toEqual([{ chosen: 0, others: [1] }]);
  });

  test("if an unrelated covariate would do as well, neither is chosen", () => {
    const refit = leftBy({ "": 100, "0": 20, "1": 21 }, 95);
    const choice = chooseByYears([[0]], refit, setting, unrelated);
    expect(choice.chosen).toEqual([]);
    expect(choice.ambiguous).toEqual([0]);
    expect(choice.gain).toBe(0);
  });
});
