import type { RandomAccess } from "../effects/effects.ts";
import { type Image, readBlock, samplesPerPixel } from "./image.ts";
import type { Samples } from "./samples.ts";

/** True where a pixel of a band counts as there. */
export type MaskReader = (column: number, row: number, band: number) => boolean;

/** Reads a mask image pixel by pixel, each of its blocks once. A block never written masks everything. */
export function maskReader(file: RandomAccess, mask: Image): MaskReader {
  const blocks = new Map<number, Samples | undefined>();
  const step = samplesPerPixel(mask);
  return (column, row, band) => {
    const own = Math.min(band, mask.bands - 1);
    const [bc, br] = [Math.floor(column / mask.blockWidth), Math.floor(row / mask.blockHeight)];
    const key = ((mask.planar ? own : 0) * mask.down + br) * mask.across + bc;
    if (!blocks.has(key)) blocks.set(key, readBlock(file, mask, bc, br, own));
    const at = (row % mask.blockHeight) * mask.blockWidth + (column % mask.blockWidth);
    return (blocks.get(key)?.[at * step + (mask.planar ? 0 : own)] ?? 0) !== 0;
  };
}
