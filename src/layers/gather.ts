import type { Files, RandomAccess } from "../effects/effects.ts";
import type { Footprint } from "./area.ts";
import type { BlockPart, NeededBlock } from "./blocks.ts";
import { type Pixels, readPixels, samplesPerPixel } from "./image.ts";
import type { Layer } from "./layer.ts";
import { type MaskReader, maskReader } from "./mask.ts";
import type { PixelTest } from "./quality.ts";
import type { Gathered } from "./readings.ts";
import { BLOCKS_PER_TURN, turn } from "./turn.ts";
import { readyFor } from "./unpack.ts";
import { unpacked, type ValueRule } from "./values.ts";

/**
 * Reads each needed block once and forms, for every band and place, Σ w v / Σ w over the valid pixels and the valid
 * share Σ w / total. NaN and 0 where nothing is valid. `quality`, image by image, refuses pixels; the share it refused of
 * those with values is counted.
 */
export async function gather(
  file: RandomAccess,
  files: Files,
  layer: Layer,
  bands: readonly { readonly band: number; readonly rule: ValueRule }[],
  blocks: readonly NeededBlock[],
  footprints: readonly Footprint[],
  quality?: (image: number) => PixelTest,
): Promise<Gathered> {
  const { image } = layer;
  await readyFor(image.compression);
  const places = footprints.length;
  const sums = new Float64Array(bands.length * places);
  const weights = new Float64Array(bands.length * places);
  const bases = new Float64Array(bands.length * places).fill(Number.NaN);
  const refused = new Float64Array(bands.length * places);
  const maskFile =
    layer.mask === undefined || layer.mask.path === layer.path ? file : files.open(layer.mask.path);
  try {
    if (layer.mask !== undefined) await readyFor(layer.mask.image.compression);
    const mask = layer.mask === undefined ? undefined : maskReader(maskFile, layer.mask.image);
    const step = samplesPerPixel(image);
    for (const [done, block] of blocks.entries()) {
      if (done % BLOCKS_PER_TURN === BLOCKS_PER_TURN - 1) await turn();
      let pixels: Pixels | undefined;
      for (let i = 0; i < bands.length; i++) {
        const { band, rule } = bands[i];
        if (i === 0 || image.planar)
          pixels = readPixels(file, image, block.column, block.row, band, block.span);
        if (pixels === undefined) continue;
        const shift = image.planar ? 0 : band;
        for (const part of block.parts) {
          const at = i * places + part.place;
          const masked =
            mask === undefined
              ? undefined
              : maskOfBlock(mask, block, image.blockWidth, image.blockHeight, band);
          const test = quality === undefined ? undefined : testOfBlock(quality(i), block, image);
          const added = addUp(pixels, step, shift, part, rule, masked, test, bases[at]);
          bases[at] = added.base;
          sums[at] += added.sum;
          weights[at] += added.weight;
          refused[at] += added.refused;
        }
      }
    }
  } finally {
    if (maskFile !== file) maskFile.close();
  }
  const share = (weight: number, i: number) => Math.min(1, weight / footprints[i % places].total);
  return {
    values: sums.map((sum, i) => (weights[i] > 0 ? bases[i] + sum / weights[i] : Number.NaN)),
    shares: weights.map(share),
    refused: refused.map(share),
  };
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

function testOfBlock(test: PixelTest, block: NeededBlock, image: Layer["image"]): BlockMask {
  const [left, top] = [block.column * image.blockWidth, block.row * image.blockHeight];
  return (offset) => test(left + (offset % image.blockWidth), top + Math.floor(offset / image.blockWidth));
}

/**
 * Σ w (v − base) and Σ w over the valid pixels of a part. The base is the first valid value of the place, so that a
 * constant layer gives its constant, a single pixel its value, and large offsets cost no digits.
 */
function addUp(
  { samples, from }: Pixels,
  step: number,
  shift: number,
  { offsets, weights }: BlockPart,
  rule: ValueRule,
  masked: BlockMask | undefined,
  test: BlockMask | undefined,
  known: number,
): { readonly sum: number; readonly weight: number; readonly refused: number; readonly base: number } {
  let sum = 0;
  let weight = 0;
  let refused = 0;
  let base = known;
  for (let i = 0; i < offsets.length; i++) {
    const value = unpacked(samples[(offsets[i] - from) * step + shift], rule);
    if (Number.isNaN(value) || (masked !== undefined && !masked(offsets[i]))) continue;
    if (test !== undefined && !test(offsets[i])) {
      refused += weights[i];
      continue;
    }
    if (Number.isNaN(base)) base = value;
    sum += weights[i] * (value - base);
    weight += weights[i];
  }
  return { sum, weight, refused, base };
}
