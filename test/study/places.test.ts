import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Position } from "../../src/data/place.ts";
import { readPlaces } from "../../src/study/places.ts";
import { errorOf, inMemory } from "./support.ts";

const read = (content: unknown, where: Readonly<Record<string, string>> = {}) =>
  readPlaces(
    { here: { file: "p.geojson", where } },
    inMemory({ "p.geojson": typeof content === "string" ? content : JSON.stringify(content) }),
  );
const polygon = (...rings: unknown[]) => ({ type: "Polygon", coordinates: rings });
const feature = (properties: unknown, geometry: unknown) => ({ type: "Feature", properties, geometry });
const SQUARE = [
  [100, 0],
  [101, 0],
  [101, 1],
  [100, 1],
  [100, 0],
];
const HOLE = [
  [100.8, 0.8],
  [100.8, 0.2],
  [100.2, 0.2],
  [100.2, 0.8],
  [100.8, 0.8],
];

describe("the worked examples of RFC 7946", () => {
  // Section 1.5.
  const collection = {
    type: "FeatureCollection",
    features: [
      feature({ prop0: "value0" }, { type: "Point", coordinates: [102.0, 0.5] }),
      feature(
        { prop0: "value0", prop1: 0.0 },
        {
          type: "LineString",
          coordinates: [
            [102.0, 0.0],
            [103.0, 1.0],
            [104.0, 0.0],
            [105.0, 1.0],
          ],
        },
      ),
      feature({ prop0: "value0", prop1: { this: "that" } }, polygon(SQUARE)),
    ],
  };

  test("section 1.5: a collection; several match, a line string is no place, one number is no text", async () => {
    expect(await errorOf(read(collection, { prop0: "value0" }))).toEqual({
      name: "study.several-features",
      message:
        'p.geojson (places.here.where): expected one feature with prop0 = "value0", found 3 of them (features[0].geometry, features[1].geometry, features[2].geometry); add a property that tells them apart, or join them into one multipolygon',
    });
    expect(await errorOf(read(collection, { prop1: "0" }))).toEqual({
      name: "study.geometry-type",
      message:
        'p.geojson (features[1].geometry): expected a Point, a Polygon or a MultiPolygon with coordinates, found "LineString"; draw the place as a point or an area',
    });
    const two = { ...collection, features: [collection.features[0], collection.features[1]] };
    const point = { ...two, features: [two.features[0]] };
    expect((await read(point)).places.get("here")).toEqual({
      type: "point",
      name: "here",
      position: [102, 0.5],
    });
  });

  test("appendix A.3: polygons without and with a hole; appendix A.6: a multipolygon", async () => {
    expect((await read(polygon(SQUARE))).places.get("here")).toEqual({
      type: "area",
      name: "here",
      polygons: [[SQUARE]],
    });
    expect((await read(polygon(SQUARE, HOLE))).places.get("here")).toMatchObject({
      polygons: [[SQUARE, HOLE]],
    });
    const away = SQUARE.map(([x, y]) => [x + 2, y + 2]);
    const multi = { type: "MultiPolygon", coordinates: [[away], [SQUARE, [...HOLE].reverse()]] };
    expect((await read(feature({}, multi))).places.get("here")).toMatchObject({
      polygons: [[away], [SQUARE, [...HOLE].reverse()]],
    });
  });
});

describe("places", () => {
  test("by several properties, an altitude dropped, and a point written out", async () => {
    const content = JSON.stringify({
      type: "FeatureCollection",
      crs: { type: "name", properties: { name: "urn:ogc:def:crs:OGC:1.3:CRS84" } },
      features: [
        feature({ name: "roost", part: 1 }, { type: "Point", coordinates: [8, 49, 210] }),
        feature({ name: "roost", part: 2 }, { type: "Point", coordinates: [9, 49] }),
      ],
    });
    const { places, findings } = await readPlaces(
      {
        first: { file: "p.geojson", where: { name: "roost", part: "1" } },
        second: { file: "p.geojson", where: { name: "roost", part: "2" } },
        third: { longitude: -8.25, latitude: 49.5 },
      },
      inMemory({ "p.geojson": content }),
    );
    expect([...places.values()].map((one) => one.type === "point" && one.position)).toEqual([
      [8, 49],
      [9, 49],
      [-8.25, 49.5],
    ]);
    expect(findings).toEqual([]);
  });

  test("a hole may touch its outline at a corner", async () => {
    const touching = [
      [100, 0],
      [100.5, 0.2],
      [100.5, 0.8],
      [100, 0],
    ];
    expect((await read(polygon(SQUARE, touching))).places.size).toBe(1);
  });

  test("random stars around a centre are simple; a convex ring with two corners exchanged is not, and the crossing lies on two edges", async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.double({ min: 0.2, max: 1, noNaN: true }), { minLength: 5, maxLength: 60 }),
        fc.nat(),
        async (radii, pick) => {
          const around = (radius: (i: number) => number) =>
            radii.map((_, i): Position => {
              const angle = (2 * Math.PI * i) / radii.length;
              return [10 + radius(i) * Math.cos(angle), 50 + radius(i) * Math.sin(angle)];
            });
          const star = around((i) => radii[i]);
          expect((await read(polygon([...star, star[0]]))).places.size).toBe(1);
          const mixed = around(() => 1);
          const i = pick % mixed.length;
          const j = (i + 1) % mixed.length;
          [mixed[i], mixed[j]] = [mixed[j], mixed[i]];
          const { name, message } = await errorOf(read(polygon([...mixed, mixed[0]])));
          expect(name).toBe("study.ring-crosses");
          const [x, y] = (/crossing at \[(.*), (.*)\]/.exec(message) ?? []).slice(1).map(Number);
          const away = mixed
            .map((a, k) => distance([x, y], a, mixed[(k + 1) % mixed.length]))
            .sort((a, b) => a - b);
          // On two edges at once; seven decimals are printed.
          expect(away[1]).toBeLessThan(1e-6);
        },
      ),
      { numRuns: 40 },
    );
  });
});

/** Distance of p from the segment a–b. */
function distance(p: readonly number[], a: Position, b: Position): number {
  const [dx, dy] = [b[0] - a[0], b[1] - a[1]];
  const share = Math.max(0, Math.min(1, ((p[0] - a[0]) * dx + (p[1] - a[1]) * dy) / (dx * dx + dy * dy)));
  return Math.hypot(p[0] - a[0] - share * dx, p[1] - a[1] - share * dy);
}

describe("places that are refused", () => {
  const bowtie = [
    [0, 0],
    [2, 2],
    [2, 0],
    [0, 2],
    [0, 0],
  ];
  const named = (name: string) => feature({ name }, { type: "Point", coordinates: [8, 49] });
  const outline = "geometry.coordinates[0]";
  const cases: readonly (readonly [string, unknown, string])[] = [
    [
      "study.geojson-syntax",
      '{\n  "type": "Feature",\n  type\n}',
      "p.geojson:3:3: expected GeoJSON, found text that is not JSON; save the places as GeoJSON (RFC 7946) again",
    ],
    [
      "study.geojson-syntax",
      "",
      "p.geojson:1:1: expected GeoJSON, found an empty file; save the places as GeoJSON (RFC 7946) again",
    ],
    [
      "study.geojson-type",
      [1],
      "p.geojson: expected a FeatureCollection of Features, a Feature or a geometry, found [1]; save the places as GeoJSON (RFC 7946) again",
    ],
    [
      "study.geojson-type",
      { type: "Topology" },
      'p.geojson (type): expected a FeatureCollection of Features, a Feature or a geometry, found "Topology"; save the places as GeoJSON (RFC 7946) again',
    ],
    [
      "study.geojson-type",
      { type: "FeatureCollection" },
      "p.geojson (features): expected a FeatureCollection of Features, a Feature or a geometry, found nothing of the kind; save the places as GeoJSON (RFC 7946) again",
    ],
    [
      "study.geojson-system",
      { type: "Point", coordinates: [1, 2], crs: { type: "name", properties: { name: "EPSG:32632" } } },
      'p.geojson (crs): expected WGS 84 longitude and latitude, the only system of GeoJSON (RFC 7946, section 4), found "EPSG:32632"; save the places in WGS 84 (EPSG:4326)',
    ],
    [
      "study.geometry-missing",
      feature({}, null),
      "p.geojson (geometry): expected a geometry for each feature, found null; draw the place, or take the feature out",
    ],
    [
      "study.geometry-type",
      { type: "MultiPolygon", coordinates: [] },
      "p.geojson (geometry): expected a Point, a Polygon or a MultiPolygon with coordinates, found a MultiPolygon without polygons; draw the place as a point or an area",
    ],
    [
      "study.position",
      { type: "Point", coordinates: ["8", 49] },
      'p.geojson (geometry.coordinates): expected a position: [longitude, latitude], found ["8",49]; write two numbers in degrees',
    ],
    [
      "study.coordinates-range",
      { type: "Point", coordinates: [350700, 6141300] },
      "p.geojson (geometry.coordinates): expected longitude between −180 and 180, then latitude between −90 and 90, found [350700, 6141300]; give WGS 84 degrees; large numbers are usually metres of a projected system",
    ],
    [
      "study.coordinates-swapped",
      { type: "Point", coordinates: [-27.5, 153] },
      "p.geojson (geometry.coordinates): expected longitude between −180 and 180, then latitude between −90 and 90, found [-27.5, 153]; write longitude first, then latitude",
    ],
    [
      "study.polygon",
      polygon(),
      "p.geojson (geometry.coordinates): expected a polygon: a list of rings, the outline first, found []; draw the area again",
    ],
    [
      "study.ring-short",
      polygon(SQUARE.slice(0, 3)),
      `p.geojson (${outline}): expected a ring of at least 4 positions, the last like the first (RFC 7946, section 3.1.6), found 3 positions; draw the area again, with at least three corners`,
    ],
    [
      "study.ring-open",
      polygon(SQUARE.slice(0, 4)),
      `p.geojson (${outline}): expected a closed ring that ends where it begins, at [100, 0], found its last position at [100, 1]; repeat the first position at the end`,
    ],
    [
      "study.ring-flat",
      polygon([
        [1, 1],
        [1, 1],
        [1, 1],
        [1, 1],
      ]),
      `p.geojson (${outline}): expected a ring that encloses an area, found an area of 0; draw the area again`,
    ],
    [
      "study.ring-crosses",
      polygon(bowtie),
      `p.geojson (${outline}): expected a ring that does not cross or touch itself, found a crossing at [1, 1]; mend the corners near that place, or split the area into a multipolygon`,
    ],
    [
      "study.ring-crosses",
      polygon([
        [0, 0],
        [3, 0],
        [1, 0],
        [1, 2],
        [0, 0],
      ]),
      `p.geojson (${outline}): expected a ring that does not cross or touch itself, found a crossing at [3, 0]; mend the corners near that place, or split the area into a multipolygon`,
    ],
    [
      "study.ring-crosses",
      polygon([
        [0, 0],
        [2, 0],
        [1, 1],
        [2, 2],
        [0, 2],
        [1, 1],
        [0, 0],
      ]),
      `p.geojson (${outline}): expected a ring that does not cross or touch itself, found a crossing at [1, 1]; mend the corners near that place, or split the area into a multipolygon`,
    ],
    [
      "study.antimeridian",
      polygon([
        [179, 0],
        [-179, 0],
        [-179, 1],
        [179, 0],
      ]),
      `p.geojson (${outline}): expected an area cut at the antimeridian (RFC 7946, section 3.1.9), found an edge from [179, 0] to [-179, 0]; split the area at longitude 180 into a multipolygon`,
    ],
    [
      "study.hole-crosses",
      polygon(
        SQUARE,
        HOLE.map(([x, y]) => [x + 0.5, y]),
      ),
      "p.geojson (geometry.coordinates[1]): expected a hole inside the outline, found a crossing at [101, 0.2]; mend the corners near that place",
    ],
    [
      "study.hole-crosses",
      polygon(
        SQUARE,
        HOLE,
        HOLE.map(([x, y]) => [x + 0.1, y + 0.1]),
      ),
      "p.geojson (geometry.coordinates[2]): expected holes apart from one another, found a crossing at [100.3, 0.8]; mend the corners near that place",
    ],
    [
      "study.hole-outside",
      polygon(
        SQUARE,
        HOLE.map(([x, y]) => [x + 5, y]),
      ),
      "p.geojson (geometry.coordinates[1]): expected a hole inside the outline, found a corner outside it, at [105.8, 0.8]; the first ring is the outline, all others are holes; an area apart needs a multipolygon",
    ],
  ];
  test.each(cases)("%s: %j", async (name, content, message) => {
    expect(await errorOf(read(content))).toEqual({ name, message });
  });

  test("no feature matches; inherited properties are none", async () => {
    const content = { type: "FeatureCollection", features: [named("roost"), named("range")] };
    expect(await errorOf(read(content, { name: "rost" }))).toEqual({
      name: "study.no-feature",
      message:
        'p.geojson (places.here.where): expected one feature with name = "rost", found 2 features: "roost", "range"; name a value that is there',
    });
    expect((await errorOf(read(content, { toString: String(Object.prototype.toString) }))).name).toBe(
      "study.no-feature",
    );
  });

  test("a point written out beyond the globe", async () => {
    expect((await errorOf(readPlaces({ x: { longitude: 8, latitude: 91 } }, inMemory({})))).message).toBe(
      "places.x: expected longitude between −180 and 180, then latitude between −90 and 90, found [8, 91]; write longitude first, then latitude",
    );
  });
});
