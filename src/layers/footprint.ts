import type { Position, Where } from "../data/place.ts";
import { InputError } from "../errors.ts";
import { areaFootprint, type Footprint } from "./area.ts";
import { circleAround } from "./circle.ts";
import { type Grid, toPixel } from "./grid.ts";
import type { PlaceUse } from "./options.ts";
import { checkPolygons } from "./rings.ts";
import { type System, turnsOf } from "./system.ts";

/**
 * Which pixels a place takes and with which weights. Points: the pixel that holds it, or the four nearest centres by
 * bilinear weights. Areas and circles: exact coverage times cell area. Throws `layers.place-not-a-point`,
 * `layers.place-not-an-area`, `layers.area-too-fine` and those of rings and projections.
 */
export function footprintOf(place: Where, use: PlaceUse, grid: Grid, system: System): Footprint {
  if (use.by === "area") {
    if (place.type !== "area") throw wrongKind("area", place.name, "an area", "a point");
    checkPolygons(place.polygons, place.name);
    return areaFootprint(place.polygons, grid, system, place.name);
  }
  if (place.type !== "point") throw wrongKind("point", place.name, "a point", "an area");
  const [lon, lat] = place.position;
  if (!(Math.abs(lon) <= 540 && Math.abs(lat) <= 90))
    throw new InputError({
      name: "layers.bad-position",
      expected: "longitude and latitude in degrees",
      found: `${lon}, ${lat}`,
      where: { cell: `place ${place.name}` },
      remedy: "write longitude first, then latitude, in degrees of WGS 84",
    });
  if (use.by === "radius")
    return areaFootprint([[circleAround(place.position, use.metres, place.name)]], grid, system, place.name);
  return pointFootprint(place.position, use.by, grid, system);
}

function wrongKind(what: string, name: string, expected: string, found: string): InputError {
  return new InputError({
    name: what === "area" ? "layers.place-not-an-area" : "layers.place-not-a-point",
    expected,
    found,
    where: { cell: `place ${name}` },
    remedy: "read points by nearest, bilinear or radius, and areas by area",
  });
}

function pointFootprint(at: Position, by: "nearest" | "bilinear", grid: Grid, system: System): Footprint {
  for (const turn of turnsOf(system)) {
    const [x, y] = toPixel(grid.affine, ...system.fromLonLat(at[0] + turn, at[1]));
    // A point on the outer edge belongs to the last pixel; rounding may put it a hair outside.
    const hair = 1e-9;
    if (!(x >= -hair && y >= -hair && x <= grid.width + hair && y <= grid.height + hair)) continue;
    if (by === "nearest") {
      const column = Math.min(grid.width - 1, Math.max(0, Math.floor(x)));
      const row = Math.min(grid.height - 1, Math.max(0, Math.floor(y)));
      return {
        columns: Int32Array.of(column),
        rows: Int32Array.of(row),
        weights: Float64Array.of(1),
        total: 1,
        outside: 0,
        pixels: 1,
      };
    }
    return bilinear(x, y, grid, system);
  }
  return {
    columns: new Int32Array(0),
    rows: new Int32Array(0),
    weights: new Float64Array(0),
    total: 1,
    outside: 1,
    pixels: 1,
  };
}

/**
 * The four centres round (x, y), (1 − u)(1 − v) and so on; those beyond the layer's edge are left out. A layer that goes
 * round the globe has no edge in the east and west: its first column is the neighbour of its last.
 */
function bilinear(x: number, y: number, grid: Grid, system: System): Footprint {
  const { a, b, d } = grid.affine;
  const round = system.geographic && b === 0 && d === 0 && Math.abs(Math.abs(a * grid.width) - 360) < 1e-6;
  const columnOf = (column: number) => (round ? (column + grid.width) % grid.width : column);
  const [left, top] = [Math.floor(x - 0.5), Math.floor(y - 0.5)];
  const [u, v] = [x - 0.5 - left, y - 0.5 - top];
  const all = [
    { column: columnOf(left), row: top, weight: (1 - u) * (1 - v) },
    { column: columnOf(left + 1), row: top, weight: u * (1 - v) },
    { column: columnOf(left), row: top + 1, weight: (1 - u) * v },
    { column: columnOf(left + 1), row: top + 1, weight: u * v },
  ].filter(
    ({ column, row, weight }) =>
      weight > 0 && column >= 0 && row >= 0 && column < grid.width && row < grid.height,
  );
  const total = all.reduce((sum, one) => sum + one.weight, 0);
  return {
    columns: Int32Array.from(all, (one) => one.column),
    rows: Int32Array.from(all, (one) => one.row),
    weights: Float64Array.from(all, (one) => one.weight),
    total,
    outside: 0,
    pixels: 1,
  };
}
