import type { AnyPlace, Position, Where } from "../data/place.ts";
import type { FileIdentity } from "../effects/effects.ts";
import type { Spec } from "../spec/spec.ts";
import { coarsen } from "../study/coarsen.ts";

/** How positions of this study may be shown. */
export function positionRule(study: Spec["study"]): (position: Position) => Position {
  return study.sensitive ? (position) => coarsen(position, study.coarsenKm) : (position) => position;
}

/**
 * Places as they may be shown. In a sensitive study points go to the centre of their grid cell and areas become the box
 * around their coarsened corners, which tells the neighbourhood and nothing of the outline. Places that move become the
 * box around their positions, coarsened likewise; single fixes are never shown.
 */
export function shownPlaces(places: Iterable<AnyPlace>, study: Spec["study"]): Where[] {
  const rule = positionRule(study);
  return [...places].map((place): Where => {
    if (!study.sensitive && place.type !== "moving") return place;
    if (place.type === "point") return { ...place, position: rule(place.position) };
    const positions =
      place.type === "moving" ? place.fixes.map((one) => one.position) : place.polygons.flat(2);
    const corners = positions.map(rule);
    const longitudes = corners.map(([longitude]) => longitude);
    const latitudes = corners.map(([, latitude]) => latitude);
    const least = (values: readonly number[]) => values.reduce((a, b) => Math.min(a, b));
    const most = (values: readonly number[]) => values.reduce((a, b) => Math.max(a, b));
    const [west, east] = [least(longitudes), most(longitudes)];
    const [south, north] = [least(latitudes), most(latitudes)];
    const box: Position[] = [
      [west, south],
      [east, south],
      [east, north],
      [west, north],
      [west, south],
    ];
    return { type: "area", name: place.name, polygons: [[box]] };
  });
}

/** Stands in the record where a fingerprint would let a guessed position be confirmed. */
export const WITHHELD_HASH = "withheld: the study is sensitive";

/**
 * Input files as the record may name them. A file of places is small and of a known form, so whoever knows a position to
 * ten kilometres can try every spot within them until size and hash agree: in a sensitive study neither is recorded.
 * What that costs: the record cannot tell whether such a file was changed since.
 */
export function shownInputs(inputs: readonly FileIdentity[], spec: Spec): readonly FileIdentity[] {
  if (!spec.study.sensitive) return inputs;
  const secret = new Set(
    Object.values(spec.places).flatMap((one) =>
      "fixes" in one ? [one.fixes] : "file" in one ? [one.file] : [],
    ),
  );
  return inputs.map((one) => (secret.has(one.path) ? { ...one, bytes: 0, sha256: WITHHELD_HASH } : one));
}
