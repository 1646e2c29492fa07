import { describe, expect, test } from "vitest";
import {
  constantRecapture,
  effortRecapture,
  occasionRecapture,
  withStrata,
} from "../../src/survival/design.ts";
import { compareRecapture } from "../../src/survival/recapture-choice.ts";
import { smallProblem } from "./small-problem.ts";

const partsOf = (strata: number, effort: boolean) => {
  const { data, frame } = smallProblem(5, strata, 4, 40);
  const { effort: hours, ...bare } = frame;
  const shape = { ...bare, effort: effort ? hours : undefined };
  return compareRecapture(data, shape, "choose").rows.map((row) => row.part);
};

describe("recapture parts that are compared", () => {
  test("those the study has what it takes for, simpler ones first", () => {
    expect(partsOf(1, false)).toEqual(["constant", "each occasion"]);
    expect(partsOf(1, true)).toEqual(["constant", "effort", "each occasion"]);
    expect(partsOf(2, false)).toEqual(["constant", "strata", "each occasion", "each occasion and strata"]);
    expect(partsOf(2, true)).toEqual([
      "constant",
      "effort",
      "strata",
      "effort and strata",
      "each occasion",
      "each occasion and strata",
    ]);
  });

  test("a part with strata says so in words", () => {
    const { frame } = smallProblem(5, 2, 4);
    expect(withStrata(frame, constantRecapture(frame)).words).toBe("by stratum");
    for (const part of [occasionRecapture(frame), effortRecapture(frame, new Float64Array(5))])
      expect(withStrata(frame, part).words).toBe(`${part.words}, by stratum`);
  });
});
