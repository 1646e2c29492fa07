import type { Footprint } from "../area.ts";
import { neededBlocks } from "../blocks.ts";
import { TYPE_BYTES } from "./dataset.ts";
import type { NetcdfLayer } from "./layer.ts";

/** The cells of one place within a box. */
export interface BoxPart {
  readonly place: number;
  /** Row-major within the box. */
  readonly offsets: Int32Array;
  readonly weights: Float64Array;
}

/** A rectangle of cells that is read in one piece for every image. */
export interface Box {
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
  readonly parts: readonly BoxPart[];
}

/** Bytes that a piece of a file without chunks may span. */
const BAND_BYTES = 256 * 1024;
/** Cells between two in one row that are read along rather than apart. */
const GAP = 1024;

/**
 * The boxes that hold every cell the places need. In a chunked variable there is one for each chunk of the map, cut to
 * the cells needed, so that each chunk is unpacked once for all places. Elsewhere cells that lie close share one.
 */
export function boxesOf(footprints: readonly Footprint[], layer: NetcdfLayer): readonly Box[] {
  const { variable, x, y, grid } = layer;
  const chunk = variable.chunks;
  const blockWidth = chunk?.[x] ?? grid.width;
  const rowBytes = grid.width * TYPE_BYTES[variable.type];
  const blockHeight = chunk?.[y] ?? Math.max(1, Math.floor(BAND_BYTES / rowBytes));
  const across = Math.ceil(grid.width / blockWidth);
  return neededBlocks(footprints, { blockWidth, blockHeight, across }).flatMap(({ column, row, parts }) => {
    const cells: Cells = { left: column * blockWidth, top: row * blockHeight, width: blockWidth, parts };
    const whole = cut(cells, parts, extentOf(cells));
    if (chunk !== undefined || isDense(whole)) return [whole];
    return rowRuns(cells);
  });
}

interface Cells {
  readonly left: number;
  readonly top: number;
  /** Cells in a row of the block, by which the offsets count. */
  readonly width: number;
  readonly parts: readonly BoxPart[];
}

interface Extent {
  readonly left: number;
  readonly right: number;
  readonly top: number;
  readonly bottom: number;
}

/** First and last column and row of a block's cells, within the block. */
function extentOf({ width, parts }: Cells): Extent {
  let [left, right, top, bottom] = [Number.POSITIVE_INFINITY, 0, Number.POSITIVE_INFINITY, 0];
  for (const { offsets } of parts)
    for (const offset of offsets) {
      const row = Math.floor(offset / width);
      const column = offset - row * width;
      if (column < left) left = column;
      if (column > right) right = column;
      if (row < top) top = row;
      if (row > bottom) bottom = row;
    }
  return { left, right, top, bottom };
}

/** A box of the cells within an extent, offsets counted anew. */
function cut(cells: Cells, parts: readonly BoxPart[], { left, right, top, bottom }: Extent): Box {
  const width = right - left + 1;
  const own = parts.flatMap(({ place, offsets, weights }): BoxPart[] => {
    const kept: number[] = [];
    for (let i = 0; i < offsets.length; i++) {
      const row = Math.floor(offsets[i] / cells.width);
      const column = offsets[i] - row * cells.width;
      if (row >= top && row <= bottom && column >= left && column <= right) kept.push(i);
    }
    if (kept.length === 0) return [];
    return [
      {
        place,
        offsets: Int32Array.from(kept, (i) => {
          const row = Math.floor(offsets[i] / cells.width);
          return (row - top) * width + (offsets[i] - row * cells.width - left);
        }),
        weights: Float64Array.from(kept, (i) => weights[i]),
      },
    ];
  });
  return { left: cells.left + left, top: cells.top + top, width, height: bottom - top + 1, parts: own };
}

/** True if at least a quarter of the box is needed, or it is small. */
function isDense({ width, height, parts }: Box): boolean {
  const area = width * height;
  if (area <= GAP) return true;
  return 4 * parts.reduce((sum, one) => sum + one.offsets.length, 0) >= area;
}

/** Boxes of one row each, over runs of cells that lie close. */
function rowRuns(cells: Cells): readonly Box[] {
  const sorted = Float64Array.from(cells.parts.flatMap((one) => Array.from(one.offsets))).sort();
  const out: Box[] = [];
  let first = 0;
  const rowOf = (i: number) => Math.floor(sorted[i] / cells.width);
  for (let i = 1; i <= sorted.length; i++) {
    if (i < sorted.length && rowOf(i) === rowOf(first) && sorted[i] - sorted[i - 1] <= GAP) continue;
    const row = rowOf(first);
    const extent = {
      left: sorted[first] - row * cells.width,
      right: sorted[i - 1] - row * cells.width,
      top: row,
      bottom: row,
    };
    out.push(cut(cells, cells.parts, extent));
    first = i;
  }
  return out;
}
