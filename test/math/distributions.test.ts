import { describe, expect, test } from "vitest";
import {
  chiSquareUpper,
  fUpper,
  normalCdf,
  normalTwoSided,
  tTwoSided,
} from "../../src/math/distributions.ts";
import { randomStream } from "../../src/math/random.ts";

describe("distributions", () => {
  test("upper tails agree with R 4.2: pf, pt, pchisq, pnorm", () => {
    expect(fUpper(72.284, 1, 4)).toBeCloseTo(0.00105, 6); // methods: the dipper flood, p = 0.00105
    expect(tTwoSided(3.87979480686798, 109)).toBeCloseTo(0.000179310857164885, 15); // G_ranks.json (R cor.test)
    // from memory: the 5 % points of the usual tables
    expect(chiSquareUpper(3.841458820694124, 1)).toBeCloseTo(0.05, 14);
    expect(fUpper(7.708647422176786, 1, 4)).toBeCloseTo(0.05, 12);
    expect(normalCdf(1.959963984540054)).toBeCloseTo(0.975, 14);
    expect(normalTwoSided(1.959963984540054)).toBeCloseTo(0.05, 14);
  });

  test("small tails keep their digits: F(1, df) upper tail is the square of t two-sided", () => {
    for (const t of [0.1, 1, 5, 20, 100]) expect(fUpper(t * t, 1, 7)).toBe(tTwoSided(t, 7));
    expect(tTwoSided(100, 30)).toBeGreaterThan(0);
  });
});

describe("random streams", () => {
  test("the same seed, stream and replicate give the same numbers; any other gives others", () => {
    const draw = (seed: number, stream: string, replicate: number) => {
      const random = randomStream(seed, stream, replicate);
      return [random.uniform(), random.normal(), random.below(1000)];
    };
    expect(draw(1, "years", 3)).toEqual(draw(1, "years", 3));
    expect(draw(1, "years", 3)).not.toEqual(draw(1, "years", 4));
    expect(draw(1, "years", 3)).not.toEqual(draw(1, "animals", 3));
    expect(draw(1, "years", 3)).not.toEqual(draw(2, "years", 3));
  });

  test("a permutation holds every index once", () => {
    const order = Array.from(randomStream(1, "p", 0).permutation(50)).sort((a, b) => a - b);
    expect(order).toEqual(Array.from({ length: 50 }, (_, i) => i));
  });
});
