import type { Site } from "../data/series.ts";
import { InputError } from "../errors.ts";

/** Mean radius of the Earth in km (IUGG). */
const RADIUS_KM = 6371.0088;
/** A station nearer than this counts as this far, lest one at the place itself outweigh all others without bound. */
const LEAST_KM = 0.1;

/** Great-circle distance in km by the haversine formula (Sinnott 1984). */
export function distanceKm(a: readonly [number, number], b: readonly [number, number]): number {
  const radians = (degrees: number) => (degrees * Math.PI) / 180;
  const half = (x: number) => Math.sin(x / 2) ** 2;
  const [lat1, lat2] = [radians(a[1]), radians(b[1])];
  const h = half(lat2 - lat1) + Math.cos(lat1) * Math.cos(lat2) * half(radians(b[0] - a[0]));
  return 2 * RADIUS_KM * Math.asin(Math.min(1, Math.sqrt(h)));
}

/**
 * Inverse-distance weights (Shepard 1968) of stations for a place: w_s ∝ 1/d_s^power, d at least 100 m, their sum 1.
 * Throws `aggregate.no-position` for a station without coordinates.
 */
export function inverseDistance(
  names: readonly string[],
  sites: readonly Site[],
  place: readonly [number, number],
  power: number,
  cell: string,
): ReadonlyMap<string, number> {
  const raw = names.map((name): readonly [string, number] => {
    const site = sites.find((one) => one.id === name);
    if (site === undefined || !Number.isFinite(site.longitude + site.latitude))
      throw new InputError({
        name: "aggregate.no-position",
        expected: `longitude and latitude of station ${name}, to weight it by its distance`,
        found: "none",
        where: { cell },
        remedy: "fill them in in the list of stations, leave the station out, or leave out `weights`",
      });
    const d = Math.max(LEAST_KM, distanceKm([site.longitude, site.latitude], place));
    return [name, d ** -power];
  });
  const total = raw.reduce((sum, [, weight]) => sum + weight, 0);
  return new Map(raw.map(([name, weight]) => [name, weight / total]));
}
