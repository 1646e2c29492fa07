import type { Files } from "../effects/effects.ts";
import { CoveyError } from "../errors.ts";
import { stemOf } from "../layers/dates.ts";
import { describeLayer, type Layer } from "../layers/layer.ts";
import { boundsOf } from "../layers/overview.ts";
import { scanBand } from "../layers/scan.ts";
import { findSideFiles, sideList } from "../layers/side.ts";
import { resolveSystem, type System } from "../layers/system.ts";
import { valueRule } from "../layers/values.ts";
import { groundSize } from "./ground-size.ts";
import { guessDates } from "./layer-dates.ts";
import { guessSpacing } from "./layer-spacing.ts";
import { guessPattern, layerStanza } from "./layer-stanza.ts";
import { Tally } from "./tally.ts";

/** What one band says and holds. */
export interface BandLook {
  readonly description: string;
  readonly unit: string;
  readonly scale: number;
  readonly offset: number;
  /** NaN if none. */
  readonly nodata: number;
  readonly missingShare: number;
  /** After scale and offset; NaN if nothing is valid. */
  readonly least: number;
  readonly mean: number;
  readonly greatest: number;
}

export interface LayerLook {
  readonly path: string;
  readonly bytes: number;
  readonly width: number;
  readonly height: number;
  readonly type: string;
  readonly compression: string;
  readonly layout: string;
  readonly bandCount: number;
  /** The first twelve. */
  readonly bands: readonly BandLook[];
  /** The system's name, or why it is not known. */
  readonly system: string;
  readonly systemKnown: boolean;
  readonly systemFrom: string;
  /** Width and height of the middle pixel on the ground, in metres; NaN if the system is not known. */
  readonly pixelMetres: readonly [number, number];
  /** West, south, east, north in degrees; NaN if the system is not known. */
  readonly bounds: readonly [number, number, number, number];
  readonly nodataText: string | undefined;
  readonly mask: "none" | "within the file" | "beside the file";
  readonly reducedImages: number;
  readonly beside: readonly string[];
  /** What each band seems to stand for, from the file's name or the bands' descriptions; empty if neither tells. */
  readonly dates: readonly string[];
  /** YAML to paste into a pipeline file. */
  readonly stanza: string;
}

/** Bands whose values are gone through; more would make a look long. */
const MOST_BANDS = 12;

/**
 * Looks at one GeoTIFF: its layout, where it lies, what is missing and the range of its values. An unknown system is
 * told, not thrown, since telling is what a look is for.
 */
export async function lookLayer(path: string, files: Files): Promise<LayerLook> {
  const side = (await findSideFiles([path], files))(path);
  const file = files.open(path);
  try {
    const layer = await describeLayer(file, files, side);
    const { image } = layer;
    const settled = trySystem(layer);
    const system = typeof settled === "string" ? undefined : settled;
    const bands: BandLook[] = [];
    for (let band = 0; band < Math.min(image.bands, MOST_BANDS); band++) {
      const tally = new Tally();
      const rule = valueRule(layer, band, {});
      await scanBand(file, files, layer, image, band, rule, (_column, _row, value) => tally.add(value));
      const { description, unit, scale, offset } = layer.bands[band];
      const nodata = layer.nodata[band] ?? Number.NaN;
      bands.push({ description, unit, scale, offset, nodata, ...tally.result() });
    }
    const spacing = guessSpacing(await files.list(likeNamed(path)));
    const where =
      layer.mask === undefined ? "none" : layer.mask.path === path ? "within the file" : "beside the file";
    return {
      path,
      bytes: file.size,
      width: image.width,
      height: image.height,
      type: image.type,
      compression: image.compression,
      layout: `${image.tiled ? "tiles" : "strips"} of ${image.blockWidth} × ${image.blockHeight}`,
      bandCount: image.bands,
      bands,
      system: system?.label ?? String(settled),
      systemKnown: system !== undefined,
      systemFrom: system?.from ?? "nowhere",
      pixelMetres: system === undefined ? [Number.NaN, Number.NaN] : groundSize(layer.grid, system),
      bounds:
        system === undefined ? [Number.NaN, Number.NaN, Number.NaN, Number.NaN] : boundsOf(layer, system),
      nodataText: layer.nodataText,
      mask: where,
      reducedImages: layer.overviews.length,
      beside: sideList(side),
      dates: guessDates(
        path,
        layer.bands.map((band) => band.description),
        spacing,
      ),
      stanza: layerStanza(
        path,
        layer.bands.map((band) => band.description),
        layer.bands[0].unit,
        system !== undefined,
        spacing,
      ),
    };
  } finally {
    file.close();
  }
}

/** Files of the folder whose names differ from this one's in their date alone. */
function likeNamed(path: string): readonly string[] {
  const stem = stemOf(path);
  const glob = guessPattern(stem)?.glob;
  const at = path.lastIndexOf("/") + 1;
  return glob === undefined ? [] : [path.slice(0, at) + glob + path.slice(at + stem.length)];
}

/** The system, or in words why there is none. */
function trySystem(layer: Layer): System | string {
  try {
    return resolveSystem({ path: layer.path, user: undefined, keys: layer.keys, wkt: layer.wkt });
  } catch (error) {
    if (error instanceof CoveyError) return `unknown (${error.facts.found})`;
    throw error;
  }
}
