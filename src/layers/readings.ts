import type { Footprint } from "./area.ts";
import type { ImagePeriod } from "./dates.ts";
import { footprintOf } from "./footprint.ts";
import type { Grid } from "./grid.ts";
import { movingFootprint } from "./moving.ts";
import { naming } from "./naming.ts";
import type { Wanted } from "./options.ts";
import type { Kept } from "./reuse.ts";
import type { System } from "./system.ts";

/** One footprint that is read, in every image or in one alone. */
export interface Reading {
  /** Index of the wanted place it is of. */
  readonly owner: number;
  readonly footprint: Footprint;
  /** The image, where the place moves. */
  readonly only: number | undefined;
}

/** Means and shares, [image × readings + reading]. */
export interface Gathered {
  readonly values: Float64Array;
  readonly shares: Float64Array;
  readonly refused: Float64Array;
}

/** Places that stay: a reading each, of use in every file on the same grid. */
export function stillReadings(
  path: string,
  wanted: readonly Wanted[],
  grid: Grid,
  system: System,
): readonly Reading[] {
  return wanted.flatMap(({ place, use }, owner): Reading[] =>
    place.type === "moving"
      ? []
      : [{ owner, footprint: naming(path, () => footprintOf(place, use, grid, system)), only: undefined }],
  );
}

/** Places that move: a reading for each image in whose period there are fixes enough. */
export function movingReadings(
  path: string,
  wanted: readonly Wanted[],
  periods: readonly ImagePeriod[],
  grid: Grid,
  system: System,
): readonly Reading[] {
  return wanted.flatMap(({ place, use }, owner): Reading[] =>
    place.type !== "moving"
      ? []
      : periods.flatMap((period, image): Reading[] => {
          const footprint = naming(path, () => movingFootprint(place, use, period, grid, system));
          return footprint === undefined ? [] : [{ owner, footprint, only: image }];
        }),
  );
}

/** What was gathered, place by place as it is kept. Images in which a moving place was not read are missing. */
export function keptOf(
  places: number,
  readings: readonly Reading[],
  images: number,
  { values, shares, refused }: Gathered,
  withQuality: boolean,
): readonly Kept[] {
  const byOwner = Array.from({ length: places }, (): number[] => []);
  for (const [r, { owner }] of readings.entries()) byOwner[owner].push(r);
  return byOwner.map((own): Kept => {
    const pick = (from: Float64Array, missing: number) => {
      const out = new Array<number>(images).fill(missing);
      for (const r of own) {
        const { only } = readings[r];
        if (only !== undefined) out[only] = from[only * readings.length + r];
        else for (let i = 0; i < images; i++) out[i] = from[i * readings.length + r];
      }
      return out;
    };
    const outside = own.length === 0 ? 0 : Math.max(...own.map((r) => readings[r].footprint.outside));
    return {
      values: pick(values, Number.NaN),
      shares: pick(shares, 0),
      ...(withQuality ? { refused: pick(refused, 0) } : {}),
      outside,
      pixels: own.length === 0 ? 1 : readings[own[0]].footprint.pixels,
    };
  });
}
