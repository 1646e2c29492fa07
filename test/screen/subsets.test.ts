import { describe, expect, test } from "vitest";
import { bestSmallSubset } from "../../src/screen/subsets.ts";

const setting = {
  intervals: 15,
  covariates: 6,
  interval: { minus2LogL: 0, parameters: 16 },
  constantParameters: 2,
  sampleSize: 500,
};

describe("all small subsets", () => {
  test("every subset of at most ⌊n/5⌋ covariates is fitted once: 1 + 6 + 15 + 20 = 42", () => {
    const seen: string[] = [];
    const result = bestSmallSubset((set) => seen.push(set.join(",")) && 100 - 10 * set.length, setting, {
      chooseBy: "BIC",
    });
    expect(seen).toHaveLength(42);
    expect(new Set(seen).size).toBe(42);
    expect(result?.tried).toBe(42);
  });

  test("the least criterion wins, ties go to the smaller subset", () => {
    const value = (set: readonly number[]) => (set.join(",") === "1,4" ? 50 : 100);
    expect(bestSmallSubset(value, setting, { chooseBy: "BIC" })?.set).toEqual([1, 4]);
    expect(bestSmallSubset(() => 100, setting, { chooseBy: "AICc" })?.set).toEqual([]);
  });

  test("too many subsets are not gone through", () => {
    expect(
      bestSmallSubset(() => 1, { ...setting, intervals: 60, covariates: 40 }, { chooseBy: "BIC" }),
    ).toBeUndefined();
  });
});
