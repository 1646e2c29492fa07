import { type Grid, toSystem } from "../layers/grid.ts";
import type { System } from "../layers/system.ts";

const RADIANS = Math.PI / 180;

/**
 * Width and height of the middle pixel on the ground in metres, by the radii of curvature of WGS 84 at its latitude:
 * M = a (1 − e²) / w³ along the meridian and N cos φ = a cos φ / w along the parallel, w = √(1 − e² sin² φ).
 */
export function groundSize(grid: Grid, system: System): readonly [number, number] {
  const [column, row] = [Math.floor(grid.width / 2), Math.floor(grid.height / 2)];
  const at = (c: number, r: number) => system.toLonLat(...toSystem(grid.affine, c, r));
  const [corner, east, south] = [at(column, row), at(column + 1, row), at(column, row + 1)];
  const sine = Math.sin(corner[1] * RADIANS);
  const e2 = 0.0066943799901413;
  const w = Math.sqrt(1 - e2 * sine * sine);
  const perLat = ((6378137 * (1 - e2)) / w ** 3) * RADIANS;
  const perLon = ((6378137 * Math.cos(corner[1] * RADIANS)) / w) * RADIANS;
  // the middle of a grid from 0 to 360 degrees lies at 180, where longitudes begin anew
  const turn = (degrees: number) => degrees - 360 * Math.round(degrees / 360);
  const length = (to: readonly [number, number]) =>
    Math.hypot(turn(to[0] - corner[0]) * perLon, (to[1] - corner[1]) * perLat);
  return [length(east), length(south)];
}
