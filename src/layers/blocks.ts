import type { Footprint } from "./area.ts";
import type { Image } from "./image.ts";

/** The pixels of one block that one place takes. */
export interface BlockPart {
  /** Index of the place among those wanted. */
  readonly place: number;
  /** Pixels within the block, row-major over its full width. */
  readonly offsets: Int32Array;
  readonly weights: Float64Array;
}

/** One block that some place needs. */
export interface NeededBlock {
  readonly column: number;
  readonly row: number;
  /** First and last pixel that is needed, within the block. */
  readonly span: readonly [number, number];
  readonly parts: readonly BlockPart[];
}

/** Sorts the pixels of all places by the block that holds them, so that each block is read once for all. */
export function neededBlocks(
  footprints: readonly Footprint[],
  image: Pick<Image, "blockWidth" | "blockHeight" | "across">,
): readonly NeededBlock[] {
  const { blockWidth, blockHeight, across } = image;
  const blocks = new Map<
    number,
    { readonly column: number; readonly row: number; readonly parts: BlockPart[] }
  >();
  footprints.forEach(({ columns, rows, weights }, place) => {
    const blockOf = (i: number) =>
      Math.floor(rows[i] / blockHeight) * across + Math.floor(columns[i] / blockWidth);
    const counts = new Map<number, number>();
    for (let i = 0; i < columns.length; i++) counts.set(blockOf(i), (counts.get(blockOf(i)) ?? 0) + 1);
    const parts = new Map<number, BlockPart & { filled: number }>();
    for (const [block, count] of counts) {
      const part = { place, offsets: new Int32Array(count), weights: new Float64Array(count), filled: 0 };
      parts.set(block, part);
      const column = block % across;
      const held = blocks.get(block) ?? { column, row: (block - column) / across, parts: [] };
      held.parts.push(part);
      blocks.set(block, held);
    }
    for (let i = 0; i < columns.length; i++) {
      const part = parts.get(blockOf(i));
      if (part === undefined) continue;
      part.offsets[part.filled] = (rows[i] % blockHeight) * blockWidth + (columns[i] % blockWidth);
      part.weights[part.filled++] = weights[i];
    }
  });
  // In the order they stand in the file's tables, which is that of the file in most.
  return [...blocks.entries()]
    .sort(([a], [b]) => a - b)
    .map(([, block]) => ({ ...block, span: spanOf(block.parts) }));
}

/** Bounds of all offsets; places that cross the antimeridian may have theirs out of order. */
function spanOf(parts: readonly BlockPart[]): readonly [number, number] {
  let first = Number.POSITIVE_INFINITY;
  let last = 0;
  for (const { offsets } of parts)
    for (const offset of offsets) {
      if (offset < first) first = offset;
      if (offset > last) last = offset;
    }
  return [first, last];
}
