import type { Position } from "../data/place.ts";
import type { Files, RandomAccess } from "../effects/effects.ts";
import { type Affine, type Pair, resized, toPixel, toSystem } from "./grid.ts";
import { describeLayer, type Layer } from "./layer.ts";
import type { LayerOptions } from "./options.ts";
import { scanBand } from "./scan.ts";
import { findSideFiles } from "./side.ts";
import { resolveSystem, type System } from "./system.ts";
import { valueRule } from "./values.ts";

/** A layer's values on a coarse grid, for a map. */
export interface Overview {
  readonly width: number;
  readonly height: number;
  /** Row-major, mean of the valid pixels in each cell; NaN where there is none. */
  readonly values: Float64Array;
  /** Position in cells of a longitude and latitude: (0, 0) is the first cell's outer corner. */
  readonly toPixel: (position: Position) => Pair;
  /** Longitude and latitude of a position in cells; NaN beyond the projection. */
  readonly toLonLat: (column: number, row: number) => Pair;
  /** West, south, east, north of the layer's outline, in degrees. */
  readonly bounds: readonly [west: number, south: number, east: number, north: number];
  readonly affine: Affine;
}

/**
 * Reads a layer's picture of at most `maxPixels` cells: the means of whole blocks of pixels of the image, or of its
 * smallest reduced image that is still large enough. Band from `options.band` (1 by default).
 */
export async function readOverview(
  path: string,
  options: Pick<LayerOptions, "scale" | "offset" | "fill" | "valid" | "system" | "band">,
  maxPixels: number,
  files: Files,
): Promise<Overview> {
  const side = (await findSideFiles([path], files))(path);
  const file = files.open(path);
  try {
    const layer = await describeLayer(file, files, side);
    const system = resolveSystem({ path, user: options.system, keys: layer.keys, wkt: layer.wkt });
    return await overviewOf(file, layer, system, options, maxPixels, files);
  } finally {
    file.close();
  }
}

/** As `readOverview`, of a layer that is open already. */
export async function overviewOf(
  file: RandomAccess,
  layer: Layer,
  system: System,
  options: Pick<LayerOptions, "scale" | "offset" | "fill" | "valid" | "band">,
  maxPixels: number,
  files: Files,
): Promise<Overview> {
  const full = layer.image;
  // A mask is of the full image's pixels, so with one the full image is read.
  const enough = layer.overviews.filter((one) => one.width * one.height >= maxPixels);
  const image = layer.mask === undefined ? (enough[enough.length - 1] ?? full) : full;
  const factor = Math.max(1, Math.ceil(Math.sqrt((image.width * image.height) / Math.max(1, maxPixels))));
  const width = Math.ceil(image.width / factor);
  const height = Math.ceil(image.height / factor);
  const band = Math.min(Math.max(options.band ?? 1, 1), image.bands) - 1;
  const sums = new Float64Array(width * height);
  const counts = new Float64Array(width * height);
  await scanBand(file, files, layer, image, band, valueRule(layer, band, options), (column, row, value) => {
    if (Number.isNaN(value)) return;
    const cell = Math.floor(row / factor) * width + Math.floor(column / factor);
    sums[cell] += value;
    counts[cell]++;
  });
  const values = sums.map((sum, i) => (counts[i] > 0 ? sum / counts[i] : Number.NaN));
  // Cells hold `factor` pixels each way; the last column and row may reach beyond the image.
  const pixels = resized(layer.grid, image.width, image.height).affine;
  const affine = {
    ...pixels,
    a: pixels.a * factor,
    b: pixels.b * factor,
    d: pixels.d * factor,
    e: pixels.e * factor,
  };
  const toLonLat = (column: number, row: number) => system.toLonLat(...toSystem(affine, column, row));
  return {
    width,
    height,
    values,
    affine,
    toLonLat,
    toPixel: ([lon, lat]) => toPixel(affine, ...system.fromLonLat(lon, lat)),
    bounds: boundsOf(layer, system),
  };
}

/** Bounds of the outline in degrees, from points along it; points beyond the projection are left out. */
export function boundsOf({ grid }: Layer, system: System): readonly [number, number, number, number] {
  const bounds: [number, number, number, number] = [
    Number.POSITIVE_INFINITY,
    Number.POSITIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
    Number.NEGATIVE_INFINITY,
  ];
  const pieces = 32;
  for (let i = 0; i <= pieces; i++)
    for (let j = 0; j <= pieces; j++) {
      const at = toSystem(grid.affine, (grid.width * i) / pieces, (grid.height * j) / pieces);
      const [lon, lat] = system.toLonLat(...at);
      if (Number.isNaN(lon)) continue;
      bounds[0] = Math.min(bounds[0], lon);
      bounds[1] = Math.min(bounds[1], lat);
      bounds[2] = Math.max(bounds[2], lon);
      bounds[3] = Math.max(bounds[3], lat);
    }
  return bounds;
}
