import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cut, fill, pad, plain, styleOf, widthOf } from "../../src/terminal/style.ts";

const ESC = String.fromCharCode(27);

test("colour only if asked for", () => {
  expect(styleOf(false).alarm("stop")).toBe("stop");
  // ECMA-48 §8.3.117: 35 magenta, 39 the default colour again.
  expect(styleOf(true).alarm("stop")).toBe(`${ESC}[35mstop${ESC}[39m`);
});

test("names with control characters cannot steer the terminal", () => {
  expect(plain(`a${ESC}[2Jb\r\nc\u202Ed\u0007`)).toBe("a\\u{1b}[2Jb\\u{d}\\u{a}c\\u{202e}d\\u{7}");
  expect(plain("Müller’s 日本 🦇")).toBe("Müller’s 日本 🦇");
});

describe("widths", () => {
  test("of accents, wide letters and emoji", () => {
    expect(["abc", "é", "e\u0301", "日本", "🦇"].map(widthOf)).toEqual([3, 1, 1, 4, 2]);
  });

  test("cut, pad and fill keep to the width, and fill loses nothing but blanks", () => {
    const text = fc.string({ unit: "grapheme", maxLength: 60 }).map(plain);
    fc.assert(
      fc.property(text, fc.integer({ min: 2, max: 30 }), (given, width) => {
        expect(widthOf(cut(given, width))).toBeLessThanOrEqual(width);
        expect(widthOf(pad(cut(given, width), width))).toBe(width);
        const lines = fill(given, width);
        for (const line of lines) expect(widthOf(line)).toBeLessThanOrEqual(width);
        expect(lines.join("").replaceAll(" ", "")).toBe(given.replaceAll(" ", ""));
      }),
    );
  });
});
