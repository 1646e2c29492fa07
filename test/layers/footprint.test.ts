import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Polygon, Position, Where } from "../../src/data/place.ts";
import { InputError } from "../../src/errors.ts";
import { footprintOf } from "../../src/layers/footprint.ts";
import { type Grid, toPixel } from "../../src/layers/grid.ts";
import { NO_KEYS } from "../../src/layers/keys.ts";
import { findCrossing, unwrap } from "../../src/layers/rings.ts";
import { resolveSystem } from "../../src/layers/system.ts";

const system = (text: string) => resolveSystem({ path: "x.tif", user: text, keys: NO_KEYS, wkt: undefined });
const WGS84 = system("EPSG:4326");
const northUp = (x0: number, y0: number, size: number, width: number, height: number): Grid => ({
  width,
  height,
  affine: { x0, a: size, b: 0, y0, d: 0, e: -size },
});
const area = (...polygons: Polygon[]): Where => ({ type: "area", name: "here", polygons });
const point = (...position: [number, number]): Where => ({ type: "point", name: "here", position });
const box = (w: number, s: number, e: number, n: number): Position[] => [
  [w, s],
  [e, s],
  [e, n],
  [w, n],
  [w, s],
];
const BY_AREA = { by: "area", validArea: 0 } as const;
const sum = (values: Iterable<number>) => [...values].reduce((total, one) => total + one, 0);
const errorName = (work: () => unknown) => {
  try {
    work();
  } catch (error) {
    return error instanceof InputError ? error.facts.name : String(error);
  }
  return "none";
};

describe("points", () => {
  const grid = northUp(10, 50, 0.5, 4, 4);
  test("nearest: the pixel that holds the point; borders belong to the pixel right of and below them", () => {
    const at = (lon: number, lat: number) => {
      const { columns, rows } = footprintOf(point(lon, lat), { by: "nearest" }, grid, WGS84);
      return [columns[0], rows[0]];
    };
    expect(at(10.1, 49.9)).toEqual([0, 0]);
    expect(at(10.5, 49.5)).toEqual([1, 1]);
    expect(at(12, 48)).toEqual([3, 3]);
    expect(at(12.001, 48.1)).toEqual([undefined, undefined]);
  });

  test("outside: no pixel, all of it outside", () => {
    expect(footprintOf(point(0, 0), { by: "nearest" }, grid, WGS84)).toMatchObject({ outside: 1, total: 1 });
  });

  test("a layer from 0 to 360 is met at −90 as at 270", () => {
    const globe = northUp(0, 90, 10, 36, 18);
    expect([...footprintOf(point(-90.5, 5), { by: "nearest" }, globe, WGS84).columns]).toEqual([26]);
    expect([...footprintOf(point(269.5, 5), { by: "nearest" }, globe, WGS84).columns]).toEqual([26]);
  });

  test("bilinear reproduces any plane a + b·column + c·row between centres", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 10.25, max: 11.75, noNaN: true }),
        fc.double({ min: 48.25, max: 49.75, noNaN: true }),
        (lon, lat) => {
          const foot = footprintOf(point(lon, lat), { by: "bilinear" }, grid, WGS84);
          const [x, y] = toPixel(grid.affine, lon, lat);
          const plane = (column: number, row: number) => 3 + 2 * column - 5 * row;
          const value = sum(foot.weights.map((w, i) => w * plane(foot.columns[i] + 0.5, foot.rows[i] + 0.5)));
          expect(Math.abs(value / sum(foot.weights) - plane(x, y))).toBeLessThan(1e-12);
        },
      ),
      { seed: 1 },
    );
  });
});

describe("bilinear across the antimeridian", () => {
  const globe = northUp(-180, 90, 10, 36, 18);
  const at = (lon: number) => {
    const { columns, weights, total } = footprintOf(point(lon, 5), { by: "bilinear" }, globe, WGS84);
    return [[...columns], [...weights].map((one) => Number(one.toFixed(9))), total];
  };
  test("a global layer's first column is the neighbour of its last", () => {
    expect(at(179)).toEqual([[35, 0], [0.6, 0.4], 1]);
    expect(at(-179)).toEqual([[35, 0], [0.4, 0.6], 1]);
    expect(at(181)).toEqual(at(-179));
  });

  test("a layer that ends there has an edge there", () => {
    const half = northUp(0, 90, 10, 18, 18);
    const foot = footprintOf(point(179, 5), { by: "bilinear" }, half, WGS84);
    expect([...foot.columns]).toEqual([17]);
  });

  test("a circle across it weighs as one that does not", () => {
    const weigh = (lon: number) =>
      sum(
        footprintOf(point(lon, -17), { by: "radius", metres: 900_000, validArea: 0 }, globe, WGS84).weights,
      );
    expect(Math.abs(weigh(179.5) / weigh(-0.5) - 1)).toBeLessThan(1e-9);
  });
});

describe("areas in longitude and latitude", () => {
  test("weights are coverage times the cosine of the pixel centre's latitude (methods §3)", () => {
    const foot = footprintOf(area([box(10, 49, 11, 50)]), BY_AREA, northUp(10, 50, 0.5, 4, 4), WGS84);
    const cos = (lat: number) => Math.cos((lat * Math.PI) / 180);
    [cos(49.75), cos(49.75), cos(49.25), cos(49.25)].forEach((weight, i) => {
      expect(Math.abs(foot.weights[i] - weight)).toBeLessThan(1e-14);
    });
    expect(foot.pixels).toBeCloseTo(4, 12);
    expect(foot.outside).toBe(0);
  });

  test("the part beyond the layer counts in the whole, on all four sides", () => {
    const grid = northUp(0, 1, 0.25, 8, 8);
    for (const [w, s, e, n] of [
      [-1, -0.5, 1, 0.5],
      [1, -0.5, 3, 0.5],
      [0.5, 0, 1.5, 2],
      [0.5, -2, 1.5, 0],
    ]) {
      const foot = footprintOf(area([box(w, s, e, n)]), BY_AREA, grid, WGS84);
      expect(foot.outside).toBeCloseTo(0.5, 3);
      expect(sum(foot.weights) / foot.total).toBeCloseTo(1 - foot.outside, 12);
    }
    expect(footprintOf(area([box(50, 50, 51, 51)]), BY_AREA, grid, WGS84).outside).toBe(1);
  });

  test("parts and holes: weights of the parts add, those of the hole are taken off", () => {
    const grid = northUp(0, 10, 1, 10, 10);
    const [outer, hole, other] = [box(1.3, 1.2, 5.1, 6.7), box(2.2, 2.4, 3.9, 5.5), box(7.1, 7.2, 9.3, 9.9)];
    const weigh = (...polygons: Polygon[]) =>
      sum(footprintOf(area(...polygons), BY_AREA, grid, WGS84).weights);
    expect(weigh([outer, hole], [other])).toBeCloseTo(weigh([outer]) - weigh([hole]) + weigh([other]), 10);
  });

  test("across the antimeridian: one ring that jumps, two parts cut at 180, and a 0-to-360 layer agree", () => {
    const split = area([box(175, -5, 180, 5)], [box(-180, -5, -170, 5)]);
    const jumping = area([
      [
        [175, -5],
        [-170, -5],
        [-170, 5],
        [175, 5],
        [175, -5],
      ],
    ]);
    const half = northUp(-180, 90, 2.5, 144, 72);
    const full = northUp(0, 90, 2.5, 144, 72);
    const weights = [split, jumping].flatMap((place) =>
      [half, full].map((grid) => {
        const foot = footprintOf(place, BY_AREA, grid, WGS84);
        expect(foot.outside).toBeLessThan(1e-9);
        return sum(foot.weights);
      }),
    );
    for (const one of weights) expect(one).toBeCloseTo(weights[0], 9);
    expect(
      unwrap([
        [175, 0],
        [-170, 0],
        [-175, 5],
        [175, 0],
      ]),
    ).toEqual([
      [175, 0],
      [190, 0],
      [185, 5],
      [175, 0],
    ]);
  });
});

describe("areas in projected systems", () => {
  test("edges are straight in longitude and latitude: a parallel bends in a conic projection", () => {
    const lambert = system("EPSG:3035");
    const grid = northUp(3_900_000, 3_300_000, 10_000, 90, 90);
    const wide = area([box(4, 48, 16, 49)]);
    const dense: Position[] = [];
    const corners = box(4, 48, 16, 49);
    for (let i = 0; i < 4; i++)
      for (let j = 0; j < 2000; j++)
        dense.push([
          corners[i][0] + ((corners[i + 1][0] - corners[i][0]) * j) / 2000,
          corners[i][1] + ((corners[i + 1][1] - corners[i][1]) * j) / 2000,
        ]);
    dense.push(dense[0]);
    const [ours, finest] = [wide, area([dense])].map((place) => footprintOf(place, BY_AREA, grid, lambert));
    expect(Math.abs(sum(ours.weights) / sum(finest.weights) - 1)).toBeLessThan(1e-8);
    expect(ours.columns.length).toBe(finest.columns.length);
  });

  test("cell areas: pixels of a Mercator grid weigh as their ground, so a band's weights follow its true area", () => {
    // Area between parallels on the ellipsoid is the integral of M N cos φ; here against that of 10 to 20 and 50 to 60
    // degrees by Simpson's rule.
    const mercator = system("EPSG:3395");
    const grid = northUp(0, 9_000_000, 20_000, 60, 450);
    const weigh = (south: number, north: number) =>
      sum(footprintOf(area([box(1, south, 9, north)]), BY_AREA, grid, mercator).weights);
    const e2 = 0.00669437999014;
    const ground = (south: number, north: number) => {
      const density = (lat: number) => {
        const phi = (lat * Math.PI) / 180;
        return Math.cos(phi) / (1 - e2 * Math.sin(phi) ** 2) ** 2;
      };
      const n = 200;
      const h = (north - south) / n;
      let total = density(south) + density(north);
      for (let i = 1; i < n; i++) total += (i % 2 === 1 ? 4 : 2) * density(south + i * h);
      return (total * h) / 3;
    };
    // Pixels cut by the edge count as their fraction of the whole pixel's area: some 1e-6 at 20 km.
    expect(Math.abs(weigh(50, 60) / weigh(10, 20) / (ground(50, 60) / ground(10, 20)) - 1)).toBeLessThan(
      1e-5,
    );
  });

  test("a circle of 10 km has the area of a circle of 10 km, in an equal-area system and near a pole", () => {
    for (const [lon, lat] of [
      [10, 50],
      [-20, 85],
      [179.9, -40],
    ] as const) {
      const equal = system(`+proj=laea +lat_0=${lat} +lon_0=${lon} +datum=WGS84 +units=m`);
      const foot = footprintOf(
        point(lon, lat),
        { by: "radius", metres: 10_000, validArea: 0 },
        northUp(-20_000, 20_000, 500, 80, 80),
        equal,
      );
      expect(Math.abs((sum(foot.weights) * 500 * 500) / (Math.PI * 1e8) - 1)).toBeLessThan(2e-6);
    }
  });

  test("an area over the seam of the projection is refused with the spot", () => {
    const sinusoidal = system("+proj=sinu +lon_0=0 +R=6371007.181 +units=m");
    const grid = northUp(-2e7, 1e7, 1e5, 400, 200);
    const place = area([
      [
        [175, 50],
        [-175, 50],
        [-175, 60],
        [175, 60],
        [175, 50],
      ],
    ]);
    expect(errorName(() => footprintOf(place, BY_AREA, grid, sinusoidal))).toBe("layers.area-off-projection");
  });
});

describe("places that are refused", () => {
  const grid = northUp(0, 10, 1, 10, 10);
  const name = (place: Where, use: Parameters<typeof footprintOf>[1]) =>
    errorName(() => footprintOf(place, use, grid, WGS84));
  test.each([
    ["a point by area", point(1, 1), BY_AREA, "layers.place-not-an-area"],
    ["an area by nearest", area([box(1, 1, 2, 2)]), { by: "nearest" }, "layers.place-not-a-point"],
    [
      "an open ring",
      area([
        [
          [1, 1],
          [2, 1],
          [2, 2],
          [1, 2],
        ],
      ]),
      BY_AREA,
      "layers.ring-open",
    ],
    [
      "a ring that crosses itself",
      area([
        [
          [1, 1],
          [3, 3],
          [3, 1],
          [1, 3],
          [1, 1],
        ],
      ]),
      BY_AREA,
      "layers.ring-crosses-itself",
    ],
    [
      "parts that overlap",
      area([box(1, 1, 4, 4)], [box(2, 2, 5, 5)]),
      BY_AREA,
      "layers.area-overlaps-itself",
    ],
    ["a hole outside", area([box(1, 1, 4, 4), box(5, 5, 6, 6)]), BY_AREA, "layers.area-overlaps-itself"],
    ["latitude first", point(20, 95), { by: "nearest" }, "layers.bad-position"],
    ["no radius", point(1, 1), { by: "radius", metres: 0, validArea: 0 }, "layers.bad-radius"],
    [
      "round the pole",
      area([
        [
          [-180, 80],
          [-90, 80],
          [0, 80],
          [90, 80],
          [180, 80],
          [-180, 80],
        ],
      ]),
      BY_AREA,
      "layers.ring-round-pole",
    ],
  ] as const)("%s", (_, place, use, expected) => expect(name(place, use)).toBe(expected));

  test("the crossing's place is told", () => {
    expect(
      findCrossing([
        [1, 1],
        [3, 3],
        [3, 1],
        [1, 3],
        [1, 1],
      ]),
    ).toEqual([2, 2]);
    expect(findCrossing(box(1, 1, 4, 4))).toBeUndefined();
  });

  test("too many pixels", () => {
    const fine = northUp(0, 10, 0.0001, 100_000, 100_000);
    expect(errorName(() => footprintOf(area([box(0, 0, 10, 10)]), BY_AREA, fine, WGS84))).toBe(
      "layers.area-too-fine",
    );
  });
});
