import { type Day, isoDay } from "../data/day.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Files, RandomAccess } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { type ImagePeriod, periodsOf } from "./dates.ts";
import type { Grid } from "./grid.ts";
import { type Image, readBlock, samplesPerPixel } from "./image.ts";
import { describeLayer } from "./layer.ts";
import { netcdfStack } from "./netcdf/file.ts";
import { isNetcdf, openNetcdf } from "./netcdf/open.ts";
import { pixelsOf } from "./netcdf/pixels.ts";
import type { LayerOptions, QualityOptions } from "./options.ts";
import { type PixelTest, qualityTest } from "./quality.ts";
import type { Samples } from "./samples.ts";
import { readyFor } from "./unpack.ts";

/** Where the quality numbers of one image stand. */
interface QualityImage {
  readonly path: string;
  readonly band: number;
}

/** The quality images of a whole layer, by the first day they stand for. */
export type QualityIndex = ReadonlyMap<Day, QualityImage>;

/** Quality for the images of one file of values. */
export interface OpenQuality {
  readonly test: (image: number) => PixelTest;
  readonly close: () => void;
}

/** The options a quality file is read by: raw numbers of its own band or variable. */
function optionsOf(options: LayerOptions, quality: QualityOptions): LayerOptions {
  const { files, date, covers, unit, kind, system, select } = options;
  const own = quality.band ?? (quality.files === undefined ? options.band : undefined);
  return {
    files: quality.files ?? files,
    date: quality.date ?? date,
    covers,
    unit,
    kind,
    ...(system === undefined ? {} : { system }),
    ...(own === undefined ? {} : { band: own }),
    ...(quality.variable === undefined ? {} : { variable: quality.variable }),
    ...(select === undefined || quality.files !== undefined ? {} : { select }),
  };
}

/** Lists and dates a layer's quality images; only headers are read. Undefined where they stand in the layer's own files. */
export async function indexQuality(
  name: string,
  options: LayerOptions,
  quality: QualityOptions,
  files: Files,
): Promise<QualityIndex | undefined> {
  if (quality.files === undefined) return undefined;
  const paths = await files.list(quality.files);
  if (paths.length === 0)
    throw new InputError({
      name: "layers.no-files",
      expected: `files for the quality of the layer ${name}`,
      found: `none that match ${quality.files.map((one) => JSON.stringify(one)).join(", ")}`,
      where: { cell: `layers ${name} quality files` },
      remedy: "mend the pattern; it is looked for below the data folder",
    });
  const index = new Map<Day, QualityImage>();
  for (const path of paths) {
    const file = files.open(path);
    try {
      const periods = await periodsIn(file, name, optionsOf(options, quality), files);
      for (const { start, band } of periods) if (!index.has(start)) index.set(start, { path, band });
    } finally {
      file.close();
    }
  }
  return index;
}

async function periodsIn(
  file: RandomAccess,
  name: string,
  options: LayerOptions,
  files: Files,
): Promise<readonly ImagePeriod[]> {
  if (isNetcdf(file)) {
    const dataset = await openNetcdf(file);
    try {
      return netcdfStack(dataset, options, name).periods;
    } finally {
      dataset.close();
    }
  }
  const layer = await describeLayer(file, files);
  const texts = layer.bands.map((band) => band.description);
  return periodsOf(file.path, texts, options);
}

/** The companion files that hold the quality of some images, for the key of kept values. */
export function qualityFiles(
  periods: readonly ImagePeriod[],
  index: QualityIndex | undefined,
): readonly string[] {
  return [...new Set(periods.flatMap(({ start }) => index?.get(start)?.path ?? []))].sort();
}

/** A finding where images have no quality image; all their pixels are refused. */
export function withoutQuality(
  name: string,
  files: readonly { readonly path: string; readonly periods: readonly ImagePeriod[] }[],
  index: QualityIndex | undefined,
): RawFinding[] {
  if (index === undefined) return [];
  const all = files.flatMap(({ path, periods }) => periods.map(({ start }) => ({ path, start })));
  const without = all.filter(({ start }) => !index.has(start));
  if (without.length === 0) return [];
  return [
    {
      kind: "layer-quality",
      subject: name,
      message: `${without.length} of ${all.length} images have no quality image (the first from ${isoDay(without[0].start)}) and count as missing`,
      where: { file: without[0].path },
      value: isoDay(without[0].start),
      count: without.length,
      remedy: "add the missing quality files, or mend how they are dated",
    },
  ];
}

/** Opens the quality of one file's images. All pixels of an image without any are refused. Throws `layers.quality-grid` where its pixels are not the layer's own. */
export async function openQuality(
  name: string,
  path: string,
  grid: Grid,
  periods: readonly ImagePeriod[],
  options: LayerOptions,
  quality: QualityOptions,
  index: QualityIndex | undefined,
  inputs: Files,
): Promise<OpenQuality> {
  const own = optionsOf(options, quality);
  const places = periods.map(({ start, band }): QualityImage | undefined =>
    index === undefined
      ? {
          path,
          band:
            options.band !== undefined || quality.variable === undefined
              ? (quality.band ?? band + 1) - 1
              : band,
        }
      : index.get(start),
  );
  const files = [...new Set(places.flatMap((one) => (one === undefined ? [] : [one.path])))];
  const closing: (() => void)[] = [];
  const close = () => {
    for (const one of closing) one();
  };
  const readers = new Map<string, RawReader>();
  try {
    for (const one of files) {
      const file = inputs.open(one);
      closing.unshift(() => file.close());
      const reader = await rawReader(file, name, own, inputs, closing);
      if (!sameGrid(reader.grid, grid)) throw otherGrid(one, reader.grid, path, grid);
      readers.set(one, reader);
    }
  } catch (error) {
    close();
    throw error;
  }
  const passes = qualityTest(quality.pass);
  return {
    close,
    test: (image) => {
      const place = places[image];
      const reader = place === undefined ? undefined : readers.get(place.path);
      if (place === undefined || reader === undefined) return () => false;
      return (column, row) => passes(reader.raw(place.band, column, row));
    },
  };
}

interface RawReader {
  readonly grid: Grid;
  /** The raw number of a pixel; NaN if the file says it is missing. */
  readonly raw: (band: number, column: number, row: number) => number;
}

async function rawReader(
  file: RandomAccess,
  name: string,
  options: LayerOptions,
  files: Files,
  closing: (() => void)[],
): Promise<RawReader> {
  if (isNetcdf(file)) {
    const dataset = await openNetcdf(file);
    closing.unshift(() => dataset.close());
    const { layer } = netcdfStack(dataset, options, name);
    return { grid: layer.grid, raw: pixelsOf(layer) };
  }
  const layer = await describeLayer(file, files);
  await readyFor(layer.image.compression);
  const at = imagePixels(file, layer.image);
  return {
    grid: layer.grid,
    raw: (band, column, row) => {
      const raw = at(band, column, row);
      return raw === layer.nodata[band] ? Number.NaN : raw;
    },
  };
}

/** Raw samples of an image pixel by pixel, each block read once. */
function imagePixels(file: RandomAccess, image: Image) {
  const blocks = new Map<number, Samples | undefined>();
  const step = samplesPerPixel(image);
  return (band: number, column: number, row: number): number => {
    const [across, down] = [Math.floor(column / image.blockWidth), Math.floor(row / image.blockHeight)];
    const key = ((image.planar ? band : 0) * image.down + down) * image.across + across;
    if (!blocks.has(key)) blocks.set(key, readBlock(file, image, across, down, band));
    const at = (row % image.blockHeight) * image.blockWidth + (column % image.blockWidth);
    return blocks.get(key)?.[at * step + (image.planar ? 0 : band)] ?? Number.NaN;
  };
}

/** Grids are the same where sizes are and no corner is off by more than a thousandth of a pixel. */
function sameGrid(a: Grid, b: Grid): boolean {
  if (a.width !== b.width || a.height !== b.height) return false;
  const pixel = Math.sqrt(Math.abs(b.affine.a * b.affine.e - b.affine.b * b.affine.d));
  const corners = [
    [0, 0],
    [a.width, 0],
    [0, a.height],
  ];
  return corners.every(([c, r]) => {
    const dx = a.affine.x0 - b.affine.x0 + (a.affine.a - b.affine.a) * c + (a.affine.b - b.affine.b) * r;
    const dy = a.affine.y0 - b.affine.y0 + (a.affine.d - b.affine.d) * c + (a.affine.e - b.affine.e) * r;
    return Math.hypot(dx, dy) <= 1e-3 * pixel;
  });
}

function otherGrid(path: string, found: Grid, of: string, expected: Grid): InputError {
  const words = ({ width, height, affine }: Grid) =>
    `${width} × ${height} pixels from ${affine.x0}, ${affine.y0} by ${affine.a}, ${affine.e}`;
  return new InputError({
    name: "layers.quality-grid",
    expected: `quality on the grid of ${of}: ${words(expected)}`,
    found: words(found),
    where: { file: path },
    remedy: "bring the quality layer to the grid of the values first, e.g. gdalwarp -r near",
  });
}
