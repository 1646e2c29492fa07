import { expect, test } from "vitest";
import type { Frame } from "../../src/survival/design.ts";
import { markingFrame, onLaterIntervals, overMarking } from "../../src/survival/marking-frame.ts";

// Three strata over two intervals: rows are stratum (later, first) × interval, 12 in all.
const frame: Frame = {
  strata: ["a", "b", "c"],
  intervals: 2,
  lengths: Float64Array.of(1, 1),
  forced: [],
  effort: undefined,
};
const twice = (...values: readonly number[]) => values.flatMap((value) => [value, value]);

test("every stratum stands twice; survival has its own contrast for the first interval, recapture has not", () => {
  const { strata, contrasts } = markingFrame(frame);
  expect(strata).toEqual(
    ["a", "b", "c"].flatMap((one) => [`${one}, later intervals`, `${one}, first interval`]),
  );
  expect(contrasts?.survival.map(({ name, values }) => [name, Array.from(values)])).toEqual([
    ["b against a", twice(0, 0, 1, 1, 0, 0)],
    ["c against a", twice(0, 0, 0, 0, 1, 1)],
    ["first interval after marking", twice(0, 1, 0, 1, 0, 1)],
  ]);
  expect(contrasts?.recapture.map((one) => one.name)).toEqual(["b against a", "c against a"]);
});

test("values by stratum stand in both of its rows; values by interval stay as they are", () => {
  const byRow = Float64Array.of(1, 2, 3, 4, 5, 6);
  expect(Array.from(overMarking(frame, byRow))).toEqual([1, 2, 1, 2, 3, 4, 3, 4, 5, 6, 5, 6]);
  const byInterval = Float64Array.of(7, 8);
  expect(overMarking(frame, byInterval)).toBe(byInterval);
});

test("what acts on later intervals is at its mean in the first one, by interval and by stratum", () => {
  const whole = markingFrame(frame);
  const later = (values: Float64Array) => Array.from(onLaterIntervals(whole, { name: "x", values }).values);
  expect(later(Float64Array.of(7, 8))).toEqual([7, 8, 0, 0, 7, 8, 0, 0, 7, 8, 0, 0]);
  expect(later(overMarking(frame, Float64Array.of(1, 2, 3, 4, 5, 6)))).toEqual([
    1, 2, 0, 0, 3, 4, 0, 0, 5, 6, 0, 0,
  ]);
});
