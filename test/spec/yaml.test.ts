import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { CoveyError, InputError } from "../../src/errors.ts";
import { parsePipeline } from "../../src/spec/parse.ts";
import { readYaml } from "../../src/spec/yaml.ts";
import { edited, GOOD } from "./good.ts";

function nameOf(text: string): string {
  try {
    readYaml(text, "p.yaml");
  } catch (error) {
    if (error instanceof CoveyError) return error.facts.name;
    throw error;
  }
  return "accepted";
}

describe("hostile text is a clean error", () => {
  // Without the guard the first of these ends the process in the library's composer.
  test.each([
    ["open brackets", "[".repeat(100_000)],
    ["open braces", `a: ${"{a: ".repeat(20_000)}`],
    ["dashes", `${"- ".repeat(100_000)}a`],
    ["question marks", "? ".repeat(100_000)],
    ["ever deeper lines", Array.from({ length: 1000 }, (_, i) => `${" ".repeat(i)}a:\n`).join("")],
  ])("too deep: %s", (_, text) => {
    expect(nameOf(text)).toBe("spec.too-deep");
  });

  test("a million characters", () => {
    expect(nameOf(`a: ${"x".repeat(1_000_000)}`)).toBe("spec.too-large");
  });

  test("a bomb of aliases", () => {
    const lines = ["a0: &a0 [x, x, x, x, x, x, x, x, x, x]"];
    for (let i = 1; i < 12; i++)
      lines.push(`a${i}: &a${i} [${Array.from({ length: 10 }, () => `*a${i - 1}`).join(", ")}]`);
    expect(nameOf(lines.join("\n"))).toBe("spec.alias");
  });

  test("an alias of itself", () => {
    expect(nameOf("a: &a { b: *a }")).toBe("spec.alias");
  });

  // A check of each key against all others takes the square of their number.
  test("40,000 keys in one mapping", { timeout: 30_000 }, () => {
    const text = Array.from({ length: 40_000 }, (_, i) => `k${i}: 1`).join("\n");
    expect(nameOf(text)).toBe("accepted");
  });

  test("the prototype of objects stays as it is", () => {
    expect(nameOf('"__proto__": { polluted: yes }')).toBe("spec.reserved-key");
    expect("polluted" in {}).toBe(false);
  });

  test("names of an object's own methods are ordinary names", () => {
    const text = edited("  point:", "  toString:");
    expect(Object.keys(parsePipeline(text, "p.yaml").places)).toEqual(["roost", "toString"]);
    expect(() => parsePipeline(edited("at: roost", "at: valueOf"), "p.yaml")).toThrow(/expected a place/);
  });
});

test("byte order mark and Windows line ends change nothing", () => {
  const plain = parsePipeline(GOOD, "p.yaml");
  expect(parsePipeline(`\uFEFF${GOOD.replaceAll("\n", "\r\n")}`, "p.yaml")).toEqual(plain);
});

test("an identifier of digits must be quoted, and then keeps every digit", () => {
  fc.assert(
    fc.property(fc.stringMatching(/^\d{1,12}$/), (id) => {
      const quoted = parsePipeline(edited('"050114"', `"${id}"`), "p.yaml").covariates[0];
      expect(quoted).toMatchObject({ stations: ["Ash", id] });
      expect(() => parsePipeline(edited('"050114"', id), "p.yaml")).toThrow(`"${id}"`);
    }),
    { numRuns: 25 },
  );
});

/** A text with some of its parts cut out, doubled, or replaced by marks that mean something to YAML. */
const mangled = fc
  .array(
    fc.record({
      at: fc.double({ min: 0, max: 1, noNaN: true }),
      length: fc.integer({ min: 0, max: 12 }),
      put: fc.oneof(
        fc.constantFrom(
          "",
          "\n",
          "\t",
          ": ",
          "- ",
          "[",
          "}",
          '"',
          "'",
          "&a ",
          "*a",
          "!x ",
          "#",
          "|",
          "%",
          "~",
          "0x",
          ".inf",
        ),
        fc.string({ maxLength: 6, unit: "binary" }),
      ),
    }),
    { minLength: 1, maxLength: 4 },
  )
  .map((cuts) =>
    cuts.reduce((text, { at, length, put }) => {
      const start = Math.floor(at * text.length);
      return text.slice(0, start) + put + text.slice(start + length);
    }, GOOD),
  );

test("a mangled pipeline is read or refused with a place, never anything else", () => {
  let refused = 0;
  fc.assert(
    fc.property(mangled, (text) => {
      try {
        parsePipeline(text, "p.yaml");
      } catch (error) {
        if (!(error instanceof InputError)) throw error;
        const { line, column, file } = error.facts.where ?? {};
        expect(file).toBe("p.yaml");
        expect(line).toBeGreaterThanOrEqual(1);
        expect(line).toBeLessThanOrEqual(text.split(/\r\n|\n|\r/).length);
        expect(column).toBeGreaterThanOrEqual(1);
        refused++;
      }
    }),
    { numRuns: 150 },
  );
  expect(refused).toBeGreaterThan(50);
});
