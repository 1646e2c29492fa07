import type { RawFinding } from "../data/finding.ts";
import type { Series } from "../data/series.ts";
import type { Effects, RandomAccess } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import type { Footprint } from "./area.ts";
import { type NeededBlock, neededBlocks } from "./blocks.ts";
import { type ImagePeriod, periodsOf } from "./dates.ts";
import { footprintOf } from "./footprint.ts";
import { gather } from "./gather.ts";
import { describeLayer, type Layer } from "./layer.ts";
import type { LayerOptions, Wanted } from "./options.ts";
import { fileKey, type Kept, placeKey, readKept, writeKept } from "./reuse.ts";
import { type FileValues, seriesOf } from "./series.ts";
import { findSideFiles } from "./side.ts";
import { checkFit, resolveSystem } from "./system.ts";
import { valueRule } from "./values.ts";

export interface LayerExtraction {
  /** One for each wanted place, in their order; the site is the place's name. */
  readonly series: readonly Series[];
  /** Parallel to each series' values: share of the place's area (or of the point's weight) with valid pixels. */
  readonly validShares: readonly Float64Array[];
  readonly findings: readonly RawFinding[];
  /** Files whose values were not at hand and were read. */
  readonly filesRead: number;
}

/** A wanted place with the key it is kept by. */
interface Keyed extends Wanted {
  readonly key: string;
}

/** Footprints and blocks of all wanted places on one grid; stacks share one grid, so it is worked out once. */
interface Prepared {
  readonly footprints: readonly Footprint[];
  readonly blocks: readonly NeededBlock[];
}

/**
 * Reads a stack of GeoTIFF images at places. Files go one after the other, each needed block is read and unpacked
 * once for all places, and what was read of a file is handed to the reuse effect before the next begins. Memory does
 * not grow with the number of files beyond the values themselves.
 * Throws InputErrors named `layers.…` with the file's name, and InterruptedError between files.
 */
export async function extractLayers(
  name: string,
  options: LayerOptions,
  wanted: readonly Wanted[],
  effects: Effects,
): Promise<LayerExtraction> {
  const paths = await effects.files.list(options.files);
  if (paths.length === 0) throw noFiles(name, options);
  const sides = await findSideFiles(paths, effects.files);
  // One hash a place, not one a place and file.
  const keyed = wanted.map((one) => ({ ...one, key: placeKey(one.place, one.use) }));
  const prepared = new Map<string, Prepared>();
  const read: FileValues[] = [];
  let filesRead = 0;
  const step = effects.progress.start(`layer ${name}`, paths.length);
  for (const path of paths) {
    effects.checkInterrupted();
    const side = sides(path);
    const file = effects.files.open(path);
    try {
      const layer = await describeLayer(file, effects.files, side);
      const periods = periodsOf(
        path,
        layer.bands.map((band) => band.description),
        options,
      );
      const key = await fileKey(path, side, options, effects);
      const kept = new Map(await readKept(key, effects));
      const absent = keyed.filter(({ key: one }) => !isWhole(kept.get(one), periods));
      if (absent.length > 0) {
        filesRead++;
        for (const [place, values] of await readPlaces(
          file,
          layer,
          periods,
          absent,
          options,
          prepared,
          effects,
        ))
          kept.set(place, values);
        await writeKept(key, kept, effects);
      }
      read.push({ path, periods, places: keyed.map((one) => kept.get(one.key)) });
    } finally {
      file.close();
    }
    step.tick();
  }
  step.done();
  return { ...seriesOf(name, options, wanted, read), filesRead };
}

/** True if values are kept for every image of the file. */
function isWhole(kept: Kept | undefined, periods: readonly ImagePeriod[]): boolean {
  return kept !== undefined && kept.values.length === periods.length && kept.shares.length === periods.length;
}

async function readPlaces(
  file: RandomAccess,
  layer: Layer,
  periods: readonly ImagePeriod[],
  wanted: readonly Keyed[],
  options: LayerOptions,
  prepared: Map<string, Prepared>,
  effects: Effects,
): Promise<readonly (readonly [string, Kept])[]> {
  const { footprints, blocks } = prepare(layer, wanted, options, prepared);
  const bands = periods.map(({ band }) => ({ band, rule: valueRule(layer, band, options) }));
  const { values, shares } = await gather(file, effects.files, layer, bands, blocks, footprints);
  return wanted.map(({ key }, w) => {
    const pick = (from: Float64Array) => periods.map((_period, image) => from[image * wanted.length + w]);
    const { outside, pixels } = footprints[w];
    return [key, { values: pick(values), shares: pick(shares), outside, pixels }] as const;
  });
}

function prepare(
  layer: Layer,
  wanted: readonly Keyed[],
  options: LayerOptions,
  prepared: Map<string, Prepared>,
): Prepared {
  const { image, grid } = layer;
  const system = [[...layer.keys.numbers], [...layer.keys.texts], layer.wkt, options.system];
  const shape = [grid, image.blockWidth, image.blockHeight];
  const key = JSON.stringify([shape, system, wanted.map((one) => one.key)]);
  const held = prepared.get(key);
  if (held !== undefined) return held;
  const resolved = resolveSystem({
    path: layer.path,
    user: options.system,
    keys: layer.keys,
    wkt: layer.wkt,
  });
  checkFit(grid, resolved, layer.path);
  const footprints = wanted.map(({ place, use }) =>
    naming(layer.path, () => footprintOf(place, use, grid, resolved)),
  );
  const made = { footprints, blocks: neededBlocks(footprints, image) };
  // Stacks in which every file has a grid of its own must not pile them up.
  if (prepared.size >= 8) prepared.clear();
  prepared.set(key, made);
  return made;
}

/** Adds the file's name to errors that speak of a place only. */
function naming<Result>(path: string, work: () => Result): Result {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof InputError) || error.facts.where?.file !== undefined) throw error;
    throw new InputError({ ...error.facts, where: { ...error.facts.where, file: path } }, error);
  }
}

export function noFiles(name: string, options: LayerOptions): InputError {
  return new InputError({
    name: "layers.no-files",
    expected: `files for the layer ${name}`,
    found: `none that match ${options.files.map((one) => JSON.stringify(one)).join(", ")}`,
    where: { cell: `layers ${name} files` },
    remedy: "mend the pattern; it is looked for below the data folder",
  });
}
