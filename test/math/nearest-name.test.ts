import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { editDistance, nearestName } from "../../src/math/nearest-name.ts";

describe("edit distance", () => {
  test.each([
    // Wagner & Fischer's textbook pair, as in most courses on algorithms.
    ["kitten", "sitting", 3],
    ["", "abc", 3],
    // Neighbours swapped count once (Damerau 1964).
    ["rian", "rain", 1],
    // The restricted form edits no part twice: the unrestricted distance would be 2.
    ["ca", "abc", 3],
  ])("%s to %s is %i", (a, b, distance) => {
    expect(editDistance(a, b)).toBe(distance);
  });

  test("symmetric, zero only for equals, within the bounds of the lengths", () => {
    const word = fc.string({ maxLength: 8, unit: fc.constantFrom("a", "b", "c") });
    fc.assert(
      fc.property(word, word, (a, b) => {
        const distance = editDistance(a, b);
        expect(distance).toBe(editDistance(b, a));
        expect(distance === 0).toBe(a === b);
        expect(distance).toBeGreaterThanOrEqual(Math.abs(a.length - b.length));
        expect(distance).toBeLessThanOrEqual(Math.max(a.length, b.length));
      }),
    );
  });
});

describe("nearest name", () => {
  test.each([
    ["ocasions", ["occasions", "captures"], "occasions"],
    ["ready_made", ["ready-made"], "ready-made"],
    ["Sample Size", ["sample size", "steps"], "sample size"],
    ["weather", ["theme", "window"], undefined],
    ["ab", ["cd"], undefined],
    // Of equals the first by code unit, whatever the order they come in.
    ["cat", ["hat", "bat"], "bat"],
    ["x".repeat(100), ["x".repeat(101)], undefined],
  ])("%s among %j", (wanted, known, near) => {
    expect(nearestName(wanted, known)).toBe(near);
  });
});
