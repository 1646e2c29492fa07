import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { coverageOf, signedArea } from "../../src/layers/coverage.ts";

type Point = readonly [number, number];

/** Sutherland & Hodgman (1974): a polygon clipped by one half-plane at a time; here by a pixel's four sides. */
function clipToPixel(ring: readonly Point[], column: number, row: number): Point[] {
  const sides: readonly (readonly [axis: 0 | 1, at: number, keep: 1 | -1])[] = [
    [0, column, 1],
    [0, column + 1, -1],
    [1, row, 1],
    [1, row + 1, -1],
  ];
  let points = [...ring];
  for (const [axis, at, keep] of sides) {
    const out: Point[] = [];
    points.forEach((p, i) => {
      const q = points[(i + 1) % points.length];
      const [inP, inQ] = [(p[axis] - at) * keep >= 0, (q[axis] - at) * keep >= 0];
      if (inP) out.push(p);
      if (inP === inQ) return;
      const t = (at - p[axis]) / (q[axis] - p[axis]);
      const cut: [number, number] = [p[0] + t * (q[0] - p[0]), p[1] + t * (q[1] - p[1])];
      cut[axis] = at;
      out.push(cut);
    });
    points = out;
  }
  return points;
}

/** Area by the shoelace formula about the first point. */
function areaOf(ring: readonly Point[]): number {
  if (ring.length === 0) return 0;
  const [x0, y0] = ring[0];
  let sum = 0;
  ring.forEach(([x, y], i) => {
    const [u, v] = ring[(i + 1) % ring.length];
    sum += (x - x0) * (v - y0) - (u - x0) * (y - y0);
  });
  return Math.abs(sum) / 2;
}

const closed = (ring: readonly Point[]) => Float64Array.from([...ring, ring[0]].flat());

/** A simple polygon: corners seen from a centre in the order of their angles, none half a turn from the next. */
const star = fc
  .record({
    centre: fc.tuple(
      fc.double({ min: -2, max: 10, noNaN: true }),
      fc.double({ min: -2, max: 8, noNaN: true }),
    ),
    gaps: fc.array(fc.double({ min: 0.3, max: 1, noNaN: true }), { minLength: 5, maxLength: 14 }),
    radii: fc.array(fc.double({ min: 0.02, max: 6, noNaN: true }), { minLength: 14, maxLength: 14 }),
    turned: fc.boolean(),
  })
  .map(({ centre, gaps, radii, turned }) => {
    const total = gaps.reduce((sum, one) => sum + one, 0);
    let angle = 0;
    const ring = gaps.map((gap, i): Point => {
      angle += (gap / total) * 2 * Math.PI;
      return [centre[0] + radii[i] * Math.cos(angle), centre[1] + radii[i] * Math.sin(angle)];
    });
    return { centre, ring: turned ? ring.toReversed() : ring };
  });

const [W, H] = [8, 6];

/** The largest difference over all pixels, and of row totals, between the two ways. */
function difference(outer: readonly Point[], holes: readonly (readonly Point[])[]): number {
  const cover = coverageOf([[closed(outer), ...holes.map(closed)]], W, H);
  let worst = 0;
  for (let row = 0; row < H; row++)
    for (let column = 0; column < W; column++) {
      const expected =
        areaOf(clipToPixel(outer, column, row)) -
        holes.reduce((sum, hole) => sum + areaOf(clipToPixel(hole, column, row)), 0);
      const [c, r] = [column - cover.left, row - cover.top];
      const inWindow = c >= 0 && r >= 0 && c < cover.columns && r < cover.rows;
      worst = Math.max(worst, Math.abs((inWindow ? cover.fractions[r * cover.columns + c] : 0) - expected));
    }
  const total = cover.rowTotals.reduce((sum, one) => sum + one, 0);
  const area = areaOf(outer) - holes.reduce((sum, hole) => sum + areaOf(hole), 0);
  return Math.max(worst, Math.abs(total - area) / Math.max(1, area));
}

describe("coverage against clipping pixel by pixel (Sutherland & Hodgman 1974), 1e-12", () => {
  test("simple polygons, also partly or wholly outside, of either turn", () => {
    fc.assert(
      fc.property(star, ({ ring }) => {
        expect(difference(ring, [])).toBeLessThan(1e-12);
      }),
      { numRuns: 1500, seed: 1 },
    );
  });

  test("with a hole of either turn", () => {
    fc.assert(
      fc.property(
        star,
        fc.double({ min: 0.1, max: 0.9, noNaN: true }),
        fc.boolean(),
        ({ centre, ring }, size, turned) => {
          const hole = ring.map(
            ([x, y]): Point => [centre[0] + size * (x - centre[0]), centre[1] + size * (y - centre[1])],
          );
          expect(difference(ring, [turned ? hole.toReversed() : hole])).toBeLessThan(1e-12);
        },
      ),
      { numRuns: 500, seed: 2 },
    );
  });

  test("corners and edges that lie on pixel borders", () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fc.integer({ min: -2, max: 10 }), fc.integer({ min: -2, max: 8 })), {
          minLength: 3,
          maxLength: 3,
        }),
        (ring) => {
          expect(difference(ring, [])).toBeLessThan(1e-12);
        },
      ),
      { numRuns: 1000, seed: 3 },
    );
  });

  test("an area far wider than the grid covers every pixel wholly", () => {
    const cover = coverageOf(
      [
        [
          closed([
            [-1e6, -1e6],
            [1e6, -1e6],
            [1e6, 1e6],
            [-1e6, 1e6],
          ]),
        ],
      ],
      W,
      H,
    );
    for (const fraction of cover.fractions) expect(Math.abs(fraction - 1)).toBeLessThan(1e-12);
  });

  test("large coordinates: a square of a pixel far from the origin", () => {
    const at = 20000;
    const cover = coverageOf(
      [
        [
          closed([
            [at + 0.25, at + 0.25],
            [at + 1.25, at + 0.25],
            [at + 1.25, at + 1.25],
            [at + 0.25, at + 1.25],
          ]),
        ],
      ],
      40000,
      40000,
    );
    expect([...cover.fractions].map((one) => one.toFixed(12))).toEqual([
      "0.562500000000",
      "0.187500000000",
      "0.187500000000",
      "0.062500000000",
    ]);
  });

  test("twice the signed area turns with the ring", () => {
    expect(
      signedArea(
        closed([
          [0, 0],
          [2, 0],
          [2, 3],
          [0, 3],
        ]),
      ),
    ).toBe(12);
    expect(
      signedArea(
        closed([
          [0, 3],
          [2, 3],
          [2, 0],
          [0, 0],
        ]),
      ),
    ).toBe(-12);
  });
});
