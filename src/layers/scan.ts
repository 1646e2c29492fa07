import type { Files, RandomAccess } from "../effects/effects.ts";
import { blockRows, type Image, readBlock, samplesPerPixel } from "./image.ts";
import type { Layer } from "./layer.ts";
import { maskReader } from "./mask.ts";
import { BLOCKS_PER_TURN, turn } from "./turn.ts";
import { readyFor } from "./unpack.ts";
import { unpacked, type ValueRule } from "./values.ts";

/**
 * Visits every pixel of one band, block after block, with its value (NaN if missing). `image` is the layer's own or
 * one of its reduced images; a mask is looked at only with the full image, whose pixels it is of.
 */
export async function scanBand(
  file: RandomAccess,
  files: Files,
  layer: Layer,
  image: Image,
  band: number,
  rule: ValueRule,
  visit: (column: number, row: number, value: number) => void,
): Promise<void> {
  await readyFor(image.compression);
  const mask = image === layer.image ? layer.mask : undefined;
  const maskFile = mask === undefined || mask.path === layer.path ? file : files.open(mask.path);
  try {
    if (mask !== undefined) await readyFor(mask.image.compression);
    const shown = mask === undefined ? () => true : maskReader(maskFile, mask.image);
    const step = samplesPerPixel(image);
    const shift = image.planar ? 0 : band;
    let done = 0;
    for (let blockRow = 0; blockRow < image.down; blockRow++)
      for (let blockColumn = 0; blockColumn < image.across; blockColumn++) {
        if (++done % BLOCKS_PER_TURN === 0) await turn();
        const samples = readBlock(file, image, blockColumn, blockRow, band);
        const [left, top] = [blockColumn * image.blockWidth, blockRow * image.blockHeight];
        const rows = Math.min(blockRows(image, blockRow), image.height - top);
        const columns = Math.min(image.blockWidth, image.width - left);
        for (let r = 0; r < rows; r++)
          for (let c = 0; c < columns; c++) {
            const raw =
              samples === undefined ? Number.NaN : samples[(r * image.blockWidth + c) * step + shift];
            const value = unpacked(raw, rule);
            visit(left + c, top + r, shown(left + c, top + r, band) ? value : Number.NaN);
          }
      }
  } finally {
    if (maskFile !== file) maskFile.close();
  }
}
