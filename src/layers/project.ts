import type { Position } from "../data/place.ts";
import { InputError } from "../errors.ts";
import { type Grid, type Pair, toPixel } from "./grid.ts";
import type { System } from "./system.ts";

/** How far, in pixels, a projected edge may lie from the straight pieces that stand for it. */
const TOLERANCE = 1e-6;
const DEEPEST = 24;
/** Longest piece of an edge, in degrees, that is trusted to be bent to one side only. */
const LONGEST = 0.5;

/**
 * A ring in pixel coordinates, x and y in turn. Edges are straight in longitude and latitude; where the system bends
 * them they are halved until the middle lies within 1e-6 pixels of its chord. Throws `layers.area-off-projection`
 * where an edge runs over the projection's own seam or out of its domain.
 */
export function projectRing(
  ring: readonly Position[],
  grid: Grid,
  system: System,
  place: string,
): Float64Array {
  const at = ([lon, lat]: Position): Pair => {
    const [x, y] = system.fromLonLat(lon, lat);
    return toPixel(grid.affine, x, y);
  };
  const out: number[] = [];
  if (system.plain) {
    for (const position of ring) out.push(...at(position));
    return Float64Array.from(out);
  }
  const refuse = (position: Position) =>
    new InputError({
      name: "layers.area-off-projection",
      expected: `an area within the domain of ${system.label}`,
      found: `an edge that leaves it near ${position[0].toFixed(4)}, ${position[1].toFixed(4)}`,
      where: { cell: `place ${place}` },
      remedy:
        "cut the area into parts that end 0.000001 degrees before the projection's edge, or use a layer in another system",
    });
  const split = (p: Position, q: Position, from: Pair, to: Pair, depth: number): void => {
    const middle: Position = [(p[0] + q[0]) / 2, (p[1] + q[1]) / 2];
    const centre = at(middle);
    const off = Math.hypot(centre[0] - (from[0] + to[0]) / 2, centre[1] - (from[1] + to[1]) / 2);
    if (!Number.isFinite(off)) throw refuse(middle);
    if (off <= TOLERANCE && Math.hypot(q[0] - p[0], q[1] - p[1]) <= LONGEST) {
      out.push(...to);
      return;
    }
    if (depth === DEEPEST) {
      // Rounding of coordinates far from their origin may keep a tiny edge from closing; a seam never closes.
      if (off > 0.01) throw refuse(middle);
      out.push(...to);
      return;
    }
    split(p, middle, from, centre, depth + 1);
    split(middle, q, centre, to, depth + 1);
  };
  let from = at(ring[0]);
  if (!Number.isFinite(from[0] + from[1])) throw refuse(ring[0]);
  out.push(...from);
  for (let i = 1; i < ring.length; i++) {
    const to = at(ring[i]);
    if (!Number.isFinite(to[0] + to[1])) throw refuse(ring[i]);
    split(ring[i - 1], ring[i], from, to, 0);
    from = to;
  }
  return Float64Array.from(out);
}
