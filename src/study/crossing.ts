import type { Position, Ring } from "../data/place.ts";

interface Edge {
  readonly from: Position;
  readonly to: Position;
  /** Place in the ring, edges of no length left out. */
  readonly at: number;
  readonly left: number;
  readonly right: number;
  readonly low: number;
  readonly high: number;
}

/**
 * Where two rings meet, or a ring meets itself other than at the shared corners of neighbouring edges: the position,
 * rounded to seven decimals of a degree (about a centimetre); undefined if nowhere. With `properOnly` edges must pass
 * through each other: a shared corner or a touch is let be. Edges are sorted by their western end, so that only those
 * whose longitudes overlap are compared.
 */
export function crossing(a: Ring, b: Ring, properOnly = false): Position | undefined {
  const own = a === b;
  const first = edgesOf(a);
  const second = own ? first : edgesOf(b);
  const all = [
    ...first.map((edge) => ({ edge, of: 0 })),
    ...(own ? [] : second.map((edge) => ({ edge, of: 1 }))),
  ].sort((p, q) => p.edge.left - q.edge.left);
  for (let i = 0; i < all.length; i++)
    for (let j = i + 1; j < all.length && all[j].edge.left <= all[i].edge.right; j++) {
      if (!own && all[i].of === all[j].of) continue;
      const [p, q] = [all[i].edge, all[j].edge];
      if (p.low > q.high || q.low > p.high) continue;
      const met = properOnly ? properMeeting(p, q) : meeting(p, q, own ? neighbours(p, q, first.length) : "");
      if (met !== undefined) return [rounded(met[0]), rounded(met[1])];
    }
  return undefined;
}

const rounded = (degrees: number) => Math.round(degrees * 1e7) / 1e7;

function edgesOf(ring: Ring): readonly Edge[] {
  const edges: Edge[] = [];
  for (let i = 1; i < ring.length; i++) {
    const [from, to] = [ring[i - 1], ring[i]];
    if (from[0] === to[0] && from[1] === to[1]) continue;
    edges.push({
      from,
      to,
      at: edges.length,
      left: Math.min(from[0], to[0]),
      right: Math.max(from[0], to[0]),
      low: Math.min(from[1], to[1]),
      high: Math.max(from[1], to[1]),
    });
  }
  return edges;
}

/** Whether q follows p in the ring, p follows q, or neither. */
function neighbours(p: Edge, q: Edge, count: number): "pq" | "qp" | "" {
  if ((p.at + 1) % count === q.at) return "pq";
  return (q.at + 1) % count === p.at ? "qp" : "";
}

/** Twice the signed area of a, b, c: positive if c lies left of a → b. */
function turn(a: Position, b: Position, c: Position): number {
  return (b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]);
}

function properMeeting(p: Edge, q: Edge): Position | undefined {
  const [d1, d2] = [turn(p.from, p.to, q.from), turn(p.from, p.to, q.to)];
  const [d3, d4] = [turn(q.from, q.to, p.from), turn(q.from, q.to, p.to)];
  if (!(d1 * d2 < 0 && d3 * d4 < 0)) return undefined;
  const share = d3 / (d3 - d4);
  return [p.from[0] + share * (p.to[0] - p.from[0]), p.from[1] + share * (p.to[1] - p.from[1])];
}

/** Any shared position; of neighbours, one beyond their common corner (an edge that runs back on the other). */
function meeting(p: Edge, q: Edge, order: "pq" | "qp" | ""): Position | undefined {
  if (order !== "") {
    const [before, after] = order === "pq" ? [p, q] : [q, p];
    if (turn(before.from, before.to, after.to) !== 0) return undefined;
    const [ux, uy] = [before.to[0] - before.from[0], before.to[1] - before.from[1]];
    const [vx, vy] = [after.to[0] - after.from[0], after.to[1] - after.from[1]];
    return ux * vx + uy * vy < 0 ? after.from : undefined;
  }
  const proper = properMeeting(p, q);
  if (proper !== undefined) return proper;
  const on = (edge: Edge, one: Position) =>
    turn(edge.from, edge.to, one) === 0 &&
    one[0] >= edge.left &&
    one[0] <= edge.right &&
    one[1] >= edge.low &&
    one[1] <= edge.high;
  return [q.from, q.to].find((one) => on(p, one)) ?? [p.from, p.to].find((one) => on(q, one));
}
