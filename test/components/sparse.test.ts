import { readFileSync } from "node:fs";
import fc from "fast-check";
import { Matrix as Dense, EVD } from "ml-matrix";
import { describe, expect, test } from "vitest";
import { unitColumns } from "../../src/collinearity/decomposition.ts";
import { principalComponents } from "../../src/components/components.ts";
import { groupsOf, reduceColumns } from "../../src/components/reduce.ts";
import { SPARSE_HOLDS, sparseAxes } from "../../src/components/sparse.ts";
import { fromColumns, type Matrix, pickColumns } from "../../src/data/matrix.ts";
import { randomStream } from "../../src/math/random.ts";

interface Reference {
  readonly names: readonly string[];
  readonly lower: readonly (readonly number[])[];
  readonly axis1: readonly number[];
  readonly axis2: readonly number[];
  readonly sparse1: readonly number[];
  readonly tolerance: number;
}

const pitprops = JSON.parse(
  readFileSync(new URL("../reference/pitprops.json", import.meta.url), "utf8"),
) as Reference;

/** Columns of unit length whose cross products are the correlations: the symmetric root. */
function rootOf({ lower }: Reference): Matrix {
  const K = lower.length;
  const R = lower.map((_, i) => lower.map((_row, j) => (j <= i ? lower[i][j] : lower[j][i])));
  const { realEigenvalues, eigenvectorMatrix: V } = new EVD(new Dense(R), { assumeSymmetric: true });
  const root = V.mmul(Dense.diag(realEigenvalues.map((one) => Math.sqrt(Math.max(0, one))))).mmul(
    V.transpose(),
  );
  return { rows: K, columns: K, data: Float64Array.from(root.to1DArray()) };
}

const axisOf = (axes: Matrix, j: number) =>
  Float64Array.from({ length: axes.rows }, (_, i) => axes.data[i * axes.columns + j]);

function noisy(seed: number, rows: number, columns: number): Matrix {
  const random = randomStream(seed, "sparse test", 0);
  const shared = Float64Array.from({ length: rows }, () => random.normal());
  return fromColumns(
    Array.from({ length: columns }, (_, k) =>
      Float64Array.from({ length: rows }, (_row, i) => (k % 2 === 0 ? shared[i] : 0) + random.normal()),
    ),
    rows,
  );
}

describe("sparse axes by regularised rank-one approximation (Shen & Huang 2008)", () => {
  test("pit props: the correlations are those of the published principal axes", () => {
    const { lower, axis1, axis2, tolerance } = pitprops;
    const R = lower.map((_, i) => lower.map((_row, j) => (j <= i ? lower[i][j] : lower[j][i])));
    const { realEigenvalues, eigenvectorMatrix } = new EVD(new Dense(R), { assumeSymmetric: true });
    const order = realEigenvalues.map((_, k) => k).sort((a, b) => realEigenvalues[b] - realEigenvalues[a]);
    [axis1, axis2].forEach((axis, j) => {
      const found = eigenvectorMatrix.getColumn(order[j]);
      const sign = Math.sign(found[0] * axis[0]);
      axis.forEach((value, k) => {
        expect(Math.abs(sign * found[k] - value)).toBeLessThan(tolerance);
      });
    });
  });

  test("pit props: the published first sparse axis with seven loadings", () => {
    const { axes, counts } = sparseAxes(rootOf(pitprops), 1, [7]);
    expect(counts).toEqual([7]);
    const axis = axisOf(axes, 0);
    const sign = Math.sign(axis[0]);
    pitprops.sparse1.forEach((value, k) => {
      expect(Math.abs(sign * axis[k] - value)).toBeLessThan(pitprops.tolerance);
      if (value === 0) expect(axis[k]).toBe(0);
    });
  });

  test("what it ends at is a minimum for its λ: no change of one loading or of u makes the criterion smaller", () => {
    const { unit } = unitColumns(noisy(3, 20, 8));
    const { axes, lambdas } = sparseAxes(unit, 1, [4]);
    const v = axisOf(axes, 0);
    const project = (w: Float64Array) => {
      const u = new Float64Array(20);
      for (let r = 0; r < 20; r++) for (let k = 0; k < 8; k++) u[r] += unit.data[r * 8 + k] * w[k];
      const length = Math.hypot(...u);
      return u.map((value) => value / length);
    };
    const u = project(v);
    const y = Float64Array.from({ length: 8 }, (_, k) => {
      let sum = 0;
      for (let r = 0; r < 20; r++) sum += unit.data[r * 8 + k] * u[r];
      return sum;
    });
    // stationarity in ṽ: ṽ = S(Z'u, λ), which must have the direction of v; and u is the best for ṽ by construction
    const thin = y.map((value) => Math.sign(value) * Math.max(0, Math.abs(value) - lambdas[0]));
    const length = Math.hypot(...thin);
    thin.forEach((value, k) => {
      expect(value / length).toBeCloseTo(v[k], 8);
    });
    const criterion = (w: Float64Array) => {
      const side = project(w);
      let sum = 0;
      for (let r = 0; r < 20; r++)
        for (let k = 0; k < 8; k++) sum += (unit.data[r * 8 + k] - side[r] * w[k]) ** 2;
      return sum + 2 * lambdas[0] * w.reduce((total, one) => total + Math.abs(one), 0);
    };
    const at = criterion(thin);
    for (let k = 0; k < 8; k++)
      for (const step of [-1e-3, 1e-3]) {
        const moved = Float64Array.from(thin);
        moved[k] += step;
        expect(criterion(moved)).toBeGreaterThanOrEqual(at - 1e-9);
      }
  });

  test("with all loadings allowed it is the principal axis, and the shares are those of the components", () => {
    const matrix = noisy(5, 25, 6);
    const names = ["a", "b", "c", "d", "e", "f"];
    const { unit } = unitColumns(matrix);
    const { axes, cumulative } = sparseAxes(unit, 3, [6, 6, 6]);
    const own = principalComponents(matrix, names, { type: "number", number: 3 });
    for (let j = 0; j < 3; j++) {
      const axis = axisOf(axes, j);
      const dot = axis.reduce((sum, value, k) => sum + value * own.loadings.data[k * own.sd.length + j], 0);
      expect(Math.abs(dot)).toBeCloseTo(1, 8);
      expect(cumulative[j]).toBeCloseTo(own.cumulative[j], 8);
    }
  });

  test("the number of loadings chosen is the least that holds nine tenths", () => {
    const { unit } = unitColumns(noisy(9, 30, 9));
    const { counts } = sparseAxes(unit, 1);
    const held = (m: number) => sparseAxes(unit, 1, [m]).cumulative[0];
    const full = held(9);
    expect(held(counts[0])).toBeGreaterThanOrEqual(SPARSE_HOLDS * full);
    for (let m = 1; m < counts[0]; m++) expect(held(m)).toBeLessThan(SPARSE_HOLDS * full);
  });

  test("the order of the columns changes nothing but the order of the loadings", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 1e6 }), (seed) => {
        const matrix = noisy(seed, 16, 7);
        const order = Array.from(randomStream(seed, "order", 0).permutation(7));
        const plain = sparseAxes(unitColumns(matrix).unit, 2);
        const turned = sparseAxes(unitColumns(pickColumns(matrix, order)).unit, 2);
        expect(turned.counts).toEqual(plain.counts);
        for (let j = 0; j < 2; j++) {
          const [a, b] = [axisOf(plain.axes, j), axisOf(turned.axes, j)];
          const sign = Math.sign(order.reduce((sum, k, i) => sum + a[k] * b[i], 0));
          order.forEach((k, i) => {
            expect(sign * b[i]).toBeCloseTo(a[k], 7);
          });
        }
      }),
      { numRuns: 30 },
    );
  });
});

describe("components as the pipeline asks for them", () => {
  const names = ["a", "b", "c", "d", "e", "f"];
  const options = {
    keep: { type: "number", number: 2 },
    within: "all",
    simplify: "none",
    resamples: 0,
  } as const;

  test("groups: themes, the user's, and the rest", () => {
    const themes = ["rain", "rain", "snow", "snow", "heat", "heat"];
    expect(groupsOf(names, themes, "all")).toBeUndefined();
    expect(groupsOf(names, themes, "themes")).toEqual(themes);
    expect(groupsOf(names, themes, { water: ["a", "c"], warmth: ["e"] })).toEqual([
      "water",
      "the rest",
      "water",
      "the rest",
      "warmth",
      "the rest",
    ]);
  });

  test("within groups simple loadings and intervals stand where the loadings do", () => {
    const matrix = noisy(11, 24, 6);
    const groups = ["x", "y", "x", "y", "x", "y"];
    const one = { type: "number", number: 1 } as const;
    for (const simplify of ["varimax", "sparse"] as const) {
      const made = reduceColumns(
        matrix,
        names,
        groups,
        { ...options, keep: one, simplify, resamples: 50 },
        4,
      );
      expect(made.kept).toBe(2);
      expect(made.simplified?.labels).toHaveLength(2);
      for (let k = 0; k < 6; k++)
        for (let j = 0; j < 2; j++) {
          const outside = groups[k] !== made.themes?.[j];
          if (!outside) continue;
          expect(made.simplified?.loadings.data[k * 2 + j]).toBe(0);
          expect(made.intervals?.upper.data[k * 2 + j]).toBe(0);
        }
      const m = made.labels.length;
      for (let k = 0; k < 6; k++)
        for (let j = 0; j < 2; j++) {
          const loading = made.loadings.data[k * m + j];
          expect(made.intervals?.lower.data[k * 2 + j]).toBeLessThanOrEqual(Math.max(loading, 0) + 0.35);
          expect(made.intervals?.lower.data[k * 2 + j]).toBeLessThanOrEqual(
            made.intervals?.upper.data[k * 2 + j] ?? Number.NaN,
          );
        }
    }
  });

  test("the same seed gives the same intervals, another seed others", () => {
    const matrix = noisy(12, 24, 6);
    const made = (seed: number) =>
      reduceColumns(matrix, names, undefined, { ...options, resamples: 40 }, seed);
    expect(made(1)).toEqual(made(1));
    expect(made(1).intervals).not.toEqual(made(2).intervals);
  });
});
