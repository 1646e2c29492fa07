import type { Position, Where } from "../data/place.ts";
import type { Spec } from "../spec/spec.ts";
import { coarsen } from "../study/coarsen.ts";

/** How positions of this study may be shown. */
export function positionRule(study: Spec["study"]): (position: Position) => Position {
  return study.sensitive ? (position) => coarsen(position, study.coarsenKm) : (position) => position;
}

/**
 * Places as they may be shown. In a sensitive study points go to the centre of their grid cell and areas become the box
 * around their coarsened corners, which tells the neighbourhood and nothing of the outline.
 */
export function shownPlaces(places: Iterable<Where>, study: Spec["study"]): Where[] {
  const rule = positionRule(study);
  return [...places].map((place): Where => {
    if (!study.sensitive) return place;
    if (place.type === "point") return { ...place, position: rule(place.position) };
    const corners = place.polygons.flat(2).map(rule);
    const longitudes = corners.map(([longitude]) => longitude);
    const latitudes = corners.map(([, latitude]) => latitude);
    const [west, east] = [Math.min(...longitudes), Math.max(...longitudes)];
    const [south, north] = [Math.min(...latitudes), Math.max(...latitudes)];
    const box: Position[] = [
      [west, south],
      [east, south],
      [east, north],
      [west, north],
      [west, south],
    ];
    return { ...place, polygons: [[box]] };
  });
}
