import { describe, expect, test } from "vitest";
import type { Where } from "../../src/data/place.ts";
import { positionRule, shownInputs, shownPlaces, WITHHELD_HASH } from "../../src/pipeline/sensitive.ts";
import type { Spec } from "../../src/spec/spec.ts";

const study = { title: "t", sensitive: true, coarsenKm: 10 };
const point: Where = { type: "point", name: "roost", position: [6.58123, 55.37891] };
const area: Where = {
  type: "area",
  name: "range",
  polygons: [
    [
      [
        [6.6, 55.35],
        [6.9, 55.36],
        [6.8, 55.44],
        [6.6, 55.35],
      ],
    ],
  ],
};

describe("places of a sensitive study", () => {
  test("a point goes to the centre of its cell: neighbours within the cell become one, the true place is not shown", () => {
    const [shown] = shownPlaces([point], study);
    const [near] = shownPlaces([{ ...point, position: [6.58124, 55.37892] }], study);
    expect(shown).toEqual(near);
    expect(shown).not.toEqual(point);
    // within half a cell's diagonal, about 7 km
    const [longitude, latitude] = positionRule(study)(point.position);
    expect(Math.abs(latitude - 55.37891)).toBeLessThan(0.07);
    expect(Math.abs(longitude - 6.58123)).toBeLessThan(0.12);
  });

  test("an area becomes a box of coarsened corners, without its outline", () => {
    const [shown] = shownPlaces([area], study);
    if (shown.type !== "area") throw new Error("an area stays an area");
    expect(shown.polygons[0]).toHaveLength(1);
    expect(shown.polygons[0][0]).toHaveLength(5);
    for (const corner of area.polygons[0][0]) expect(shown.polygons[0][0]).not.toContainEqual(corner);
  });

  test("places of a study that is not sensitive are shown as they are", () => {
    expect(shownPlaces([point, area], { ...study, sensitive: false })).toEqual([point, area]);
  });

  test("size and hash of a file of places are not recorded, those of other files are", () => {
    const inputs = ["places.geojson", "captures.csv"].map((path) => ({ path, bytes: 120, sha256: "abc" }));
    const spec = { study, places: { roost: { file: "places.geojson", where: {} } } } as unknown as Spec;
    const [places, captures] = shownInputs(inputs, spec);
    expect(places).toEqual({ path: "places.geojson", bytes: 0, sha256: WITHHELD_HASH });
    expect(captures).toEqual(inputs[1]);
    const open = { ...spec, study: { ...study, sensitive: false } } as unknown as Spec;
    expect(shownInputs(inputs, open)).toEqual(inputs);
  });
});
