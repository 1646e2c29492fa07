/** Working arrays for m coordinates, or for more than are asked for; the square ones hold m × m. */
export interface Rooms {
  readonly which: Int32Array;
  readonly target: Float64Array;
  readonly sign: Float64Array;
  readonly curvature: Float64Array;
  readonly factor: Float64Array;
}

let capacity = 0;
let rooms: Rooms | undefined;

/**
 * The solver's working arrays, which grow with the largest working set and are kept between solves: a screen asks for some
 * thousand of them in a row, and arrays made anew in every step cost more than what is computed in them. Nothing in
 * them outlives a step, and solves do not nest: no smooth function solves anything itself.
 */
export function roomsFor(m: number): Rooms {
  if (rooms !== undefined && m <= capacity) return rooms;
  capacity = Math.max(16, m + (m >> 1));
  const [curvature, factor] = [0, 1].map(() => new Float64Array(capacity * capacity));
  const [target, sign] = [0, 1].map(() => new Float64Array(capacity));
  rooms = { which: new Int32Array(capacity), target, sign, curvature, factor };
  return rooms;
}
