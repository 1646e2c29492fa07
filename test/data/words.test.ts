import { expect, test } from "vitest";
import { intervalWords } from "../../src/data/occasion.ts";
import { countText, listWords } from "../../src/data/words.ts";

test("counts stand with their noun", () => {
  expect([0, 1, 2].map((n) => countText(n, "day"))).toEqual(["0 days", "1 day", "2 days"]);
});

test("names are listed as in a sentence", () => {
  expect([[], ["a"], ["a", "b"], ["a", "b", "c"]].map(listWords)).toEqual([
    "nothing",
    "a",
    "a and b",
    "a, b and c",
  ]);
});

test("intervals that are split into years are told apart from them", () => {
  expect(intervalWords(20, 20)).toBe("20 intervals");
  expect(intervalWords(1, 1)).toBe("1 interval");
  expect(intervalWords(19, 20)).toBe("19 intervals, cut into 20 years");
  expect(intervalWords(1, 2)).toBe("1 interval, cut into 2 years");
});
