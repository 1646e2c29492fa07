import type { Position } from "./place.ts";

/** Metres of a degree of latitude on a sphere of 6 371 008.8 m (the mean radius of GRS 80). */
const METRES_PER_DEGREE = (Math.PI / 180) * 6_371_008.8;

/**
 * The centre of the grid cell a position lies in, cells about `metres` wide and high. All positions of a cell give the
 * same answer, so nothing finer can be had from it, however often it is asked. Rows of cells begin at the south pole,
 * cells within a row at the meridian of 180°; the number of cells in a row follows from the row's own latitude.
 */
export function coarsen(position: Position, metres: number): Position {
  const rows = Math.max(1, Math.round((180 * METRES_PER_DEGREE) / metres));
  const row = Math.min(rows - 1, Math.floor(((position[1] + 90) / 180) * rows));
  const latitude = ((row + 0.5) / rows) * 180 - 90;
  const round = 360 * METRES_PER_DEGREE * Math.cos((latitude * Math.PI) / 180);
  const cells = Math.max(1, Math.round(round / metres));
  const turns = ((((position[0] + 180) / 360) % 1) + 1) % 1;
  const longitude = ((Math.min(cells - 1, Math.floor(turns * cells)) + 0.5) / cells) * 360 - 180;
  const digits = Math.max(0, Math.ceil(-Math.log10(metres / METRES_PER_DEGREE)) + 1);
  return [Number(longitude.toFixed(digits)), Number(latitude.toFixed(digits))];
}
