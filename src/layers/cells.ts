import { type Grid, toSystem } from "./grid.ts";
import type { System } from "./system.ts";

const RADIANS = Math.PI / 180;
/** First eccentricity squared of WGS 84. */
const E2 = 0.0066943799901413;
/** Spacing of the lattice on which areas of projected pixels are worked out: at most so many metres and pixels. */
const METRES = 4000;
const PIXELS = 64;

/** The area of a pixel relative to others of the same grid. */
export type CellArea = (column: number, row: number) => number;

/**
 * True cell areas, up to a common factor (methods §3). Geographic grids: the cosine of the latitude of the pixel's
 * centre. Equal-area projections: 1. Others: the area on the ellipsoid M N cos φ |∂(λ, φ)/∂(column, row)|, where
 * M N = 1 / (1 − e² sin² φ)² up to a factor, by central differences on a lattice of some 4 km and linearly between
 * (over 4 km the factor bends by less than one part in a million).
 */
export function cellAreas(grid: Grid, system: System): CellArea {
  if (system.geographic)
    return (column, row) =>
      Math.max(0, Math.cos(toSystem(grid.affine, column + 0.5, row + 0.5)[1] * RADIANS));
  if (system.equalArea) return () => 1;
  const known = new Map<number, number>();
  const { a, b, d, e } = grid.affine;
  const metres = Math.sqrt(Math.abs(a * e - b * d)) * system.metresPerUnit;
  const step = Math.min(PIXELS, Math.max(1, Math.floor(METRES / metres)));
  const across = Math.ceil(grid.width / step) + 2;
  const lattice = (i: number, j: number) => {
    const key = j * across + i;
    const held = known.get(key);
    if (held !== undefined) return held;
    const value = areaAt(grid, system, i * step, j * step, step / 2);
    known.set(key, value);
    return value;
  };
  return (column, row) => {
    const [x, y] = [(column + 0.5) / step, (row + 0.5) / step];
    const [i, j] = [Math.floor(x), Math.floor(y)];
    const [u, v] = [x - i, y - j];
    return (
      (1 - v) * ((1 - u) * lattice(i, j) + u * lattice(i + 1, j)) +
      v * ((1 - u) * lattice(i, j + 1) + u * lattice(i + 1, j + 1))
    );
  };
}

function areaAt(grid: Grid, system: System, column: number, row: number, half: number): number {
  const at = (c: number, r: number) => system.toLonLat(...toSystem(grid.affine, c, r));
  const [west, east] = [at(column - half, row), at(column + half, row)];
  const [north, south] = [at(column, row - half), at(column, row + half)];
  const latitude = at(column, row)[1] * RADIANS;
  const turn = (degrees: number) => degrees - 360 * Math.round(degrees / 360);
  const det =
    turn(east[0] - west[0]) * (south[1] - north[1]) - turn(south[0] - north[0]) * (east[1] - west[1]);
  const area = (Math.abs(det) * Math.cos(latitude)) / (1 - E2 * Math.sin(latitude) ** 2) ** 2;
  // Beyond the projection's domain there is no ground.
  return Number.isFinite(area) ? area : 0;
}
