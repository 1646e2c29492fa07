import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { countsFrom, type History } from "../../src/study/histories.ts";
import { goodnessFindings } from "../../src/survival/goodness-findings.ts";
import { type GoodnessOfFit, goodnessOfFit } from "../../src/survival/goodness-of-fit.ts";
import { COMPONENTS } from "../../src/survival/goodness-tables.ts";
import { countsOf, reference } from "../support/reference.ts";
import { type Drawing, drawHistories } from "./draw-histories.ts";

const fitOf = (histories: readonly History[], occasions: number) =>
  goodnessOfFit(countsFrom(histories, occasions), histories);
const total = (fit: GoodnessOfFit, component: number, stratum?: string) =>
  fit.components.find(
    (one) =>
      one.component === COMPONENTS[component] &&
      (stratum === undefined
        ? one === fit.components.findLast((o) => o.component === one.component)
        : one.stratum === stratum),
  )!;

/** `1101` as a history. */
const history = (row: string, number = 1, lost = false, stratum = "all"): History => ({
  stratum,
  seen: [...row].flatMap((one, t) => (one === "1" ? [t] : [])),
  lost,
  number,
});

describe("the four components", () => {
  interface File {
    readonly occasions: number;
    readonly cases: readonly {
      readonly what: string;
      readonly histories: readonly (readonly [string, boolean, number])[];
      readonly rows: readonly {
        readonly component: number;
        readonly occasion: number;
        readonly first: number[];
        readonly second: number[];
        readonly chi_square: number;
        readonly df: number;
        readonly p: number | null;
        readonly pooled: number;
        readonly exact: boolean;
      }[];
      readonly chi_square: number;
      readonly df: number;
      readonly p: number;
    }[];
  }
  // goodness.json is made by goodness.py beside it: tables by their definition, χ² and exact chances by SciPy
  const file = reference<File>("goodness");

  test.each(file.cases.map((one) => [one.what, one] as const))("every table: %s", (_, one) => {
    const fit = fitOf(
      one.histories.map(([row, lost, number]) => history(row, number, lost)),
      file.occasions,
    );
    expect(fit.rows.length).toBe(one.rows.length);
    one.rows.forEach((expected) => {
      const row = fit.rows.find(
        (row) => row.component === COMPONENTS[expected.component] && row.occasion === expected.occasion,
      )!;
      expect([...row.first]).toEqual(expected.first);
      expect([...row.second]).toEqual(expected.second);
      expect([row.df, row.pooled, row.exact]).toEqual([expected.df, expected.pooled, expected.exact]);
      expect(Math.abs(row.chiSquare - expected.chi_square)).toBeLessThan(1e-9 * (1 + expected.chi_square));
      if (expected.p === null) expect(row.p).toBeNaN();
      else expect(Math.abs(row.p / expected.p - 1)).toBeLessThan(1e-9);
    });
    expect(Math.abs(fit.overall.chiSquare / one.chi_square - 1)).toBeLessThan(1e-9);
    expect(fit.overall.df).toBe(one.df);
    expect(fit.overall.p).toBeCloseTo(one.p, 9);
    expect(fit.overall.betweenAnimals).toBe(Math.max(1, fit.overall.chiSquare / fit.overall.df));
  });

  test("a study worked by hand: three occasions, newly marked 10 of 40 met again, seen before 15 of 20", () => {
    // at the second occasion 41 are newly marked (one dies in the hand) and 20 of the first are seen again
    const fit = fitOf(
      [
        history("111", 15),
        history("110", 5),
        history("100", 30),
        history("101", 7),
        history("011", 10),
        history("010", 30),
        history("010", 1, true),
      ],
      3,
    );
    expect(fit.rows.length).toBe(1);
    expect([...fit.rows[0].first, ...fit.rows[0].second]).toEqual([10, 30, 15, 5]);
    // expected 40 · 25/60 = 16.667, 23.333, 8.333, 11.667: 6.667² (1/16.667 + 1/23.333 + 1/8.333 + 1/11.667)
    const byHand = (20 / 3) ** 2 * (3 / 50 + 3 / 70 + 3 / 25 + 3 / 35);
    expect(fit.overall.chiSquare).toBeCloseTo(byHand, 12);
    expect(fit.overall.df).toBe(1);
    expect(fit.overall.betweenAnimals).toBeCloseTo(byHand, 12);
    expect(total(fit, 0).direction).toBeCloseTo(-Math.sqrt(byHand), 12);
    // nothing else can be tested with three occasions
    expect(fit.overall.betweenAnimalsAfterMarking).toBeNaN();
    const [finding] = goodnessFindings(fit);
    expect(finding.kind).toBe("transience");
    expect(finding.message).toContain("25 % (10 of 40)");
    expect(finding.message).toContain("75 % (15 of 20)");
  });

  test("dipper, both sexes (Lebreton et al. 1992): what the published counts can tell, and what they cannot", () => {
    const { data } = reference<{ data: { releases: number[]; m_array_rows: number[][] } }>("A_dipper");
    const fit = goodnessOfFit([countsOf(data.releases, data.m_array_rows)], undefined);
    expect(fit.missing.map((one) => one.component)).toEqual(COMPONENTS.slice(0, 2));
    // read off the published array by hand: met at i, then passed over at i; next time, later
    expect(
      fit.rows.filter((row) => row.component === COMPONENTS[2]).map((row) => [...row.first, ...row.second]),
    ).toEqual([
      [24, 1, 2, 0],
      [34, 2, 1, 0],
      [45, 3, 2, 0],
      [51, 0, 1, 2],
    ]);
    // the last table: of C(54, 2) = 1431 ways to choose the two met later, 3 have both among the three passed over
    const last = fit.rows.find((row) => row.component === COMPONENTS[2] && row.occasion === 4)!;
    expect(last.exact).toBe(true);
    expect(last.p).toBeCloseTo(3 / 1431 / 2, 12);
    // the other component is always empty in one row: nothing to test
    expect(total(fit, 3).df).toBe(0);
    expect(fit.overall.df).toBe(4);
  });

  test("the order of animals does not matter, nor whether equal histories are grouped", () => {
    const random = randomStream(5, "goodness order", 0);
    const drawn = drawHistories(
      { occasions: 7, marked: 40, survival: 0.7, recapture: 0.5, loss: 0.05 },
      random,
    );
    const fit = fitOf(drawn, 7);
    const order = random.permutation(drawn.length);
    expect(
      fitOf(
        Array.from(order, (i) => drawn[i]),
        7,
      ),
    ).toEqual(fit);
    const groups = new Map<string, History>();
    for (const one of drawn) {
      const key = JSON.stringify([one.seen, one.lost]);
      groups.set(key, { ...one, number: (groups.get(key)?.number ?? 0) + 1 });
    }
    expect(groups.size).toBeLessThan(drawn.length);
    expect(fitOf([...groups.values()], 7)).toEqual(fit);
  });

  test("strata are tested apart and summed", () => {
    const draw = (stratum: string, i: number) =>
      drawHistories(
        { occasions: 6, marked: 50, survival: 0.7, recapture: 0.5, stratum },
        randomStream(6, "goodness strata", i),
      );
    const [one, two] = [draw("female", 0), draw("male", 1)];
    const both = fitOf([...one, ...two], 6);
    const apart = [fitOf(one, 6), fitOf(two, 6)];
    expect(both.overall.chiSquare).toBeCloseTo(apart[0].overall.chiSquare + apart[1].overall.chiSquare, 9);
    expect(both.overall.df).toBe(apart[0].overall.df + apart[1].overall.df);
    expect(both.sums.map((sum) => sum.stratum)).toEqual(["female", "male", undefined]);
    expect(total(both, 0, "male").chiSquare).toBeCloseTo(total(apart[1], 0).chiSquare, 12);
  });

  test("two occasions, an empty study, an occasion with no captures: nothing to test, and no NaN passed as χ²", () => {
    for (const [histories, occasions] of [
      [[history("11", 5), history("10", 3)], 2],
      [[history("1000", 4)], 4],
      [[history("1011", 9), history("1001", 8), history("1000", 9)], 4],
    ] as const) {
      const fit = fitOf(histories, occasions);
      expect([fit.overall.chiSquare, fit.overall.df]).toEqual([0, 0]);
      expect(fit.overall.betweenAnimals).toBeNaN();
      expect(goodnessFindings(fit)).toEqual([]);
    }
  });
});

describe("in simulations", () => {
  const STUDIES = 300;
  const general: Drawing = { occasions: 8, marked: 60, survival: 0.7, recapture: 0.5 };
  const simulate = (truth: Drawing, stream: string) =>
    Array.from({ length: STUDIES }, (_, i) =>
      fitOf(drawHistories(truth, randomStream(2024, stream, i)), truth.occasions),
    );
  const ps = (fits: readonly GoodnessOfFit[], component: number) =>
    fits.map((fit) => total(fit, component).p).filter((p) => !Number.isNaN(p));
  const rejected = (values: readonly number[]) => values.filter((p) => p < 0.05).length / values.length;
  /** Largest distance of the empirical distribution from the uniform (Kolmogorov). */
  const distance = (values: readonly number[]) =>
    [...values]
      .sort((a, b) => a - b)
      .reduce(
        (most, p, i) =>
          Math.max(most, Math.abs(p - i / values.length), Math.abs(p - (i + 1) / values.length)),
        0,
      );
  // Kolmogorov's 1 % point for 300 values is 1.63/√300 = 0.094; a rate of .05 has a Monte Carlo s.e. of .0126
  const limit = 1.63 / Math.sqrt(STUDIES);

  test("where the general model holds p is uniform and ĉ is near 1", () => {
    const fits = simulate(general, "general");
    for (const component of [0, 1, 2, 3]) {
      const values = ps(fits, component);
      expect(values.length).toBe(STUDIES);
      expect(distance(values)).toBeLessThan(limit);
      expect(rejected(values)).toBeLessThan(0.05 + 3 * 0.0126);
    }
    const ratio = fits.reduce((sum, fit) => sum + fit.overall.chiSquare / fit.overall.df, 0) / STUDIES;
    // χ²/df with about 25 df has sd √(2/25) = 0.28, its mean over 300 studies an s.e. of 0.016
    expect(Math.abs(ratio - 1)).toBeLessThan(0.05);
    expect(fits.every((fit) => fit.overall.betweenAnimals >= 1)).toBe(true);
  });

  test("with few animals sparse tables keep their level, and ĉ does not run off", () => {
    const fits = simulate({ ...general, marked: 8 }, "sparse");
    for (const component of [0, 2]) expect(rejected(ps(fits, component))).toBeLessThan(0.05 + 3 * 0.0126);
    const ratio = fits.reduce((sum, fit) => sum + fit.overall.chiSquare / fit.overall.df, 0) / STUDIES;
    expect(ratio).toBeGreaterThan(0.8);
    expect(ratio).toBeLessThan(1.1);
  });

  test("visitors among the newly marked move the first component alone", () => {
    const fits = simulate({ ...general, visitors: 0.4 }, "visitors");
    expect(rejected(ps(fits, 0))).toBeGreaterThan(0.9);
    for (const component of [1, 2, 3]) {
      expect(distance(ps(fits, component))).toBeLessThan(limit);
      expect(rejected(ps(fits, component))).toBeLessThan(0.05 + 3 * 0.0126);
    }
    expect(fits.filter((fit) => total(fit, 0).direction < 0).length).toBe(STUDIES);
    const after = fits.reduce((sum, fit) => sum + fit.overall.betweenAnimalsAfterMarking, 0) / STUDIES;
    const before = fits.reduce((sum, fit) => sum + fit.overall.betweenAnimals, 0) / STUDIES;
    expect(before).toBeGreaterThan(after + 0.3);
  });

  test("animals that are met again more easily once met move the third component alone", () => {
    const fits = simulate({ ...general, recapture: 0.35, recaptureAfterMeeting: 0.65 }, "happy");
    expect(rejected(ps(fits, 2))).toBeGreaterThan(0.9);
    for (const component of [0, 1, 3]) {
      expect(distance(ps(fits, component))).toBeLessThan(limit);
      expect(rejected(ps(fits, component))).toBeLessThan(0.05 + 3 * 0.0126);
    }
    expect(fits.every((fit) => total(fit, 2).direction > 0)).toBe(true);
    const [finding] = goodnessFindings(fits[0]).filter((one) => one.kind === "trap-dependence");
    expect(finding.remedy).toContain("easier to meet");
    const shy = fitOf(
      drawHistories({ ...general, recapture: 0.65, recaptureAfterMeeting: 0.35 }, randomStream(1, "shy", 0)),
      8,
    );
    expect(total(shy, 2).direction).toBeLessThan(-2);
    // The wider tables have no direction, also where one was cut short to two columns.
    for (const component of [1, 3])
      expect(fits.map((fit) => total(fit, component).direction).every(Number.isNaN)).toBe(true);
    expect(goodnessFindings(shy)[0].remedy).toContain("avoid");
  });
});
