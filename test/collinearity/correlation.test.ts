import { describe, expect, test } from "vitest";
import {
  correlationP,
  correlationTable,
  differences,
  holm,
  partialCorrelation,
  partialTable,
  pearson,
} from "../../src/collinearity/correlation.ts";
import { averageRanks, spearmanCounts } from "../../src/collinearity/ranks.ts";
import { leastSquares } from "../../src/collinearity/regression.ts";
import { column, fromColumns, fromRows } from "../../src/data/matrix.ts";
import { randomStream } from "../../src/math/random.ts";
import { reference, worst } from "./reference.ts";

const G = reference("G_ranks");
const AIR = ["Ozone", "Solar.R", "Wind", "Temp"];
const series: number[][] = AIR.map((name) => G.data.airquality_complete_cases[name]);
const air = fromColumns(series, 111);
const at = (x: string, y: string) => AIR.indexOf(x) * 4 + AIR.indexOf(y);

describe("airquality complete cases (R's datasets)", () => {
  test.each(G.expected.pairs as { x: string; y: string; [key: string]: number | string }[])(
    "$x, $y: r to 1e-12, p to 1e-8 relative",
    (pair) => {
      const found = correlationTable(air, AIR, "Pearson");
      const ranked = correlationTable(air, AIR, "Spearman");
      const here = at(pair.x, pair.y);
      expect(found.n.data[here]).toBe(111);
      expect(worst([found.r.data[here]], [pair.pearson_r as number])).toBeLessThan(1e-12);
      expect(worst([found.p.data[here]], [pair.pearson_p as number], true)).toBeLessThan(1e-8);
      expect(worst([ranked.r.data[here]], [pair.spearman_rho as number])).toBeLessThan(1e-12);
      const p = pair.spearman_p_t_approximation as number;
      expect(worst([ranked.p.data[here]], [p], true)).toBeLessThan(1e-8);
    },
  );

  test("Holm's adjustment over the six pairs", () => {
    const { raw, holm: expected } = G.expected.p_adjust_pearson_6_pairs;
    expect(worst(holm(raw), expected, true)).toBeLessThan(1e-12);
    const found = correlationTable(air, AIR, "Pearson").holm;
    const pairs = [1, 2, 3, 6, 7, 11].map((k) => found.data[k]);
    expect(worst(pairs, expected, true)).toBeLessThan(1e-8);
    expect(found.data[0]).toBeNaN();
    expect(holm([0.04, Number.NaN, 0.03])).toEqual([0.06, Number.NaN, 0.06]);
  });

  test("partial given all others, Pearson and Spearman, with p on n − 2 − 2", () => {
    for (const [method, name] of [
      ["Pearson", "pearson"],
      ["Spearman", "spearman"],
    ] as const)
      for (let a = 0; a < 4; a++)
        for (let b = 0; b < a; b++) {
          const given = series.filter((_, k) => k !== a && k !== b);
          const r = partialCorrelation(series[a], series[b], given, method);
          const expected = G.expected.partial_all_others;
          expect(worst([r], [expected[name][a][b]])).toBeLessThan(1e-12);
          expect(worst([correlationP(r, expected.df)], [expected[`p_${name}`][a][b]], true)).toBeLessThan(
            1e-8,
          );
        }
  });

  test("partial of ozone and temperature given wind, as a table given one column", () => {
    const expected = G.expected.partial_ozone_temp_given_wind;
    const table = partialTable(
      fromColumns([series[0], series[3]], 111),
      ["Ozone", "Temp"],
      series[2],
      "Pearson",
    );
    expect(worst([table.r.data[1]], [expected.r])).toBeLessThan(1e-12);
    expect(worst([table.p.data[1]], [expected.p], true)).toBeLessThan(1e-8);
  });

  test("average ranks", () => {
    const { ranks, tied } = averageRanks(series[0]);
    expect(Array.from(ranks.slice(0, 10))).toEqual(G.expected.average_ranks_ozone_first10);
    expect(tied).toBe(true);
  });
});

describe("missing cells", () => {
  test("all 153 days of airquality, pairwise complete: r to 1e-12, n", () => {
    // The 42 days that miss ozone or radiation (R's datasets::airquality, from memory; the reference r to twelve
    // digits, made from the whole table, vouch for them). The order of the days does not matter.
    const nothing = Number.NaN;
    const incomplete = [
      [nothing, nothing, 14.3, 56], [28, nothing, 14.9, 66], [nothing, 194, 8.6, 69], [7, nothing, 6.9, 74],
      [nothing, 66, 16.6, 57], [nothing, 266, 14.9, 58], [nothing, nothing, 8, 57], [nothing, 286, 8.6, 78],
      [nothing, 287, 9.7, 74], [nothing, 242, 16.1, 67], [nothing, 186, 9.2, 84], [nothing, 220, 8.6, 85],
      [nothing, 264, 14.3, 79], [nothing, 273, 6.9, 87], [nothing, 259, 10.9, 93], [nothing, 250, 9.2, 92],
      [nothing, 332, 13.8, 80], [nothing, 322, 11.5, 79], [nothing, 150, 6.3, 77], [nothing, 59, 1.7, 76],
      [nothing, 91, 4.6, 76], [nothing, 250, 6.3, 76], [nothing, 135, 8, 75], [nothing, 127, 8, 78],
      [nothing, 47, 10.3, 73], [nothing, 98, 11.5, 80], [nothing, 31, 14.9, 77], [nothing, 138, 8, 83],
      [nothing, 101, 10.9, 84], [nothing, 139, 8.6, 82], [nothing, 291, 14.9, 91], [nothing, 258, 9.7, 81],
      [nothing, 295, 11.5, 82], [78, nothing, 6.9, 86], [35, nothing, 7.4, 85], [66, nothing, 4.6, 87],
      [nothing, 222, 8.6, 92], [nothing, 137, 11.5, 86], [nothing, 64, 11.5, 79], [nothing, 255, 12.6, 75],
      [nothing, 153, 5.7, 88], [nothing, 145, 13.2, 77],
    ]; // biome-ignore format: a table
    const days = [...series[0].map((_, i) => series.map((one) => one[i])), ...incomplete];
    const table = correlationTable(fromRows(days), AIR, "Pearson");
    expect(Array.from(table.n.data)).toEqual(G.expected.pairwise_complete.n.flat());
    expect(worst(table.r.data, G.expected.pairwise_complete.r.flat())).toBeLessThan(1e-12);
  });

  test("each pair uses its own complete rows, plain and partial", () => {
    const holes = fromColumns(
      series.map((one, k) => one.map((value, i) => (i % 10 === k ? Number.NaN : value))),
      111,
    );
    const table = correlationTable(holes, AIR, "Pearson");
    const partial = partialTable(holes, AIR, series[2], "Spearman");
    for (const [a, b] of [
      [0, 1],
      [1, 3],
    ]) {
      const rows = series[0].map((_, i) => i).filter((i) => i % 10 !== a && i % 10 !== b);
      const pick = (k: number) => rows.map((i) => series[k][i]);
      expect(table.n.data[a * 4 + b]).toBe(rows.length);
      expect(table.r.data[a * 4 + b]).toBe(pearson(pick(a), pick(b)));
      const expected = partialCorrelation(pick(a), pick(b), [pick(2)], "Spearman");
      expect(partial.r.data[a * 4 + b]).toBeCloseTo(expected, 12);
    }
  });

  test("a pair with fewer than 3 rows has no p, a constant no r", () => {
    const table = correlationTable(
      fromRows([
        [1, 2, 5],
        [2, 1, 5],
        [Number.NaN, 3, 5],
      ]),
      ["a", "b", "c"],
      "Pearson",
    );
    expect([table.r.data[1], table.n.data[1], table.p.data[1]]).toEqual([-1, 2, Number.NaN]);
    expect(table.r.data[5]).toBeNaN();
    expect(table.p.data[5]).toBeNaN();
  });
});

describe("exact Spearman p without ties", () => {
  test("n = 8 as R's exact p, not the t approximation", () => {
    const { exact_spearman_x: x, exact_spearman_y: y } = G.data;
    const table = correlationTable(fromColumns([x, y], 8), ["x", "y"], "Spearman");
    const expected = G.expected.exact_spearman_n8_no_ties;
    expect(worst([table.r.data[1]], [expected.rho])).toBeLessThan(1e-12);
    expect(worst([table.p.data[1]], [expected.p_exact], true)).toBeLessThan(1e-12);
    expect(worst([correlationP(table.r.data[1], 6)], [expected.p_t_approximation], true)).toBeLessThan(1e-8);
  });

  test("counts add up to n! and mirror each other; n = 4 by hand", () => {
    expect(Array.from(spearmanCounts(4)).filter((_, s) => s % 2 === 0)).toEqual([
      1, 3, 1, 4, 2, 2, 2, 4, 1, 3, 1,
    ]);
    const counts = spearmanCounts(9);
    expect(counts.reduce((a, b) => a + b)).toBe(362880);
    expect(Array.from(counts)).toEqual(Array.from(counts).reverse());
  });
});

describe("shared trends", () => {
  const random = randomStream(7, "trend", 0);
  const years = Array.from({ length: 25 }, (_, i) => 1990 + i + (i > 12 ? 3 : 0));
  const two = [0.3, -0.5].map((slope) => years.map((year) => slope * (year - 2000) + random.normal()));
  const matrix = fromColumns(two, 25);

  test("partial given the year is the correlation of the detrended columns (Frisch & Waugh 1933)", () => {
    const detrended = two.map((one) => leastSquares(fromColumns([years], 25), one).residuals);
    const table = partialTable(matrix, ["a", "b"], years, "Pearson");
    expect(table.r.data[1]).toBeCloseTo(pearson(detrended[0], detrended[1]), 12);
    expect(Math.abs(correlationTable(matrix, ["a", "b"], "Pearson").r.data[1])).toBeGreaterThan(0.8);
    expect(Math.abs(table.r.data[1])).toBeLessThan(0.5);
    expect(table.given).toBe("year");
  });

  test("the textbook formula (r12 − r13 r23)/√((1 − r13²)(1 − r23²))", () => {
    const [r12, r13, r23] = [pearson(two[0], two[1]), pearson(two[0], years), pearson(two[1], years)];
    const expected = (r12 - r13 * r23) / Math.sqrt((1 - r13 ** 2) * (1 - r23 ** 2));
    expect(partialTable(matrix, ["a", "b"], years, "Pearson").r.data[1]).toBeCloseTo(expected, 11);
  });

  test("a column that is nothing but trend has no partial correlation", () => {
    const table = partialTable(
      fromColumns([two[0], years.map((y) => 2 * y + 1)], 25),
      ["a", "b"],
      years,
      "Pearson",
    );
    expect(table.r.data[1]).toBeNaN();
  });

  test("changes from row to row", () => {
    const found = differences(fromRows([[1, 10], [4, 8], [9, 9]])); // biome-ignore format: a table
    expect(Array.from(column(found, 0))).toEqual([3, 5]);
    expect(Array.from(column(found, 1))).toEqual([-2, 1]);
  });
});
