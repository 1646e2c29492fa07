import type { RawFinding } from "../data/finding.ts";
import type { Files, RandomAccess } from "../effects/effects.ts";
import { settleDates } from "./date-table.ts";
import { periodsOf } from "./dates.ts";
import { noFiles } from "./extract.ts";
import { describeLayer, type Layer } from "./layer.ts";
import type { CellMethods } from "./netcdf/cell-methods.ts";
import { netcdfStack } from "./netcdf/file.ts";
import { isNetcdf, openNetcdf } from "./netcdf/open.ts";
import type { LayerOptions } from "./options.ts";
import { indexQuality, withoutQuality } from "./quality-stack.ts";
import { fetching, isAddress, layerPaths, openFile } from "./remote.ts";
import { type DatedImage, orderImages } from "./series.ts";
import { findSideFiles, sideList } from "./side.ts";
import { checkFit, resolveSystem } from "./system.ts";
import { turn } from "./turn.ts";

export interface PlannedFile {
  readonly path: string;
  readonly bytes: number;
  readonly width: number;
  readonly height: number;
  readonly bands: number;
  readonly type: string;
  readonly compression: string;
  /** Files beside it that are read with it. */
  readonly beside: readonly string[];
}

/** What a run would read of a layer; only headers have been read for it. */
export interface LayerPlan {
  readonly name: string;
  readonly files: readonly PlannedFile[];
  /** In order of time, repeats left out and overlaps cut, as the run will have them. */
  readonly images: readonly DatedImage[];
  /** The systems that occur; more than one is unusual. */
  readonly systems: readonly string[];
  readonly findings: readonly RawFinding[];
  /** What the files say their values are, where they do (NetCDF). */
  readonly methods: CellMethods | undefined;
}

/**
 * Reads the headers of every file of a layer: sizes, dates, systems, gaps and overlaps. All that a run would refuse
 * of headers is thrown here already: unsupported encodings, broken files, unknown systems, dates that do not stand in
 * the names.
 */
export async function planLayers(name: string, given: LayerOptions, files: Files): Promise<LayerPlan> {
  const options = await settleDates(given, files);
  const paths = await layerPaths(options, files);
  if (paths.length === 0) throw noFiles(name, options);
  const sides = await findSideFiles(
    paths.filter((one) => !isAddress(one)),
    files,
  );
  const planned: PlannedFile[] = [];
  const dated: { path: string; periods: ReturnType<typeof periodsOf> }[] = [];
  const systems = new Set<string>();
  const found: RawFinding[] = [];
  let methods: CellMethods | undefined;
  const settled = new Map<string, string>();
  for (const path of paths) {
    const file = await openFile(path, files);
    try {
      if (isNetcdf(file)) {
        const one = await planNetcdf(file, options, name);
        planned.push(one.planned);
        dated.push({ path, periods: one.stack.periods });
        found.push(...one.stack.findings);
        systems.add(one.stack.system.label);
        methods ??= one.stack.methods;
        continue;
      }
      const layer = await fetching(file, () => describeLayer(file, files, sides(path)));
      planned.push(plannedFile(layer, file.size, sideList(sides(path))));
      dated.push({
        path,
        periods: periodsOf(
          path,
          layer.bands.map((band) => band.description),
          options,
        ),
      });
      systems.add(systemLabel(layer, options, settled));
    } finally {
      file.close();
    }
    await turn();
  }
  if (options.quality !== undefined) {
    const index = await indexQuality(name, options, options.quality, files);
    found.push(...withoutQuality(name, dated, index));
  }
  const { images, findings } = orderImages(name, dated);
  return { name, files: planned, images, findings: [...found, ...findings], systems: [...systems], methods };
}

async function planNetcdf(file: RandomAccess, options: LayerOptions, name: string) {
  const dataset = await openNetcdf(file);
  try {
    const stack = netcdfStack(dataset, options, name);
    const { variable, grid, images } = stack.layer;
    const planned: PlannedFile = {
      path: file.path,
      bytes: file.size,
      width: grid.width,
      height: grid.height,
      bands: images,
      type: variable.type,
      compression: variable.compression,
      beside: [],
    };
    return { planned, stack };
  } finally {
    dataset.close();
  }
}

function plannedFile({ path, image }: Layer, bytes: number, beside: readonly string[]): PlannedFile {
  const { width, height, bands, type, compression } = image;
  return { path, bytes, width, height, bands, type, compression, beside };
}

/** Most files of a stack say the same of their system, which is settled once. */
function systemLabel(layer: Layer, options: LayerOptions, settled: Map<string, string>): string {
  const key = JSON.stringify([layer.grid, [...layer.keys.numbers], [...layer.keys.texts], layer.wkt]);
  const known = settled.get(key);
  if (known !== undefined) return known;
  const system = resolveSystem({ path: layer.path, user: options.system, keys: layer.keys, wkt: layer.wkt });
  checkFit(layer.grid, system, layer.path);
  const { label } = system;
  settled.set(key, label);
  return label;
}
