import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { clusterTree, cutTree } from "../../src/collinearity/clusters.ts";
import { correlationTable } from "../../src/collinearity/correlation.ts";
import { diagnose } from "../../src/collinearity/diagnose.ts";
import { inflation } from "../../src/collinearity/inflation.ts";
import type { CollinearityOptions } from "../../src/collinearity/options.ts";
import { fromColumns, fromRows, type Matrix, pickColumns } from "../../src/data/matrix.ts";
import { InputError } from "../../src/errors.ts";
import { type Random, randomStream } from "../../src/math/random.ts";
import { fromRecords, reference, worst } from "./reference.ts";

const E = reference("E_collinearity");
const LONGLEY: string[] = E.expected.longley.columns;
const longley = fromRecords(E.data.longley, LONGLEY);
const OPTIONS: CollinearityOptions = {
  warn: { correlation: 0.7, inflation: 10, condition: 30 },
  cluster: 0.7,
  decisions: [],
};
const names = (K: number) => Array.from({ length: K }, (_, k) => `c${String(k).padStart(3, "0")}`);
const noise = (random: Random, n: number) => Float64Array.from({ length: n }, () => random.normal());
const told = (matrix: Matrix, columns: readonly string[], options = OPTIONS) =>
  diagnose(matrix, columns, options).diagnosis;

describe("clusters by average linkage on 1 − |r|", () => {
  const { r } = correlationTable(longley, LONGLEY, "Pearson");
  const expected = reference("G_ranks").expected.longley_hclust;
  const tree = clusterTree(r, LONGLEY);

  test("Longley: merges, heights to 1e-12 and order of R's hclust", () => {
    expect(worst(
      tree.merges.map((merge) => merge.height),
      expected.average.height,
    )).toBeLessThan(1e-12); // biome-ignore format: one comparison
    // R counts merges from 1.
    const merges = tree.merges.map(({ left, right }) =>
      [left, right].map((one) => (one < 0 ? one : one + 1)),
    );
    expect(merges).toEqual(expected.average.merge);
    expect(tree.order.map((k) => k + 1)).toEqual(expected.average.order);
  });

  test.each([0.05, 0.1, 0.3, 0.5])("Longley: membership cut at height %f", (height) => {
    const clusters = cutTree(tree, r, LONGLEY, 1 - height);
    const home = LONGLEY.map((name) => 1 + clusters.findIndex(({ members }) => members.includes(name)));
    expect(home).toEqual(expected.average_cut_membership[`h${height.toFixed(2)}`]);
  });

  test("the member closest to the others, and what each choice would keep", () => {
    const [first] = cutTree(tree, r, LONGLEY, 0.7);
    expect(first.members).toEqual(["GNP.deflator", "GNP", "Population", "Year"]);
    const mean = (k: number) =>
      [0, 1, 4, 5].reduce((sum, j) => sum + (j === k ? 0 : r.data[k * 6 + j]), 0) / 3;
    const means = [0, 1, 4, 5].map(mean);
    expect(first.choices?.map((one) => one.meanR)).toEqual(means.map((value) => expect.closeTo(value, 12)));
    expect(first.closest).toBe(first.members[means.indexOf(Math.max(...means))]);
    expect(first.choices?.[0].leastR).toBeCloseTo(0.979163432977498, 12);
  });
});

describe("exact dependencies", () => {
  const random = randomStream(11, "dependencies", 0);
  const n = 24;
  const [a, b, c, d] = [0, 1, 2, 3].map(() => noise(random, n));
  const mix = (f: (i: number) => number) => Float64Array.from({ length: n }, (_, i) => f(i));

  test("Hald's a + b is named in words; the column beside it stays finite", () => {
    const { diagnosis, findings } = diagnose(
      fromRows(E.data.aliased_from_hald),
      ["a", "b", "c", "sum_ab"],
      OPTIONS,
    );
    expect(diagnosis.dependencies).toEqual([
      { names: ["a", "b", "sum_ab"], kind: "sum", relation: "sum_ab = a + b" },
    ]);
    expect(diagnosis.allDepend).toBe(false);
    expect(diagnosis.correlationCondition).toBe(Infinity);
    const exact = findings.filter(({ kind }) => kind === "exact-dependency");
    expect(exact.map(({ message }) => message)).toEqual(["depend on each other exactly: sum_ab = a + b"]);
    expect(findings.filter(({ kind }) => kind === "inflated")).toEqual([]);
  });

  test("a copy, a change of unit, a mean, a difference and a combination of four", () => {
    const matrix = fromColumns(
      [
        a,
        mix((i) => a[i]),
        mix((i) => 32 - 1.8 * a[i]),
        b,
        mix((i) => (a[i] + b[i]) / 2),
        c,
        mix((i) => b[i] - c[i]),
        d,
        mix((i) => a[i] + 2 * c[i] - 3 * d[i] + 5),
      ],
      n,
    );
    const columns = ["a", "copy", "unit", "b", "mean", "c", "difference", "d", "four"];
    const { dependencies, allDepend } = told(matrix, columns);
    expect(dependencies.map(({ kind, relation }) => `${kind}: ${relation}`)).toEqual([
      "copy: copy = a",
      "rescaled: unit = 32 − 1.8 × a",
      "combination: mean = 0.5 × a + 0.5 × b",
      "sum: b = c + difference",
      "combination: four = a + 2 × c + 5 − 3 × d",
    ]);
    expect(allDepend).toBe(true);
  });

  test("a sum of four others is beyond four columns: inflation is infinite, no relation is claimed", () => {
    const matrix = fromColumns([a, b, c, d, mix((i) => a[i] + b[i] + c[i] + d[i])], n);
    const { dependencies, inflation: factors } = told(matrix, names(5));
    expect(dependencies).toEqual([]);
    expect(factors.map((one) => one.inflation)).toEqual(new Array(5).fill(Infinity));
  });

  test("nearly is not exactly: a copy with an error of 1e-5 has a finite inflation", () => {
    const { dependencies, inflation: factors } = told(
      fromColumns([a, b, mix((i) => a[i] + 1e-5 * c[i])], n),
      names(3),
    );
    expect(dependencies).toEqual([]);
    expect(factors[0].inflation).toBeGreaterThan(1e9);
    expect(factors[0].inflation).toBeLessThan(1e12);
  });

  test("more columns than intervals: said once, and no huge number anywhere", () => {
    const matrix = fromColumns(
      Array.from({ length: 30 }, () => noise(random, 12)),
      12,
    );
    const { diagnosis, findings } = diagnose(matrix, names(30), OPTIONS);
    expect(diagnosis.allDepend).toBe(true);
    expect(diagnosis.dependencies).toEqual([]);
    expect(findings.filter(({ kind }) => kind === "exact-dependency").map(({ subject }) => subject)).toEqual([
      "all covariates",
    ]);
    const told = [
      ...diagnosis.inflation.map((one) => one.inflation),
      ...diagnosis.condition.indices,
      ...diagnosis.pruning.map((step) => step.inflation),
      diagnosis.correlationCondition,
    ];
    expect(told.filter((value) => Number.isNaN(value) || (value > 1e14 && Number.isFinite(value)))).toEqual(
      [],
    );
    expect(diagnosis.kept.length).toBeLessThan(12);
    // What is left is really below the limit, by a computation of its own.
    const left = pickColumns(
      matrix,
      diagnosis.kept.map((name) => names(30).indexOf(name)),
    );
    expect(Math.max(...inflation(left, diagnosis.kept).map((one) => one.inflation))).toBeLessThanOrEqual(10);
  });

  test("K = rows − 1 still has full rank, K = rows has not", () => {
    const columns = Array.from({ length: 8 }, () => noise(random, 8));
    expect(told(fromColumns(columns.slice(0, 7), 8), names(7)).allDepend).toBe(false);
    expect(told(fromColumns(columns, 8), names(8)).allDepend).toBe(true);
  });

  test("where there are only 4 rows, sets of 4 columns are not named for being 4", () => {
    const matrix = fromColumns(
      Array.from({ length: 6 }, () => noise(random, 4)),
      4,
    );
    expect(told(matrix, names(6)).dependencies).toEqual([]);
  });

  test("copies are found among more columns than intervals", () => {
    const columns = Array.from({ length: 20 }, () => noise(random, 10));
    columns.push(
      Float64Array.from(columns[3]),
      columns[4].map((x, i) => x - columns[5][i]),
    );
    expect(told(fromColumns(columns, 10), names(22)).dependencies.map((one) => one.relation)).toEqual([
      "c020 = c003",
      "c004 = c005 + c021",
    ]);
  });
});

describe("pruning", () => {
  test("Longley: largest inflation first, each factor checked against a regression of its own", () => {
    const { pruning, kept } = told(longley, LONGLEY);
    let left = LONGLEY.map((_, k) => k);
    for (const step of pruning) {
      const now = inflation(
        pickColumns(longley, left),
        left.map((k) => LONGLEY[k]),
      );
      const top = now.reduce((best, one) => (one.inflation > best.inflation ? one : best));
      expect(step.dropped).toBe(top.name);
      expect(step.inflation / top.inflation).toBeCloseTo(1, 9);
      expect(step.reason).toContain("variance inflation");
      left = left.filter((k) => LONGLEY[k] !== step.dropped);
    }
    expect(left.map((k) => LONGLEY[k])).toEqual(kept);
    expect(pruning[0].dropped).toBe("GNP");
    expect(Math.max(...inflation(pickColumns(longley, left), kept).map((one) => one.inflation))).toBeLessThan(
      10,
    );
  });

  test("by the user's order of priority the least important goes, though another is more inflated", () => {
    const priority = ["GNP", "Population", "Unemployed", "Armed.Forces", "Year", "GNP.deflator"];
    const { pruning, kept } = told(longley, LONGLEY, { ...OPTIONS, priority });
    expect(pruning[0]).toMatchObject({ dropped: "GNP.deflator", by: "priority" });
    expect(kept).toContain("GNP");
    const unlisted = told(longley, LONGLEY, { ...OPTIONS, priority: ["GNP.deflator"] });
    expect(unlisted.pruning[0].dropped).toBe("GNP");
  });

  test("decisions come first, with their note; what is to be kept goes last", () => {
    const decisions = [{ drop: "Year", keep: "GNP", note: "same story" }];
    const { pruning, kept } = told(longley, LONGLEY, { ...OPTIONS, decisions });
    expect(pruning[0]).toMatchObject({
      dropped: "Year",
      by: "decision",
      reason: "dropped by decision, GNP kept in its place: same story",
    });
    expect(pruning[0].inflation).toBeCloseTo(758.980597406364, 5);
    expect(kept).toContain("GNP");
  });

  test("mistakes in decisions are told with where", () => {
    const failing = (decisions: CollinearityOptions["decisions"]) => () =>
      diagnose(longley, LONGLEY, { ...OPTIONS, decisions });
    expect(failing([{ drop: "Yaer", note: "" }])).toThrow(InputError);
    expect(failing([{ drop: "Yaer", note: "" }])).toThrow(/decisions\[0\]\.drop.*found "Yaer"/);
    const both = [
      { drop: "Year", keep: "GNP", note: "" },
      { drop: "GNP", note: "" },
    ];
    expect(failing(both)).toThrow(/"GNP" both kept .* and dropped/);
    expect(() => diagnose(longley, LONGLEY, { ...OPTIONS, priority: ["gnp"] })).toThrow(/priority\[0\]/);
  });
});

describe("findings", () => {
  test("Longley: pairs, inflation and the ill-conditioned dimension with numbers", () => {
    const { findings } = diagnose(longley, LONGLEY, OPTIONS);
    const of = (kind: string) => findings.filter((one) => one.kind === kind);
    expect(of("correlated").reduce((sum, one) => sum + (one.count ?? 1), 0)).toBe(6);
    expect(of("inflated").map((one) => one.subject)).toEqual([
      "GNP.deflator",
      "GNP",
      "Unemployed",
      "Population",
      "Year",
    ]);
    const last = of("ill-conditioned").at(-1);
    expect(last?.message).toContain("condition index 43280");
    expect(last?.message).toContain("Year (1.00)");
    expect(of("correlated")[0].message).toMatch(
      /GNP \(r = 0\.99, n = 16, 0\.\d\d once the year is taken out\)/,
    );
  });

  test("the uncentred columns are used for Belsley's indices where they are given", () => {
    const centred = fromColumns(
      LONGLEY.map((_, k) => {
        const column = Array.from({ length: 16 }, (_, i) => longley.data[i * 6 + k]);
        const mean = column.reduce((a, b) => a + b) / 16;
        return column.map((value) => value - mean);
      }),
      16,
    );
    const raw = diagnose(centred, LONGLEY, OPTIONS, { uncentred: longley }).diagnosis.condition.indices;
    expect(worst(raw, E.expected.longley.belsley_with_intercept.condition_indices, true)).toBeLessThan(1e-7);
    const without = diagnose(centred, LONGLEY, OPTIONS).diagnosis.condition.indices;
    expect(without.at(-1)).toBeCloseTo(110.544153442269, 6);
  });

  test("missing cells are said; too few rows and constants are refused", () => {
    const holes = { ...longley, data: longley.data.map((x, at) => (at === 7 || at === 14 ? Number.NaN : x)) };
    const { diagnosis, findings } = diagnose(holes, LONGLEY, OPTIONS);
    expect(diagnosis.completeRows).toBe(14);
    expect(diagnosis.pearson.n.data[1]).toBe(15);
    expect(findings[0]).toMatchObject({ kind: "incomplete-column", subject: "GNP", count: 1 });
    expect(() => diagnose(fromRows([[1], [2], [Number.NaN]]), ["a"], OPTIONS)).toThrow(/found 2 of 3/);
    expect(() => diagnose(fromRows([[0.1], [0.1], [0.1], [0.1]]), ["a"], OPTIONS)).toThrow(
      /one value in all 4/,
    );
  });

  test("no columns and one column are no failure", () => {
    expect(told({ rows: 5, columns: 0, data: new Float64Array() }, []).kept).toEqual([]);
    const one = told(fromRows([[1], [2], [4], [3]]), ["a"]);
    expect(one.inflation[0].inflation).toBeCloseTo(1, 12);
    expect(one.clusters).toMatchObject([{ members: ["a"], closest: "a" }]);
  });
});

describe("properties", () => {
  /** A matrix with some structure: shared factors, so that clusters and pruning have something to do. */
  const cases = fc.record({
    seed: fc.nat(1e6),
    rows: fc.integer({ min: 6, max: 25 }),
    columns: fc.integer({ min: 2, max: 9 }),
  });
  const build = ({ seed, rows, columns }: { seed: number; rows: number; columns: number }) => {
    const random = randomStream(seed, "property", 0);
    const shared = noise(random, rows);
    return {
      random,
      columns: Array.from({ length: columns }, () => {
        const weight = 3 * random.uniform();
        return noise(random, rows).map((x, i) => x + weight * shared[i]);
      }),
    };
  };

  test("scale and order of the columns change nothing", () => {
    fc.assert(
      fc.property(cases, (size) => {
        const { random, columns } = build(size);
        // A copy and a sum, so that ties and dependencies are there too.
        const sum = columns[0].map((x, i) => x + columns[1][i]);
        const all = [...columns, Float64Array.from(columns[0]), sum];
        const K = all.length;
        const first = told(fromColumns(all, size.rows), names(K));
        const order = random.permutation(K);
        const scaled = Array.from(order, (k) => {
          const scale = (random.uniform() < 0.5 ? -1 : 1) * 10 ** (6 * random.uniform() - 3);
          const shift = scale * random.below(5);
          return all[k].map((x) => x * scale + shift);
        });
        const shuffled = Array.from(order, (k) => names(K)[k]);
        const second = told(fromColumns(scaled, size.rows), shuffled);
        const factor = new Map(second.inflation.map((one) => [one.name, one.inflation]));
        for (const one of first.inflation) {
          if (one.inflation === Infinity) expect(factor.get(one.name)).toBe(Infinity);
          else expect((factor.get(one.name) ?? 0) / one.inflation).toBeCloseTo(1, 6);
        }
        const sets = (list: readonly { names: readonly string[] }[]) =>
          list.map((one) => [...one.names].sort().join()).sort();
        expect(sets(second.dependencies)).toEqual(sets(first.dependencies));
        const groups = (list: typeof first.clusters) =>
          list.map((one) => `${[...one.members].sort().join()}: ${one.closest}`).sort();
        expect(groups(second.clusters)).toEqual(groups(first.clusters));
        expect(second.order.map((k) => shuffled[k])).toEqual(first.order.map((k) => names(K)[k]));
        expect(second.pruning.map((step) => step.dropped)).toEqual(first.pruning.map((step) => step.dropped));
        expect(second.allDepend).toBe(first.allDepend);
      }),
      { seed: 1, numRuns: 80 },
    );
  });

  test("a duplicated column is named as such, whatever else there is", () => {
    fc.assert(
      fc.property(cases, fc.nat(), (size, pick) => {
        const { columns } = build(size);
        const original = pick % columns.length;
        const all = [...columns, Float64Array.from(columns[original])];
        const { dependencies, inflation: factors } = told(fromColumns(all, size.rows), names(all.length));
        const pair = [names(all.length)[original], names(all.length)[columns.length]];
        expect(dependencies.filter((one) => one.kind === "copy").map((one) => one.names)).toEqual([pair]);
        expect(factors[original].inflation).toBe(Infinity);
      }),
      { seed: 2, numRuns: 80 },
    );
  });

  test("where K < rows, noise columns never change the exact dependencies of the others", () => {
    fc.assert(
      fc.property(cases, fc.integer({ min: 1, max: 8 }), (size, extra) => {
        const rows = size.rows + size.columns + extra + 3;
        const { random, columns } = build({ ...size, rows });
        const last = columns[columns.length - 1];
        const base = [
          ...columns,
          columns[0].map((x) => 3 - 2 * x),
          columns[0].map((x, i) => 0.5 * x - 2 * columns[1][i] + (columns.length > 2 ? last[i] : 0)),
        ];
        const before = told(fromColumns(base, rows), names(base.length));
        const more = [...base, ...Array.from({ length: extra }, () => noise(random, rows))];
        const after = told(fromColumns(more, rows), names(more.length));
        expect(before.dependencies.length).toBe(2);
        expect(after.dependencies).toEqual(before.dependencies);
        for (let k = base.length; k < more.length; k++)
          expect(after.inflation[k].inflation).toBeLessThan(Infinity);
      }),
      { seed: 3, numRuns: 80 },
    );
  });
});
