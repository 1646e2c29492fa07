import fc from "fast-check";
import { Matrix as Dense, EVD } from "ml-matrix";
import { describe, expect, test } from "vitest";
import { principalComponents, scoreRows } from "../../src/components/components.ts";
import { symmetricEigenvalues } from "../../src/components/eigenvalues.ts";
import { brokenStick, chooseKept, noiseEigenvalues, parallelEigenvalues } from "../../src/components/keep.ts";
import { fromColumns, fromRows, type Matrix, toRows } from "../../src/data/matrix.ts";
import { InputError } from "../../src/errors.ts";
import { mean, quantile7, sampleSd } from "../../src/math/quantile.ts";
import { randomStream } from "../../src/math/random.ts";
import { fromRecords, reference, worst } from "../collinearity/reference.ts";

const F = reference("F_pca");
const ARRESTS = ["Murder", "Assault", "UrbanPop", "Rape"];
const arrests = fromRecords(F.data.USArrests, ARRESTS);
const STICK = { type: "broken stick" } as const;
const names = (K: number) => Array.from({ length: K }, (_, k) => `c${k}`);
const noise = (rows: number, K: number, seed: number): Matrix => {
  const random = randomStream(seed, "components", 0);
  return fromColumns(
    Array.from({ length: K }, () => Float64Array.from({ length: rows }, () => random.normal())),
    rows,
  );
};

describe("USArrests (R's prcomp, correlation matrix)", () => {
  const expected = F.expected.usarrests_scaled;
  const found = principalComponents(arrests, ARRESTS, STICK);

  test("sd to 1e-10, shares, mean and sd of the columns", () => {
    expect(worst(found.sd, expected.sdev)).toBeLessThan(1e-10);
    const eigenvalues = found.sd.map((value) => value * value);
    expect(worst(eigenvalues, expected.eigenvalues)).toBeLessThan(1e-10);
    expect(worst(found.share, expected.proportion)).toBeLessThan(1e-10);
    expect(worst(found.cumulative, expected.cumulative)).toBeLessThan(1e-10);
    expect(worst(found.centre ?? [], expected.center)).toBeLessThan(1e-10);
    expect(worst(found.scale ?? [], expected.scale)).toBeLessThan(1e-10);
  });

  test("loadings to 1e-9 with the sign rule: the largest of each is positive", () => {
    const raw: number[][] = expected.rotation_rows_variables_cols_pc;
    const sign = ARRESTS.map((_, j) => {
      const top = raw.reduce((best, row) => (Math.abs(row[j]) > Math.abs(best) ? row[j] : best), 0);
      return Math.sign(top);
    });
    const aligned = raw.flatMap((row) => row.map((value, j) => value * sign[j]));
    expect(worst(found.loadings.data, aligned)).toBeLessThan(1e-9);
  });

  test("scores of three states to 1e-9", () => {
    for (const [state, scores] of Object.entries(expected.scores as Record<string, number[]>)) {
      const row = F.data.USArrests.findIndex((one: { state: string }) => one.state === state);
      expect(worst(toRows(found.scores)[row], scores), state).toBeLessThan(1e-9);
    }
  });

  test("broken stick keeps 1, eigenvalue above 1 keeps 1", () => {
    expect(found.kept).toBe(expected.broken_stick_retain);
    expect(found.keptBecause).toBe(
      "broken stick: 1 of 4 kept; share of variance of component 1: 62.0 % against 52.1 %; " +
        "share of variance of component 2: 24.7 % against 27.1 %",
    );
    const kaiser = principalComponents(arrests, ARRESTS, { type: "eigenvalue" });
    expect(kaiser.kept).toBe(expected.kaiser_retain_eigenvalue_above_1);
  });

  test("correlations are those of covariates with scores", () => {
    const { r } = { r: toRows(found.correlations) };
    const scores = toRows(found.scores);
    ARRESTS.forEach((_, k) => {
      const x = toRows(arrests).map((row) => row[k]);
      for (let j = 0; j < 4; j++) {
        const y = scores.map((row) => row[j]);
        const cross = x.reduce((sum, value, i) => sum + (value - mean(x)) * (y[i] - mean(y)), 0) / 49;
        expect(r[k][j]).toBeCloseTo(cross / sampleSd(x) / sampleSd(y), 12);
      }
    });
  });
});

describe("Longley and a wide matrix", () => {
  test("Longley: sd to 1e-10, loadings to 1e-9 after the sign rule", () => {
    const E = reference("E_collinearity");
    const columns: string[] = E.expected.longley.columns;
    const found = principalComponents(fromRecords(E.data.longley, columns), columns, STICK);
    expect(worst(found.sd, F.expected.longley_scaled.sdev)).toBeLessThan(1e-10);
    const raw: number[][] = F.expected.longley_scaled.rotation;
    for (let j = 0; j < 6; j++) {
      const column = raw.map((row) => row[j]);
      const top = column.reduce((best, value) => (Math.abs(value) > Math.abs(best) ? value : best));
      const own = toRows(found.loadings).map((row) => row[j]);
      const aligned = column.map((value) => value * Math.sign(top));
      expect(worst(own, aligned), `component ${j + 1}`).toBeLessThan(1e-9);
    }
  });

  test("5 rows of 8: four components, sd to 1e-10, all of the variance", () => {
    const found = principalComponents(fromRows(F.data.wide_5x8), names(8), STICK);
    const expected = F.expected.wide_5x8_scaled;
    expect(found.sd.length).toBe(expected.n_components_with_positive_variance);
    expect(worst(found.sd, expected.sdev_first4)).toBeLessThan(1e-10);
    expect(found.cumulative.at(-1)).toBeCloseTo(1, 12);
    expect([found.loadings.rows, found.loadings.columns]).toEqual([8, 4]);
    expect([found.scores.rows, found.scores.columns]).toEqual([5, 4]);
  });

  test("a duplicated column adds no component", () => {
    const matrix = noise(20, 3, 4);
    const twice = fromRows(toRows(matrix).map((row) => [...row, row[0]]));
    expect(principalComponents(twice, names(4), STICK).sd.length).toBe(3);
  });
});

describe("how many to keep", () => {
  test.each([4, 6, 10, 20])("broken stick of %i pieces to 1e-14", (p) => {
    expect(worst(brokenStick(p), F.expected.broken_stick[`p${p}`])).toBeLessThan(1e-14);
  });

  test("parallel analysis of two variables against the exact mean and 95 % point", () => {
    const replicates = 5000;
    for (const { n, mean_first_eigenvalue, q95_first_eigenvalue } of F.expected.parallel_analysis
      .analytic_two_variables) {
      const random = randomStream(5, "parallel", n);
      const first = Array.from(
        { length: replicates },
        () => noiseEigenvalues({ rows: n, columns: 2 }, random)[0],
      );
      const error = sampleSd(first) / Math.sqrt(replicates);
      expect(Math.abs(mean(first) - mean_first_eigenvalue) / error, `mean, n = ${n}`).toBeLessThan(4);
      // Standard error of a quantile, √(p(1 − p)/N)/density, the density by a difference around it.
      const width = quantile7(first, 0.96) - quantile7(first, 0.94);
      const quantileError = (Math.sqrt((0.95 * 0.05) / replicates) * width) / 0.02;
      const gap = Math.abs(quantile7(first, 0.95) - q95_first_eigenvalue);
      expect(gap / quantileError, `95 %, n = ${n}`).toBeLessThan(4);
    }
  });

  test.each([
    ["n 50, 4 variables", F.expected.parallel_analysis.monte_carlo_n50_p4],
    ["n 14, 6 variables", F.expected.parallel_analysis.monte_carlo_n14_p6],
  ])("parallel analysis, %s: means within 0.01, 95 % points within their error", (_, expected) => {
    const random = randomStream(6, "parallel", 0);
    const size = { rows: expected.n, columns: expected.p };
    const runs = Array.from({ length: 6000 }, () => noiseEigenvalues(size, random));
    const means = runs[0].map((_, j) => mean(runs.map((run) => run[j])));
    expect(worst(means, expected.mean)).toBeLessThan(0.01);
    const q95 = parallelEigenvalues(size, { replicates: 6000, quantile: 0.95 }, random);
    expect(worst(q95, expected.q95)).toBeLessThan(0.03);
  });

  test("parallel analysis is the same for the same stream and refuses to run without one", () => {
    const rule = { type: "parallel", replicates: 100, quantile: 0.95 } as const;
    const run = () => principalComponents(arrests, ARRESTS, rule, randomStream(1, "keep", 0));
    expect(run()).toEqual(run());
    expect(run().kept).toBe(1);
    expect(run().parallel?.length).toBe(4);
    expect(() => principalComponents(arrests, ARRESTS, rule)).toThrow(/random/);
  });

  test("noise of 60 rows of 100: wide samples give n − 1 eigenvalues that add up to K", () => {
    const eigenvalues = noiseEigenvalues({ rows: 12, columns: 30 }, randomStream(2, "wide", 0));
    expect(eigenvalues.length).toBe(11);
    expect(eigenvalues.reduce((a, b) => a + b)).toBeCloseTo(30, 10);
  });

  test("eigenvalues without vectors agree with a full decomposition; known ones of a path graph", () => {
    for (const side of [1, 2, 3, 7, 30]) {
      const matrix = noise(side, side, 7);
      const dense = Dense.from1DArray(side, side, matrix.data);
      const cross = dense.mmul(dense.transpose());
      const { realEigenvalues } = new EVD(cross, { assumeSymmetric: true });
      const expected = realEigenvalues.sort((a, b) => b - a);
      expect(worst(symmetricEigenvalues(Float64Array.from(cross.to1DArray()), side), expected)).toBeLessThan(
        1e-11 * expected[0],
      );
    }
    // 2 on the diagonal, −1 beside it: 2 − 2 cos(jπ/(n + 1)) (textbook result).
    const path = Float64Array.from({ length: 64 }, (_, at) => {
      const gap = Math.abs(Math.floor(at / 8) - (at % 8));
      return gap === 0 ? 2 : gap === 1 ? -1 : 0;
    });
    const known = Array.from({ length: 8 }, (_, j) => 2 - 2 * Math.cos(((8 - j) * Math.PI) / 9));
    expect(worst(symmetricEigenvalues(path, 8), known)).toBeLessThan(1e-13);
    expect(symmetricEigenvalues(Float64Array.of(3, 0, 0, 0, 5, 0, 0, 0, 3), 3)).toEqual([5, 3, 3]);
  });

  test("share, number, and none", () => {
    const sd = [1.4, 1.1, 0.8, 0.5].map((value) => value * Math.sqrt(4 / 4.06));
    const size = { rows: 20, columns: 4 };
    expect(chooseKept({ type: "share", share: 0.78 }, sd, size).kept).toBe(2);
    expect(chooseKept({ type: "share", share: 1 }, sd, size).kept).toBe(4);
    expect(chooseKept({ type: "number", number: 3 }, sd, size).kept).toBe(3);
    expect(chooseKept({ type: "number", number: 9 }, sd, size)).toEqual({
      kept: 4,
      keptBecause: "number: 4 of 4, as asked for; 9 asked for, but only 4 have variance",
    });
    expect(chooseKept(STICK, [1, 1, 1, 1], size)).toEqual({
      kept: 0,
      keptBecause: "broken stick: 0 of 4 kept; share of variance of component 1: 25.0 % against 52.1 %",
    });
    expect(chooseKept({ type: "eigenvalue" }, [1, 1, 1, 1], size).kept).toBe(0);
    expect(chooseKept(STICK, [1], { rows: 20, columns: 1 }).kept).toBe(1);
  });

  test("senseless rules are the user's mistake, told with the value", () => {
    const size = { rows: 20, columns: 2 };
    for (const rule of [
      { type: "share", share: 1.5 },
      { type: "number", number: 0 },
      { type: "number", number: 1.5 },
      { type: "parallel", replicates: 100, quantile: 95 },
      { type: "parallel", replicates: 0, quantile: 0.95 },
    ] as const) {
      const act = () => chooseKept(rule, [1, 1], size, randomStream(1, "x", 0));
      expect(act).toThrow(InputError);
      expect(act).toThrow(/components\.keep\./);
    }
  });
});

describe("scores", () => {
  test("rows of the matrix get their own scores back; a new row is placed by the recorded mean and sd", () => {
    const found = principalComponents(arrests, ARRESTS, STICK);
    expect(scoreRows(found, arrests)).toEqual(found.scores);
    // One sd above the mean in everything: the scores are the sums of the loadings.
    const row = ARRESTS.map((_, k) => (found.centre?.[k] ?? 0) + (found.scale?.[k] ?? 0));
    const sums = ARRESTS.map((_, j) => toRows(found.loadings).reduce((sum, one) => sum + one[j], 0));
    expect(worst(scoreRows(found, fromRows([row])).data, sums)).toBeLessThan(1e-12);
    expect(() => scoreRows(found, fromRows([[1, 2]]))).toThrow(/the 4 covariates .*found rows of 2 values/);
  });

  test("scores are uncorrelated with variance sd², and give the standardised matrix back", () => {
    fc.assert(
      fc.property(
        fc.nat(1e6),
        fc.integer({ min: 3, max: 15 }),
        fc.integer({ min: 1, max: 20 }),
        (seed, n, K) => {
          const matrix = noise(n, K, seed);
          const found = principalComponents(matrix, names(K), STICK);
          const m = Math.min(n - 1, K);
          expect(found.sd.length).toBe(m);
          const scores = toRows(found.scores);
          for (let a = 0; a < m; a++)
            for (let b = 0; b <= a; b++) {
              const cross = scores.reduce((sum, row) => sum + row[a] * row[b], 0) / (n - 1);
              expect(cross).toBeCloseTo(a === b ? found.sd[a] ** 2 : 0, 9);
            }
          const loadings = toRows(found.loadings);
          for (let k = 0; k < K; k++) {
            const x = toRows(matrix).map((row) => row[k]);
            const back = scores.map((row) => row.reduce((sum, value, j) => sum + value * loadings[k][j], 0));
            const z = x.map((value) => (value - mean(x)) / sampleSd(x));
            expect(worst(back, z)).toBeLessThan(1e-9);
          }
        },
      ),
      { seed: 1, numRuns: 60 },
    );
  });

  test("order and scale of the columns change neither sd nor scores", () => {
    fc.assert(
      fc.property(fc.nat(1e6), fc.integer({ min: 2, max: 7 }), (seed, K) => {
        const matrix = noise(12, K, seed);
        const random = randomStream(seed, "shuffle", 0);
        const order = Array.from(random.permutation(K));
        const scale = order.map(() => 10 ** (4 * random.uniform() - 2));
        const other = fromRows(toRows(matrix).map((row) => order.map((k, at) => row[k] * scale[at] + 3)));
        const [a, b] = [
          principalComponents(matrix, names(K), STICK),
          principalComponents(
            other,
            order.map((k) => names(K)[k]),
            STICK,
          ),
        ];
        expect(worst(b.sd, a.sd)).toBeLessThan(1e-9);
        expect(worst(b.scores.data, a.scores.data)).toBeLessThan(1e-6);
      }),
      { seed: 2, numRuns: 100 },
    );
  });

  test("missing cells, constants and too few rows are refused", () => {
    const bad = (rows: number[][]) => () => principalComponents(fromRows(rows), names(rows[0].length), STICK);
    expect(
      bad([
        [1, 2],
        [2, Number.NaN],
        [3, 1],
      ]),
    ).toThrow(/c1: expected a value .*NaN in row 2/);
    expect(
      bad([
        [1, 2],
        [2, 2],
        [3, 2],
      ]),
    ).toThrow(/c1: expected covariates that vary/);
    expect(
      bad([
        [1, 2],
        [2, 1],
      ]),
    ).toThrow(/at least 3 intervals/);
  });
});
