import type { Position } from "../data/place.ts";

/** Length of a degree of a great circle, km, on the sphere of mean radius 6371.0088 km (IUGG). */
const KM_PER_DEGREE = (Math.PI * 6371.0088) / 180;

/**
 * The centre of the grid cell of about `km` × `km` that holds a position, in degrees rounded to three decimals. The
 * grid is fixed to the globe (rows from the equator, as many equal columns in each row as fit round it), so the answer
 * tells the cell and nothing more, however often and from whatever file it is asked for.
 */
export function coarsen(position: Position, km: number): Position {
  const [longitude, latitude] = position;
  const height = km / KM_PER_DEGREE;
  const row = Math.floor(Math.min(latitude, 90 - 1e-9) / height);
  const centre = Math.max(-90, Math.min(90, (row + 0.5) * height));
  const around = 360 * KM_PER_DEGREE * Math.max(0, Math.cos((centre * Math.PI) / 180));
  const columns = Math.max(1, Math.round(around / km));
  const width = 360 / columns;
  const column = Math.min(columns - 1, Math.floor((longitude + 180) / width));
  const round = (degrees: number) => Math.round(degrees * 1000) / 1000;
  return [round(-180 + (column + 0.5) * width), round(centre)];
}
