import { describe, expect, test } from "vitest";
import { withSensitivity } from "../../src/compare/compare.ts";
import { CAUTION } from "../../src/compare/paragraph.ts";
import {
  type Analysis,
  failedAnalysis,
  poseAnalysis,
  runAnalysis,
  summariseSensitivity,
} from "../../src/compare/sensitivity.ts";
import { permuteYears } from "../../src/screen/permutation.ts";
import { drawStudy, SCREEN } from "../support/study.ts";

const analysis = (
  name: string,
  byYears: string[],
  gain: number,
  rivals: Analysis["rivals"] = [],
): Analysis => ({
  name,
  changes: "",
  failed: undefined,
  candidates: ["a", "b", "c"],
  byYears,
  rivals,
  byAnimals: [],
  gain,
  share: 0.5,
  recapture: "constant",
});
const outcome = (gain: number) => ({
  gain,
  chosenByYears: gain > 0 ? 1 : 0,
  chosenByAnimals: 0,
  shareByYears: 0,
  shareByAnimals: 0,
});

describe("sensitivity", () => {
  test("the search is tested by the best gain over all analyses, permutation by permutation", () => {
    const analyses = [analysis("base", ["a"], 4), analysis("other", ["a"], 6)];
    const outcomes = [
      [outcome(7), outcome(0), outcome(1), outcome(5)],
      [outcome(0), outcome(0), outcome(6), outcome(2)],
    ];
    const { search, tried } = summariseSensitivity(analyses, outcomes);
    // best by permutation: 7, 0, 6, 5; found 6: two reach it, so (1 + 2)/(1 + 4)
    expect(search).toEqual({ replicates: 4, p: 3 / 5, falseByYears: 3 / 4 });
    expect(tried).toBe(2);
  });

  test("what fails is told, and counts neither as tried nor as agreeing", () => {
    const failed = failedAnalysis("bad", "detrended: difference", "expected values that differ");
    const { tried, sentence, stands } = summariseSensitivity(
      [
        analysis("base", ["a"], 4, [{ chosen: "a", others: ["b"] }]),
        failed,
        analysis("x", ["b"], 3),
        analysis("y", ["c"], 3),
      ],
      [],
    );
    expect(tried).toBe(3);
    expect(sentence).toBe(
      "Of 2 stated alternatives 1 chooses the same covariates counting years, or ones that the data cannot tell from them; of 3 analyses chosen: a in 1, b in 1 and c in 1. No p of a single analysis allows for 3 having been tried.",
    );
    expect(stands).toEqual([
      { name: "a", chosen: 1, rival: 0 },
      { name: "b", chosen: 1, rival: 1 },
      { name: "c", chosen: 1, rival: 0 },
    ]);
  });

  test("the same analysis twice is permuted in the same orders: the search is no wider than one", () => {
    const { problem, recapture } = drawStudy(
      4,
      { intervals: 12, covariates: 3, marked: 30, residual: 0.2 },
      [-0.7],
    );
    const posed = poseAnalysis(problem, recapture, SCREEN, 300);
    const outcomes = permuteYears({ ...posed, seed: 3, from: 0, to: 12 });
    const one = runAnalysis(posed, { name: "base", changes: "", recapture: "constant" });
    expect(one.candidates).toEqual(["x1", "x2", "x3"]);
    expect(one.gain > 0).toBe(one.byYears.length > 0);
    const once = summariseSensitivity([one], [outcomes]).search;
    const twice = summariseSensitivity([one, one], [outcomes, outcomes]).search;
    expect(twice).toEqual(once);
  });

  test("the paragraph tells it before its caution, and stays as it is without one", () => {
    const comparison = { paragraph: `Words. ${CAUTION}` } as Parameters<typeof withSensitivity>[0];
    expect(withSensitivity(comparison, undefined)).toBe(comparison);
    const sensitivity = summariseSensitivity([analysis("base", [], 0), analysis("x", [], 0)], []);
    const told = withSensitivity(comparison, sensitivity).paragraph;
    expect(told).toMatch(
      /^Words\. In 2 analyses .* nothing stands counting years in 2\. No p of a single analysis allows for 2/,
    );
    expect(told.endsWith(CAUTION)).toBe(true);
  });
});
