import type { Position } from "../data/place.ts";
import type { Files, RandomAccess } from "../effects/effects.ts";
import { type Affine, type Grid, type Pair, resized, toPixel, toSystem } from "./grid.ts";
import { describeLayer, type Layer } from "./layer.ts";
import { describeNetcdf, netcdfSystem } from "./netcdf/layer.ts";
import { isNetcdf, openNetcdf } from "./netcdf/open.ts";
import { unpacker } from "./netcdf/packing.ts";
import { pixelsOf } from "./netcdf/pixels.ts";
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
  options: Pick<
    LayerOptions,
    "scale" | "offset" | "fill" | "valid" | "system" | "band" | "variable" | "select"
  >,
  maxPixels: number,
  files: Files,
): Promise<Overview> {
  const side = (await findSideFiles([path], files))(path);
  const file = files.open(path);
  try {
    if (isNetcdf(file)) return await netcdfOverview(file, options, maxPixels);
    const layer = await describeLayer(file, files, side);
    const system = resolveSystem({ path, user: options.system, keys: layer.keys, wkt: layer.wkt });
    return await overviewOf(file, layer, system, options, maxPixels, files);
  } finally {
    file.close();
  }
}

/** The first image of a NetCDF variable (or the one that `band` counts to). */
async function netcdfOverview(
  file: RandomAccess,
  options: Pick<
    LayerOptions,
    "scale" | "offset" | "fill" | "valid" | "system" | "band" | "variable" | "select"
  >,
  maxPixels: number,
): Promise<Overview> {
  const dataset = await openNetcdf(file);
  try {
    const layer = describeNetcdf(dataset, options);
    const { grid, images } = layer;
    const system = netcdfSystem(layer, options.system);
    const raw = pixelsOf(layer);
    const unpack = unpacker(layer.variable, options);
    const image = Math.min(Math.max(options.band ?? 1, 1), images) - 1;
    const coarse = new Coarse(grid.width, grid.height, maxPixels);
    for (let row = 0; row < grid.height; row++)
      for (let column = 0; column < grid.width; column++)
        coarse.add(column, row, unpack(raw(image, column, row)));
    return coarse.overview(grid, grid.affine, system);
  } finally {
    dataset.close();
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
  const band = Math.min(Math.max(options.band ?? 1, 1), image.bands) - 1;
  const coarse = new Coarse(image.width, image.height, maxPixels);
  await scanBand(file, files, layer, image, band, valueRule(layer, band, options), (column, row, value) =>
    coarse.add(column, row, value),
  );
  return coarse.overview(layer.grid, resized(layer.grid, image.width, image.height).affine, system);
}

/** Sums values into cells of whole blocks of pixels, at most `maxPixels` of them. */
class Coarse {
  readonly width: number;
  readonly height: number;
  private readonly factor: number;
  private readonly sums: Float64Array;
  private readonly counts: Float64Array;

  constructor(width: number, height: number, maxPixels: number) {
    this.factor = Math.max(1, Math.ceil(Math.sqrt((width * height) / Math.max(1, maxPixels))));
    this.width = Math.ceil(width / this.factor);
    this.height = Math.ceil(height / this.factor);
    this.sums = new Float64Array(this.width * this.height);
    this.counts = new Float64Array(this.width * this.height);
  }

  add(column: number, row: number, value: number): void {
    if (Number.isNaN(value)) return;
    const cell = Math.floor(row / this.factor) * this.width + Math.floor(column / this.factor);
    this.sums[cell] += value;
    this.counts[cell]++;
  }

  /** The overview of a grid whose pixels at full size lie by `pixels`. */
  overview(grid: Grid, pixels: Affine, system: System): Overview {
    const { factor, width, height } = this;
    // Cells hold `factor` pixels each way; the last column and row may reach beyond the image.
    const affine = {
      ...pixels,
      a: pixels.a * factor,
      b: pixels.b * factor,
      d: pixels.d * factor,
      e: pixels.e * factor,
    };
    return {
      width,
      height,
      values: this.sums.map((sum, i) => (this.counts[i] > 0 ? sum / this.counts[i] : Number.NaN)),
      affine,
      toLonLat: (column, row) => system.toLonLat(...toSystem(affine, column, row)),
      toPixel: ([lon, lat]) => toPixel(affine, ...system.fromLonLat(lon, lat)),
      bounds: boundsOf({ grid }, system),
    };
  }
}

/** Bounds of the outline in degrees, from points along it; points beyond the projection are left out. */
export function boundsOf(
  { grid }: Pick<Layer, "grid">,
  system: System,
): readonly [number, number, number, number] {
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
