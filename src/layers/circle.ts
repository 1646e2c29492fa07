import proj4 from "proj4";
import type { Position, Ring } from "../data/place.ts";
import { InputError } from "../errors.ts";

const CORNERS = 720;

/**
 * A circle of so many metres round a point on WGS 84, as a ring of 720 corners drawn in the azimuthal equidistant
 * projection about the point. The radius is that of the regular polygon of the circle's own area,
 * r √(2π/n / sin(2π/n)), so that the chords take nothing off.
 */
export function circleAround([lon, lat]: Position, metres: number, place: string): Ring {
  if (!(metres > 0 && metres < 5e6))
    throw new InputError({
      name: "layers.bad-radius",
      expected: "a radius above 0 and below 5,000 km",
      found: `${metres} m`,
      where: { cell: `place ${place}` },
      remedy: "write the radius in metres",
    });
  const step = (2 * Math.PI) / CORNERS;
  const radius = metres * Math.sqrt(step / Math.sin(step));
  const local = proj4(`+proj=aeqd +lat_0=${lat} +lon_0=${lon} +x_0=0 +y_0=0 +datum=WGS84 +units=m`);
  const corners: Position[] = Array.from({ length: CORNERS }, (_, i) => {
    const [x, y] = local.inverse([radius * Math.cos(i * step), radius * Math.sin(i * step)]);
    return [x, y];
  });
  return [...corners, corners[0]];
}
