import type { RawFinding } from "../data/finding.ts";
import type { Effects, RandomAccess } from "../effects/effects.ts";
import { type NeededBlock, neededBlocks } from "./blocks.ts";
import { type ImagePeriod, periodsOf } from "./dates.ts";
import { gather } from "./gather.ts";
import type { Grid } from "./grid.ts";
import { blockPlace } from "./image.ts";
import { describeLayer, type Layer } from "./layer.ts";
import type { CellMethods } from "./netcdf/cell-methods.ts";
import { layoutKey, netcdfStack, readStack } from "./netcdf/file.ts";
import { isNetcdf, openNetcdf } from "./netcdf/open.ts";
import { type Box, boxesOf } from "./netcdf/walk.ts";
import type { LayerOptions, Wanted } from "./options.ts";
import type { PixelTest } from "./quality.ts";
import { type Gathered, keptOf, movingReadings, type Reading, stillReadings } from "./readings.ts";
import { isRemote, type RemoteFile } from "./remote.ts";
import type { Kept } from "./reuse.ts";
import type { SidePaths } from "./side.ts";
import { checkFit, resolveSystem, type System } from "./system.ts";
import { valueRule } from "./values.ts";

/** An open file of images, of whatever format. */
export interface Source {
  readonly path: string;
  readonly grid: Grid;
  readonly periods: readonly ImagePeriod[];
  readonly findings: readonly RawFinding[];
  readonly methods: CellMethods | undefined;
  /** Values of places in every image, one for each wanted place. */
  readonly read: (
    wanted: readonly KeyedPlace[],
    known: KnownPlaces,
    quality: ((image: number) => PixelTest) | undefined,
  ) => Promise<readonly Kept[]>;
  readonly close: () => void;
}

/** A wanted place with the key it is kept by. */
export interface KeyedPlace extends Wanted {
  readonly key: string;
}

/** Readings and blocks of places that stay, by grid and layout: stacks share one, so it is worked out once. */
export type KnownPlaces = Map<
  string,
  {
    readonly readings: readonly Reading[];
    readonly blocks: readonly NeededBlock[];
    readonly boxes: readonly Box[];
  }
>;

/** Describes an open file by its first bytes. Throws InputErrors named `layers.…`; the file itself stays open. */
export async function openSource(
  file: RandomAccess,
  side: SidePaths,
  options: LayerOptions,
  name: string,
  effects: Effects,
): Promise<Source> {
  return isNetcdf(file)
    ? netcdfSource(file, options, name)
    : geotiffSource(file, await describeLayer(file, effects.files, side), options, effects);
}

function remembered<Made>(known: Map<string, Made>, key: string, make: () => Made): Made {
  const held = known.get(key);
  if (held !== undefined) return held;
  // Stacks in which every file has a grid of its own must not pile them up.
  if (known.size >= 8) known.clear();
  const made = make();
  known.set(key, made);
  return made;
}

function geotiffSource(file: RandomAccess, layer: Layer, options: LayerOptions, effects: Effects): Source {
  const { path, image, grid, keys, wkt } = layer;
  const texts = layer.bands.map((band) => band.description);
  const periods = periodsOf(path, texts, options);
  let settled: System | undefined;
  const system = () => {
    settled ??= resolveSystem({ path, user: options.system, keys, wkt });
    checkFit(grid, settled, path);
    return settled;
  };
  return {
    path,
    grid,
    periods,
    findings: [],
    methods: undefined,
    close: () => {},
    read: async (wanted, known, quality) => {
      const layout = [grid, image.blockWidth, image.blockHeight, [...keys.numbers], [...keys.texts], wkt];
      const key = JSON.stringify([layout, options.system, wanted.map((one) => one.key)]);
      const still = remembered(known, key, () => {
        const readings = stillReadings(path, wanted, grid, system());
        const footprints = readings.map((one) => one.footprint);
        return { readings, blocks: neededBlocks(footprints, image), boxes: [] };
      });
      const anyMoves = wanted.some((one) => one.place.type === "moving");
      const moving = anyMoves ? movingReadings(path, wanted, periods, grid, system()) : [];
      const readings = [...still.readings, ...moving];
      const bands = periods.map(({ band }) => ({ band, rule: valueRule(layer, band, options) }));
      const out: Gathered = {
        values: new Float64Array(bands.length * readings.length).fill(Number.NaN),
        shares: new Float64Array(bands.length * readings.length),
        refused: new Float64Array(bands.length * readings.length),
      };
      const place = (found: Gathered, images: readonly number[], own: readonly number[]) => {
        images.forEach((i, row) =>
          own.forEach((r, column) => {
            const [into, from] = [i * readings.length + r, row * own.length + column];
            out.values[into] = found.values[from];
            out.shares[into] = found.shares[from];
            out.refused[into] = found.refused[from];
          }),
        );
      };
      if (isRemote(file))
        await prefetchBlocks(file, image, bands, [
          still.blocks,
          neededBlocks(
            moving.map((one) => one.footprint),
            image,
          ),
        ]);
      const footprints = still.readings.map((one) => one.footprint);
      const all = bands.map((_, i) => i);
      const found = await gather(file, effects.files, layer, bands, still.blocks, footprints, quality);
      place(
        found,
        all,
        footprints.map((_, r) => r),
      );
      for (const i of all) {
        const own = readings.flatMap((one, r) => (one.only === i ? [r] : []));
        if (own.length === 0) continue;
        const here = own.map((r) => readings[r].footprint);
        const test = quality === undefined ? undefined : () => quality(i);
        const blocks = neededBlocks(here, image);
        place(await gather(file, effects.files, layer, [bands[i]], blocks, here, test), [i], own);
      }
      return keptOf(wanted.length, readings, periods.length, out, quality !== undefined);
    },
  };
}

/** Fetches the blocks that places need, and no others. */
async function prefetchBlocks(
  file: RemoteFile,
  image: Layer["image"],
  bands: readonly { readonly band: number }[],
  needed: readonly (readonly NeededBlock[])[],
): Promise<void> {
  const planes = image.planar ? bands : [{ band: 0 }];
  const ranges = needed.flat().flatMap(({ column, row }) =>
    planes.map(({ band }) => {
      const { offset, count } = blockPlace(image, column, row, band);
      return [offset, count] as const;
    }),
  );
  await file.prefetch(ranges.filter(([, count]) => count > 0));
}

async function netcdfSource(file: RandomAccess, options: LayerOptions, name: string): Promise<Source> {
  const dataset = await openNetcdf(file);
  try {
    const stack = netcdfStack(dataset, options, name);
    const { layer, system, periods, findings, methods } = stack;
    const { path } = file;
    return {
      path,
      grid: layer.grid,
      periods,
      findings,
      methods,
      close: () => dataset.close(),
      read: async (wanted, known, quality) => {
        const key = JSON.stringify([layoutKey(stack), wanted.map((one) => one.key)]);
        const still = remembered(known, key, () => {
          const readings = stillReadings(path, wanted, layer.grid, system);
          const footprints = readings.map((one) => one.footprint);
          return { readings, blocks: [], boxes: boxesOf(footprints, layer) };
        });
        const moving = movingReadings(path, wanted, periods, layer.grid, system);
        const readings = [...still.readings, ...moving];
        const footprints = readings.map((one) => one.footprint);
        const boxes = moving.length === 0 ? still.boxes : boxesOf(footprints, layer);
        const only = readings.map((one) => (one.only === undefined ? undefined : new Set([one.only])));
        const found = readStack(stack, options, footprints, boxes, (r) => only[r], quality);
        return keptOf(wanted.length, readings, periods.length, found, quality !== undefined);
      },
    };
  } catch (error) {
    dataset.close();
    throw error;
  }
}
