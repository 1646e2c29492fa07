import fc from "fast-check";
import { expect, test } from "vitest";
import { parse, stringify } from "yaml";
import { parsePipeline } from "../../src/spec/parse.ts";
import { GOOD } from "./good.ts";

/** The same value with the keys of every mapping in an order drawn from `seeds`; lists keep theirs. */
function reordered(value: unknown, next: () => number): unknown {
  if (Array.isArray(value)) return value.map((one) => reordered(one, next));
  if (typeof value !== "object" || value === null) return value;
  const entries = Object.entries(value).map(([key, one]) => ({
    key,
    one: reordered(one, next),
    rank: next(),
  }));
  return Object.fromEntries(entries.sort((a, b) => a.rank - b.rank).map(({ key, one }) => [key, one]));
}

test("the order of keys does not matter", () => {
  const value: unknown = parse(GOOD);
  const spec = parsePipeline(stringify(value), "p.yaml");
  fc.assert(
    fc.property(fc.infiniteStream(fc.nat()), (ranks) => {
      const text = stringify(reordered(value, () => ranks.next().value));
      expect(parsePipeline(text, "p.yaml")).toEqual(spec);
    }),
    { numRuns: 30 },
  );
});
