import type { RawFinding } from "../../data/finding.ts";
import type { Footprint } from "../area.ts";
import { type ImagePeriod, periodsOf } from "../dates.ts";
import type { LayerOptions } from "../options.ts";
import type { PixelTest } from "../quality.ts";
import { checkFit, type System } from "../system.ts";
import { lostBounds } from "./axes.ts";
import { type CellMethods, kindFinding } from "./cell-methods.ts";
import { type Dataset, textOf } from "./dataset.ts";
import { type ActiveImages, gatherNetcdf } from "./gather.ts";
import { describeNetcdf, type NetcdfLayer, netcdfSystem } from "./layer.ts";
import { tabled, unpacker } from "./packing.ts";
import { timePeriods } from "./periods.ts";
import type { Box } from "./walk.ts";

/** A NetCDF file as a stack of dated images. */
export interface NetcdfStack {
  readonly layer: NetcdfLayer;
  readonly system: System;
  readonly periods: readonly ImagePeriod[];
  readonly findings: readonly RawFinding[];
  readonly methods: CellMethods | undefined;
}

/** Settles variable, grid, system and dates of an open file. Throws InputErrors named `layers.…`. */
export function netcdfStack(dataset: Dataset, options: LayerOptions, name: string): NetcdfStack {
  const layer = describeNetcdf(dataset, options);
  const system = netcdfSystem(layer, options.system);
  checkFit(layer.grid, system, dataset.path);
  const { periods, findings } = periodsIn(layer, options, name);
  const text = textOf(layer.variable.attributes, "cell_methods");
  const time = layer.t < 0 ? "time" : layer.axes[layer.t].dimension;
  const kind = kindFinding(name, dataset.path, text, time, options.kind);
  const lost = lostBounds(dataset, layer.axes);
  return {
    layer,
    system,
    periods,
    findings: [
      ...findings,
      ...(kind === undefined ? [] : [kind]),
      ...(lost.length === 0 ? [] : [lostFinding(name, dataset.path, lost)]),
    ],
    methods: text === undefined ? undefined : { path: dataset.path, text, time },
  };
}

function lostFinding(layer: string, path: string, lost: readonly string[]): RawFinding {
  return {
    kind: "layer-bounds",
    subject: layer,
    message: `the file names bounds of ${lost.join(" and ")} that it does not hold; cells are taken to lie round their coordinates`,
    where: { file: path },
    value: lost.join(", "),
    remedy: "check that coordinates are the cells' middles, or use the file it was cut out of",
  };
}

function periodsIn(
  layer: NetcdfLayer,
  options: LayerOptions,
  name: string,
): { readonly periods: readonly ImagePeriod[]; readonly findings: readonly RawFinding[] } {
  const { dataset, axes, t, images } = layer;
  const time = t < 0 ? undefined : axes[t].coordinate;
  if ("axis" in options.date && time !== undefined) return timePeriods(dataset, time, options.covers, name);
  // Dated by name, or by first and step: as GeoTIFF files with a band a step.
  return { periods: periodsOf(dataset.path, new Array<string>(images).fill(""), options), findings: [] };
}

/** What the footprints of places depend on beside the places. */
export function layoutKey({ layer, system }: NetcdfStack): string {
  const { variable, grid, x, y } = layer;
  return JSON.stringify([grid, system.definition, variable.chunks?.[x], variable.chunks?.[y], variable.type]);
}

/** Values, valid shares and shares refused by quality, [image × places + place]. */
export function readStack(
  { layer, periods }: NetcdfStack,
  options: LayerOptions,
  footprints: readonly Footprint[],
  boxes: readonly Box[],
  active: ActiveImages,
  quality: ((image: number) => PixelTest) | undefined,
) {
  const bands = periods.map((one) => one.band);
  const cells = footprints.reduce((sum, one) => sum + one.columns.length, 0);
  const unpack = tabled(unpacker(layer.variable, options), layer.variable.type, cells * bands.length);
  return gatherNetcdf(layer, unpack, bands, boxes, footprints, active, quality);
}
