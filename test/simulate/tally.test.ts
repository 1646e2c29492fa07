import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Choice, OUTCOMES, outcomeOf, shareOf, tally } from "../../src/simulate/tally.ts";

describe("how a choice stands to the truth", () => {
  test.each([
    [[1], [1], "exactly the truth"],
    [[1, 2], [2, 1], "exactly the truth"],
    [[1, 3], [1], "the truth with others"],
    [[1, 2, 3], [1, 2], "the truth with others"],
    [[1], [1, 2], "part of the truth"],
    [[1, 3], [1, 2], "part of the truth"],
    [[3], [1], "only wrong ones"],
    [[0, 3], [1, 2], "only wrong ones"],
    [[], [1], "nothing"],
    [[], [1, 2], "nothing"],
    [[], [], "nothing"],
    [[1], [], "only wrong ones"],
  ] as const)("chosen %j, true %j: %s", (chosen, truth, outcome) => {
    expect(outcomeOf(chosen, truth)).toBe(outcome);
  });
});

// covariates 0 and 1 tell the same story, 2 and 3 stand alone
const R = [
  [1, 0.8, 0.1, 0.49],
  [0.8, 1, 0, 0],
  [0.1, 0, 1, 0],
  [0.49, 0, 0, 1],
];
const correlation = (a: number, b: number) => R[a][b];
const picked = (...chosen: number[]): Choice => ({ chosen, rivals: [] });

describe("tally", () => {
  const choices: Choice[] = [picked(0), picked(0, 2), picked(1), picked(3), { chosen: [1], rivals: [0] }];

  test("by hand, one true covariate", () => {
    const found = tally(
      [...choices, picked(), picked(), picked(), picked(), picked()],
      [0],
      true,
      correlation,
    );
    expect(OUTCOMES.map((one) => found.outcomes[one].share)).toEqual([0.1, 0.1, 0, 0.3, 0.5]);
    expect(found.found.share).toBe(0.2);
    expect(found.foundOrRival.share).toBeCloseTo(0.3, 12);
    // {0, 2} for the 2, {3}; the twin of the truth is not unrelated
    expect(found.unrelated.share).toBe(0.2);
    expect(found.replicates).toBe(10);
  });

  test("by hand, nothing acts: whatever is chosen is wrong, and the named one is a false find", () => {
    const found = tally([...choices, picked()], [0], false, correlation);
    expect(found.outcomes["only wrong ones"].share).toBeCloseTo(5 / 6, 12);
    expect(found.outcomes.nothing.share).toBeCloseTo(1 / 6, 12);
    expect(found.found.share).toBeCloseTo(2 / 6, 12);
    expect(found.unrelated.share).toBeCloseTo(5 / 6, 12);
  });

  test("outcomes are one or the other: shares add up to 1; found is exactly or with others", () => {
    const sets = fc.uniqueArray(fc.nat(3), { maxLength: 4 });
    fc.assert(
      fc.property(fc.array(sets, { minLength: 1, maxLength: 40 }), (chosen) => {
        const found = tally(
          chosen.map((one) => picked(...one)),
          [0, 2],
          true,
          correlation,
        );
        const sum = OUTCOMES.reduce((total, one) => total + found.outcomes[one].share, 0);
        expect(sum).toBeCloseTo(1, 12);
        const { outcomes } = found;
        const whole = outcomes["exactly the truth"].share + outcomes["the truth with others"].share;
        expect(found.found.share).toBeCloseTo(whole, 12);
      }),
    );
  });

  test("neither the order of covariates nor that within a choice changes anything", () => {
    const sets = fc.uniqueArray(fc.nat(3), { maxLength: 4 });
    const order = fc.shuffledSubarray([0, 1, 2, 3], { minLength: 4 });
    fc.assert(
      fc.property(
        fc.array(sets, { minLength: 1, maxLength: 20 }),
        order,
        fc.boolean(),
        (chosen, to, acting) => {
          const moved = (set: readonly number[]) => set.map((k) => to[k]).reverse();
          const back = (k: number) => to.indexOf(k);
          const before = tally(
            chosen.map((one) => picked(...one)),
            [0, 2],
            acting,
            correlation,
          );
          const after = tally(
            chosen.map((one) => picked(...moved(one))),
            moved([0, 2]),
            acting,
            (a, b) => correlation(back(a), back(b)),
          );
          expect(after).toEqual(before);
        },
      ),
    );
  });
});

describe("a share of replicates", () => {
  // Wilson (1927) intervals, by the roots of (share − π)² = z² π(1 − π)/n, z = 1.959964
  test.each([
    [0, 20],
    [13, 20],
    [200, 200],
  ])("%d of %d: each end of the interval is where the share lies z standard errors away", (count, n) => {
    const { share, low, high, se } = shareOf(count, n);
    expect(se).toBeCloseTo(Math.sqrt((share * (1 - share)) / n), 14);
    for (const end of [low, high].filter((one) => one !== share))
      expect(Math.abs(share - end) / Math.sqrt((end * (1 - end)) / n)).toBeCloseTo(1.959964, 5);
    expect(high).toBeGreaterThan(low);
  });
});
