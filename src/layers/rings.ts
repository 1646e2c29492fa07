import type { Polygon, Position, Ring } from "../data/place.ts";
import { InputError } from "../errors.ts";

/**
 * A ring as a run of longitudes without jumps: where an edge would go more than half round the globe, the shorter way
 * across the antimeridian is meant, and the longitudes run on past ±180.
 */
export function unwrap(ring: Ring): Position[] {
  const out: Position[] = [];
  let turn = 0;
  for (let i = 0; i < ring.length; i++) {
    if (i > 0) {
      const step = ring[i][0] - ring[i - 1][0];
      if (step > 180) turn -= 360;
      else if (step < -180) turn += 360;
    }
    out.push([ring[i][0] + turn, ring[i][1]]);
  }
  return out;
}

/** Checks rings before any pixel is weighed. Throws `layers.ring-open`, `layers.ring-crosses-itself`, `layers.bad-position`. */
export function checkPolygons(polygons: readonly Polygon[], place: string): void {
  for (const polygon of polygons)
    for (const ring of polygon) {
      for (const [lon, lat] of ring)
        if (!(Math.abs(lon) <= 540 && Math.abs(lat) <= 90))
          throw placeError("bad-position", place, "longitudes and latitudes in degrees", `${lon}, ${lat}`);
      const [first, last] = [ring[0], ring[ring.length - 1]];
      if (ring.length < 4 || first[0] !== last[0] || first[1] !== last[1])
        throw placeError(
          "ring-open",
          place,
          "rings of at least four positions, the last the same as the first (RFC 7946 §3.1.6)",
          ring.length < 4 ? `${ring.length} positions` : `a ring from ${first} to ${last}`,
        );
      const run = unwrap(ring);
      if (Math.abs(run[run.length - 1][0] - run[0][0]) > 1)
        throw placeError(
          "ring-round-pole",
          place,
          "rings that do not go round a pole",
          "a ring that goes round the globe",
        );
      const crossing = findCrossing(run);
      if (crossing !== undefined)
        throw placeError(
          "ring-crosses-itself",
          place,
          "rings that do not cross themselves",
          `a crossing at ${crossing[0]}, ${crossing[1]}`,
        );
    }
}

function placeError(what: string, place: string, expected: string, found: string): InputError {
  return new InputError({
    name: `layers.${what}`,
    expected,
    found,
    where: { cell: `place ${place}` },
    remedy: "mend the area in the program that drew it",
  });
}

/**
 * The first point where two edges properly cross (each has its ends strictly on both sides of the other). Edges are
 * sorted by their least longitude, so only those that overlap in longitude are compared.
 */
export function findCrossing(ring: readonly Position[]): Position | undefined {
  const edges = Array.from({ length: ring.length - 1 }, (_, i) => i)
    .map((i) => ({ p: ring[i], q: ring[i + 1], low: Math.min(ring[i][0], ring[i + 1][0]) }))
    .sort((s, t) => s.low - t.low);
  let open: typeof edges = [];
  for (const edge of edges) {
    open = open.filter(({ p, q }) => Math.max(p[0], q[0]) >= edge.low);
    for (const other of open) {
      const at = crossing(edge.p, edge.q, other.p, other.q);
      if (at !== undefined) return at;
    }
    open.push(edge);
  }
  return undefined;
}

/** Twice the signed area of the triangle a, b, c. */
function side(a: Position, b: Position, c: Position): number {
  return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
}

function crossing(a: Position, b: Position, c: Position, d: Position): Position | undefined {
  const [s1, s2, s3, s4] = [side(a, b, c), side(a, b, d), side(c, d, a), side(c, d, b)];
  if (!(s1 * s2 < 0 && s3 * s4 < 0)) return undefined;
  const t = s3 / (s3 - s4);
  return [a[0] + t * (b[0] - a[0]), a[1] + t * (b[1] - a[1])];
}
