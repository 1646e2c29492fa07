import type { Files, RandomAccess } from "../effects/effects.ts";
import type { Footprint } from "./area.ts";
import type { NeededBlock } from "./blocks.ts";
import { readBlock, samplesPerPixel } from "./image.ts";
import type { Layer } from "./layer.ts";
import { type MaskReader, maskReader } from "./mask.ts";
import type { Samples } from "./samples.ts";
import { readyFor } from "./unpack.ts";
import { unpacked, type ValueRule } from "./values.ts";

/** Means and valid shares, image by image and place by place: [image × places + place]. */
export interface Gathered {
  readonly values: Float64Array;
  readonly shares: Float64Array;
}

/**
 * Reads each needed block once and forms, for every band and place, Σ w v / Σ w over the valid pixels and the valid
 * share Σ w / total. NaN and 0 where nothing is valid.
 */
export async function gather(
  file: RandomAccess,
  files: Files,
  layer: Layer,
  bands: readonly { readonly band: number; readonly rule: ValueRule }[],
  blocks: readonly NeededBlock[],
  footprints: readonly Footprint[],
): Promise<Gathered> {
  const { image } = layer;
  await readyFor(image.compression);
  const places = footprints.length;
  const sums = new Float64Array(bands.length * places);
  const weights = new Float64Array(bands.length * places);
  const maskFile =
    layer.mask === undefined || layer.mask.path === layer.path ? file : files.open(layer.mask.path);
  try {
    if (layer.mask !== undefined) await readyFor(layer.mask.image.compression);
    const mask = layer.mask === undefined ? undefined : maskReader(maskFile, layer.mask.image);
    const step = samplesPerPixel(image);
    for (const block of blocks) {
      let samples: Samples | undefined;
      for (let i = 0; i < bands.length; i++) {
        const { band, rule } = bands[i];
        if (i === 0 || image.planar) samples = readBlock(file, image, block.column, block.row, band);
        if (samples === undefined) continue;
        const shift = image.planar ? 0 : band;
        for (const part of block.parts) {
          const at = i * places + part.place;
          const masked =
            mask === undefined
              ? undefined
              : maskOfBlock(mask, block, image.blockWidth, image.blockHeight, band);
          const added = addUp(samples, step, shift, part.offsets, part.weights, rule, masked);
          sums[at] += added.sum;
          weights[at] += added.weight;
        }
      }
    }
  } finally {
    if (maskFile !== file) maskFile.close();
  }
  const shares = weights.map((weight, i) => Math.min(1, weight / footprints[i % places].total));
  return { values: sums.map((sum, i) => (weights[i] > 0 ? sum / weights[i] : Number.NaN)), shares };
}

type BlockMask = (offset: number) => boolean;

function maskOfBlock(
  mask: MaskReader,
  block: NeededBlock,
  blockWidth: number,
  blockHeight: number,
  band: number,
): BlockMask {
  const [left, top] = [block.column * blockWidth, block.row * blockHeight];
  return (offset) => mask(left + (offset % blockWidth), top + Math.floor(offset / blockWidth), band);
}

function addUp(
  samples: Samples,
  step: number,
  shift: number,
  offsets: Int32Array,
  weights: Float64Array,
  rule: ValueRule,
  masked: BlockMask | undefined,
): { sum: number; weight: number } {
  let sum = 0;
  let weight = 0;
  for (let i = 0; i < offsets.length; i++) {
    const value = unpacked(samples[offsets[i] * step + shift], rule);
    if (Number.isNaN(value) || (masked !== undefined && !masked(offsets[i]))) continue;
    // A single pixel's value passes through unchanged: v · 1 / 1.
    sum += weights[i] * value;
    weight += weights[i];
  }
  return { sum, weight };
}
