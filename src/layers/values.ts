import type { Layer } from "./layer.ts";
import type { LayerOptions } from "./options.ts";

/** How raw samples of one band become values. */
export interface ValueRule {
  readonly scale: number;
  readonly offset: number;
  /** Raw values that mean missing; NaN where there is none. */
  readonly nodata: number;
  readonly fill: number;
  readonly least: number;
  readonly greatest: number;
}

/** Nodata and fill are of raw samples; the valid range is of values after scale and offset. */
export function valueRule(
  layer: Layer,
  band: number,
  options: Pick<LayerOptions, "scale" | "offset" | "fill" | "valid">,
): ValueRule {
  const stored = layer.image.type === "float32" ? Math.fround : (value: number) => value;
  return {
    scale: options.scale ?? layer.bands[band].scale,
    offset: options.offset ?? layer.bands[band].offset,
    nodata: layer.nodata[band] ?? Number.NaN,
    fill: options.fill === undefined ? Number.NaN : stored(options.fill),
    least: options.valid?.[0] ?? Number.NEGATIVE_INFINITY,
    greatest: options.valid?.[1] ?? Number.POSITIVE_INFINITY,
  };
}

/** raw × scale + offset, or NaN if the sample is missing, not finite or out of the valid range. */
export function unpacked(raw: number, rule: ValueRule): number {
  if (raw === rule.nodata || raw === rule.fill) return Number.NaN;
  const value = raw * rule.scale + rule.offset;
  // Infinities are no measurements, whatever the file says of nodata.
  return value >= rule.least && value <= rule.greatest && Number.isFinite(value) ? value : Number.NaN;
}
