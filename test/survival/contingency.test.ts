import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { exactMidP, testTwoRows } from "../../src/survival/contingency.ts";

describe("two rows of counts", () => {
  test("χ² of a worked table: 20, 10 against 10, 20 expects 15 in each cell, so 4 · 25/15 = 20/3", () => {
    const result = testTwoRows([20, 10], [10, 20]);
    expect(result.chiSquare).toBeCloseTo(20 / 3, 12);
    expect([result.df, result.pooled, result.exact]).toEqual([1, 0, false]);
    // P(χ²₁ > 20/3) = P(|Z| > 2.58199): 0.009823, from tables of the normal distribution
    expect(result.p).toBeCloseTo(0.009823, 6);
    expect(result.direction).toBeCloseTo(Math.sqrt(20 / 3), 12);
    expect(testTwoRows([10, 20], [20, 10]).direction).toBeCloseTo(-Math.sqrt(20 / 3), 12);
  });

  test("the lady tasting tea (Fisher 1935): outcomes 1, 16, 36, 16, 1 of 70, so mid-p of three right is 18/70", () => {
    expect(exactMidP(3, 4, 4, 4)).toBeCloseTo((1 + 1 + (16 + 16) / 2) / 70, 14);
    expect(exactMidP(4, 4, 4, 4)).toBeCloseTo(1 / 70, 14);
    expect(exactMidP(2, 4, 4, 4)).toBeCloseTo((34 + 36 / 2) / 70, 14);
  });

  test("columns expected to hold fewer than 2 are joined to the smaller neighbour; empty ones are left out", () => {
    // totals 40, 3, 5, 12 of 60, rows 30 and 30: 1.5 expected in the second, joined to the third (5 < 40)
    const joined = testTwoRows([20, 0, 2, 3, 5], [20, 0, 1, 2, 7]);
    const byHand = testTwoRows([20, 5, 5], [20, 3, 7]);
    expect(joined.pooled).toBe(1);
    expect(joined.df).toBe(2);
    // expected 20, 4, 6 in both rows: 2 · (1/4 + 1/6)
    expect(joined.chiSquare).toBeCloseTo(2 * (1 / 4 + 1 / 6), 12);
    expect(byHand.chiSquare).toBeCloseTo(joined.chiSquare, 12);
  });

  test("nothing to test: an empty row or one column", () => {
    for (const [a, b] of [
      [
        [0, 0],
        [4, 5],
      ],
      [
        [3, 0],
        [4, 0],
      ],
      [
        [0, 0],
        [0, 0],
      ],
      [[], []],
    ]) {
      const result = testTwoRows(a, b);
      expect([result.chiSquare, result.df]).toEqual([0, 0]);
      expect(result.p).toBeNaN();
    }
  });

  test("any table: finite χ², p in (0, 1], the same with rows exchanged and with empty columns added", () => {
    const count = fc.integer({ min: 0, max: 30 });
    fc.assert(
      fc.property(fc.array(fc.tuple(count, count), { maxLength: 8 }), (columns) => {
        const [a, b] = [columns.map((one) => one[0]), columns.map((one) => one[1])];
        const one = testTwoRows(a, b);
        const turned = testTwoRows(b, a);
        const wider = testTwoRows([0, ...a, 0], [0, ...b, 0]);
        expect(Number.isFinite(one.chiSquare)).toBe(true);
        if (one.df > 0) expect(one.p > 0 && one.p <= 1).toBe(true);
        expect(turned.chiSquare).toBeCloseTo(one.chiSquare, 9);
        expect(turned.df).toBe(one.df);
        expect(wider).toEqual(one);
      }),
      { numRuns: 300 },
    );
  });

  test("large and lopsided margins neither overflow nor lose the small tail", () => {
    const p = exactMidP(1, 1, 200_000, 3);
    // one animal in the first row; it is in the first column with chance 3/200001
    expect(p).toBeCloseTo(3 / 200_001 / 2, 12);
    const far = exactMidP(0, 900, 900, 900);
    expect(far >= 0 && far < 1e-200).toBe(true);
  });
});
