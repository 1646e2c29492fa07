import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { principalComponents, scoreRows } from "../../src/components/components.ts";
import { loadingIntervals, matchAxes } from "../../src/components/resample.ts";
import { rotateComponents, varimax } from "../../src/components/rotate.ts";
import { componentsWithin } from "../../src/components/within.ts";
import { fromColumns, fromRows, type Matrix, pickColumns, toRows } from "../../src/data/matrix.ts";
import { type Random, randomStream } from "../../src/math/random.ts";
import { fromRecords, reference, worst } from "../collinearity/reference.ts";

const ARRESTS = ["Murder", "Assault", "UrbanPop", "Rape"];
const arrests = fromRecords(reference("F_pca").data.USArrests, ARRESTS);
const STICK = { type: "broken stick" } as const;
const names = (K: number) => Array.from({ length: K }, (_, k) => `c${k}`);
const noise = (random: Random, n: number) => Float64Array.from({ length: n }, () => random.normal());

/** Kaiser's criterion on rows of length 1, written down again from its definition. */
function criterion(matrix: Matrix): number {
  const rows = toRows(matrix).map((row) => row.map((value) => value / Math.hypot(...row)));
  return rows[0].reduce((sum, _, j) => {
    const squares = rows.map((row) => row[j] ** 2);
    const total = squares.reduce((a, b) => a + b);
    return sum + squares.reduce((a, b) => a + b * b, 0) - total ** 2 / rows.length;
  }, 0);
}

function turned(matrix: Matrix, angle: number): Matrix {
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  return fromRows(toRows(matrix).map(([x, y]) => [x * cos + y * sin, y * cos - x * sin]));
}

describe("varimax", () => {
  test("in two dimensions no angle of a fine grid does better", () => {
    fc.assert(
      fc.property(fc.nat(1e6), (seed) => {
        const random = randomStream(seed, "varimax", 0);
        const loadings = fromColumns([noise(random, 7), noise(random, 7)], 7);
        const best = criterion(varimax(loadings).rotated);
        let grid = 0;
        for (let step = 0; step < 720; step++)
          grid = Math.max(grid, criterion(turned(loadings, (step * Math.PI) / 720)));
        expect(best).toBeGreaterThanOrEqual(grid - 1e-12);
        expect(best - grid).toBeLessThan(1e-3);
      }),
      { seed: 1, numRuns: 40 },
    );
  });

  test("finds a simple structure that was turned away", () => {
    const simple = fromRows([
      [0.9, 0],
      [0.8, 0],
      [0.7, 0],
      [0, 0.9],
      [0, 0.6],
      [0, -0.5],
    ]);
    const { rotated, rotation } = varimax(turned(simple, 0.5));
    const found = toRows(rotated).map((row) => row.map((value) => Math.abs(value)).sort());
    found.forEach((row, i) => {
      expect(row[0]).toBeCloseTo(0, 9);
      expect(row[1]).toBeCloseTo(Math.hypot(...toRows(simple)[i]), 9);
    });
    expect(rotation.data[0] ** 2 + rotation.data[1] ** 2).toBeCloseTo(1, 12);
  });

  test("rotated components keep communalities and total share; scores are uncorrelated with variance 1", () => {
    const components = principalComponents(arrests, ARRESTS, STICK);
    const found = rotateComponents(components, 3);
    const square = (matrix: Matrix, k: number) =>
      toRows(matrix).map((row) => row.slice(0, k).reduce((sum, value) => sum + value * value, 0));
    expect(worst(square(found.correlations, 3), square(components.correlations, 3))).toBeLessThan(1e-12);
    const total = found.share.reduce((a, b) => a + b);
    expect(total).toBeCloseTo(components.cumulative[2], 12);
    const scores = toRows(found.scores);
    for (let a = 0; a < 3; a++)
      for (let b = 0; b < 3; b++) {
        const cross = scores.reduce((sum, row) => sum + row[a] * row[b], 0) / 49;
        expect(cross).toBeCloseTo(a === b ? 1 : 0, 12);
      }
    // Correlation of covariate and score, the long way.
    const z = toRows(arrests).map((row) =>
      row.map((x, k) => (x - (components.centre?.[k] ?? 0)) / (components.scale?.[k] ?? 1)),
    );
    for (let k = 0; k < 4; k++)
      for (let j = 0; j < 3; j++) {
        const r = scores.reduce((sum, row, i) => sum + row[j] * z[i][k], 0) / 49;
        expect(r).toBeCloseTo(found.correlations.data[k * 3 + j], 12);
      }
    expect(found.ledBy[0].map((one) => one.name)).toEqual(["Murder", "Assault"]);
    expect(found.ledBy[1].map((one) => one.name)).toEqual(["UrbanPop"]);
  });

  test("none kept, nothing rotated", () => {
    const { labels, scores } = rotateComponents(principalComponents(arrests, ARRESTS, STICK), 0);
    expect(labels).toEqual([]);
    expect(scores.columns).toBe(0);
  });
});

describe("components within themes", () => {
  const random = randomStream(3, "within", 0);
  const n = 20;
  const [u, v] = [noise(random, n), noise(random, n)];
  const near = (base: Float64Array) => base.map((x) => x + 0.3 * random.normal());
  const matrix = fromColumns([near(u), near(v), near(u), noise(random, n), near(v), near(u)], n);
  const themes = ["rain", "snow", "rain", "people", "snow", "rain"];
  const found = componentsWithin(matrix, names(6), themes, { type: "number", number: 1 });

  test("each theme's own components, kept ones first, loadings on the theme only", () => {
    expect(found.labels).toEqual(["rain 1", "snow 1", "people 1", "rain 2", "rain 3", "snow 2"]);
    expect(found.kept).toBe(3);
    const rain = principalComponents(pickColumns(matrix, [0, 2, 5]), ["c0", "c2", "c5"], STICK);
    expect(toRows(found.scores).map((row) => row[0])).toEqual(toRows(rain.scores).map((row) => row[0]));
    const first = toRows(found.loadings).map((row) => row[0]);
    expect([first[0], first[2], first[5]]).toEqual(toRows(rain.loadings).map((row) => row[0]));
    expect([first[1], first[3], first[4]]).toEqual([0, 0, 0]);
    expect(found.share[0]).toBeCloseTo(rain.share[0] / 2, 12);
    expect(found.cumulative.at(-1)).toBeCloseTo(1, 12);
  });

  test("new rows are scored by the same recipe; a single covariate keeps itself under any rule", () => {
    expect(worst(scoreRows(found, matrix).data, found.scores.data)).toBeLessThan(1e-12);
    const stick = componentsWithin(matrix, names(6), themes, STICK);
    expect(stick.labels.slice(0, stick.kept)).toEqual(["rain 1", "snow 1", "people 1"]);
    expect(stick.keptBecause).toContain("people: a single covariate");
    // An eigenvalue of 1 is not above 1, so by the rule alone it would go.
    const above = componentsWithin(matrix, names(6), themes, { type: "eigenvalue" });
    expect(above.labels.slice(0, above.kept)).toContain("people 1");
  });
});

describe("resampled loadings", () => {
  test("axes that changed places or sides are put back; one without a partner is zero", () => {
    const [x, y, z] = [
      [1, 0, 0],
      [0, 0.8, 0.6],
      [0, 0.6, -0.8],
    ].map((axis) => Float64Array.from(axis));
    const found = matchAxes([x, y, z], [y.map((value) => -value), z, x]);
    expect(found.map((axis) => Array.from(axis))).toEqual([x, y, z].map((axis) => Array.from(axis)));
    expect(matchAxes([x, y], [y]).map((axis) => Array.from(axis))).toEqual([[0, 0, 0], Array.from(y)]);
  });

  test("two strong factors: intervals hold the loadings, the same for the same stream", () => {
    const random = randomStream(4, "resample", 0);
    const n = 80;
    const [u, v] = [noise(random, n), noise(random, n)];
    const near = (base: Float64Array) => base.map((x) => x + 0.2 * random.normal());
    const matrix = fromColumns([near(u), near(u), near(u), near(v), near(v), near(v), near(v)], n);
    const components = principalComponents(matrix, names(7), { type: "number", number: 2 });
    const run = () =>
      loadingIntervals(matrix, components, { replicates: 200, level: 0.95 }, randomStream(9, "loadings", 0));
    const found = run();
    expect(found.replicates + found.leftOut).toBe(200);
    expect(Math.min(...found.congruence)).toBeGreaterThan(0.95);
    for (let at = 0; at < 14; at++) {
      const loading = components.loadings.data[Math.floor(at / 2) * 7 + (at % 2)];
      expect(found.lower.data[at]).toBeLessThanOrEqual(loading + 0.05);
      expect(found.upper.data[at]).toBeGreaterThanOrEqual(loading - 0.05);
    }
    expect(run()).toEqual(found);
  });

  test("intervals of noise are wide, and a column that may not vary in a sample leaves it out", () => {
    const random = randomStream(5, "resample", 0);
    const rare = Float64Array.from({ length: 8 }, (_, i) => (i === 0 ? 1 : 0));
    const matrix = fromColumns([noise(random, 8), noise(random, 8), rare], 8);
    const components = principalComponents(matrix, names(3), { type: "number", number: 1 });
    const found = loadingIntervals(matrix, components, { replicates: 300, level: 0.9 }, random);
    // The one row is missed by a sample of 8 with probability (7/8)⁸ = 0.344; all its rows with 1e-7.
    expect(found.leftOut / 300).toBeGreaterThan(0.344 - 4 * 0.0274);
    expect(found.leftOut / 300).toBeLessThan(0.344 + 4 * 0.0274);
    const widest = Math.max(...found.upper.data.map((value, at) => value - found.lower.data[at]));
    expect(widest).toBeGreaterThan(0.5);
  });
});
