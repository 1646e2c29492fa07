import type { Polygon, Position, Ring } from "../data/place.ts";
import { InputError, type Place } from "../errors.ts";
import { crossing } from "./crossing.ts";

const within = (place: Place, i: number): Place => ({ ...place, cell: `${place.cell}[${i}]` });

/**
 * A position: longitude, latitude in degrees; an altitude is dropped.
 * Throws `study.position`, `study.coordinates-swapped`, `study.coordinates-range`.
 */
export function checkPosition(value: unknown, where: Place): Position {
  if (!Array.isArray(value) || value.length < 2 || !value.every((one) => Number.isFinite(one)))
    throw new InputError({
      name: "study.position",
      expected: "a position: [longitude, latitude]",
      found: (JSON.stringify(value) ?? "nothing").slice(0, 80),
      where,
      remedy: "write two numbers in degrees",
    });
  const [longitude, latitude]: readonly number[] = value;
  if (Math.abs(longitude) <= 180 && Math.abs(latitude) <= 90) return [longitude, latitude];
  // Only a latitude beyond 90° shows a swap; [49, 8] for [8, 49] is a place too.
  const swapped = Math.abs(latitude) <= 180 && Math.abs(longitude) <= 90;
  throw new InputError({
    name: swapped ? "study.coordinates-swapped" : "study.coordinates-range",
    expected: "longitude between −180 and 180, then latitude between −90 and 90",
    found: `[${longitude}, ${latitude}]`,
    where,
    remedy: swapped
      ? "write longitude first, then latitude"
      : "give WGS 84 degrees; large numbers are usually metres of a projected system",
  });
}

/**
 * An outline and its holes. Throws `study.polygon`, `study.ring-short`, `study.ring-open`, `study.ring-flat`,
 * `study.ring-crosses`, `study.antimeridian`, `study.hole-crosses`, `study.hole-outside`.
 */
export function readPolygon(value: unknown, where: Place): Polygon {
  if (!Array.isArray(value) || value.length === 0)
    throw new InputError({
      name: "study.polygon",
      expected: "a polygon: a list of rings, the outline first",
      found: (JSON.stringify(value) ?? "nothing").slice(0, 80),
      where,
      remedy: "draw the area again",
    });
  const rings = value.map((one: unknown, i) => readRing(one, within(where, i)));
  rings.forEach((one, i) => {
    for (let j = 0; j < i; j++) checkApart(rings[j], one, j === 0, within(where, i));
  });
  return rings;
}

function readRing(value: unknown, where: Place): Ring {
  const ring = (Array.isArray(value) ? value : []).map((one: unknown, i) =>
    checkPosition(one, within(where, i)),
  );
  const fail = (name: string, expected: string, found: string, remedy: string): InputError =>
    new InputError({ name, expected, found, where, remedy });
  if (ring.length < 4)
    throw fail(
      "study.ring-short",
      "a ring of at least 4 positions, the last like the first (RFC 7946, section 3.1.6)",
      `${ring.length} positions`,
      "draw the area again, with at least three corners",
    );
  const [first, last] = [ring[0], ring[ring.length - 1]];
  if (first[0] !== last[0] || first[1] !== last[1])
    throw fail(
      "study.ring-open",
      `a closed ring that ends where it begins, at [${first.join(", ")}]`,
      `its last position at [${last.join(", ")}]`,
      "repeat the first position at the end",
    );
  for (let i = 1; i < ring.length; i++)
    if (Math.abs(ring[i][0] - ring[i - 1][0]) > 180)
      throw fail(
        "study.antimeridian",
        "an area cut at the antimeridian (RFC 7946, section 3.1.9)",
        `an edge from [${ring[i - 1].join(", ")}] to [${ring[i].join(", ")}]`,
        "split the area at longitude 180 into a multipolygon",
      );
  const met = crossing(ring, ring);
  if (met !== undefined)
    throw fail(
      "study.ring-crosses",
      "a ring that does not cross or touch itself",
      `a crossing at [${met.join(", ")}]`,
      "mend the corners near that place, or split the area into a multipolygon",
    );
  if (twiceArea(ring) === 0)
    throw fail("study.ring-flat", "a ring that encloses an area", "an area of 0", "draw the area again");
  return ring;
}

/** Rings of one polygon must not cross, and holes lie in the outline. */
function checkApart(before: Ring, hole: Ring, outline: boolean, where: Place): void {
  const met = crossing(before, hole, true);
  if (met !== undefined)
    throw new InputError({
      name: "study.hole-crosses",
      expected: outline ? "a hole inside the outline" : "holes apart from one another",
      found: `a crossing at [${met.join(", ")}]`,
      where,
      remedy: "mend the corners near that place",
    });
  const away = outline ? hole.find((position) => side(before, position) < 0) : undefined;
  if (away !== undefined)
    throw new InputError({
      name: "study.hole-outside",
      expected: "a hole inside the outline",
      found: `a corner outside it, at [${away.join(", ")}]`,
      where,
      remedy: "the first ring is the outline, all others are holes; an area apart needs a multipolygon",
    });
}

/** Twice the signed area, relative to the first corner so that small areas keep their digits. */
function twiceArea(ring: Ring): number {
  const [x0, y0] = ring[0];
  let sum = 0;
  for (let i = 1; i < ring.length; i++)
    sum += (ring[i - 1][0] - x0) * (ring[i][1] - y0) - (ring[i][0] - x0) * (ring[i - 1][1] - y0);
  return sum;
}

/** 1 inside, −1 outside, 0 on the ring (even–odd rule). */
function side(ring: Ring, [x, y]: Position): number {
  let inside = -1;
  for (let i = 1; i < ring.length; i++) {
    const [[ax, ay], [bx, by]] = [ring[i - 1], ring[i]];
    const turn = (bx - ax) * (y - ay) - (by - ay) * (x - ax);
    const between =
      Math.min(ax, bx) <= x && x <= Math.max(ax, bx) && Math.min(ay, by) <= y && y <= Math.max(ay, by);
    if (turn === 0 && between) return 0;
    if (ay > y !== by > y && x < ax + ((bx - ax) * (y - ay)) / (by - ay)) inside = -inside;
  }
  return inside;
}
