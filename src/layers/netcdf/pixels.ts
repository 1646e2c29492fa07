import type { Samples } from "../samples.ts";
import { TYPE_BYTES } from "./dataset.ts";
import { placesOfSamples, readBox } from "./gather.ts";
import type { NetcdfLayer } from "./layer.ts";
import { packingOf } from "./packing.ts";

/** Bytes of samples that are held at once, and that a piece without chunks spans. */
const HELD = 64 * 2 ** 20;
const PIECE = 2 ** 20;

interface Piece {
  readonly samples: Samples;
  readonly cell: (offset: number) => number;
  readonly perImage: number;
  readonly first: number;
  readonly width: number;
}

/**
 * Raw numbers of a variable cell by cell, chunk after chunk (or bands of rows where there are none); the pieces read
 * last are held. NaN where the file says a number is missing; signed numbers that stand for unsigned are turned.
 */
export function pixelsOf(layer: NetcdfLayer): (image: number, column: number, row: number) => number {
  const { variable, x, y, t, grid, images } = layer;
  const size = TYPE_BYTES[variable.type];
  const width = variable.chunks?.[x] ?? grid.width;
  const height = variable.chunks?.[y] ?? Math.max(1, Math.floor(PIECE / (grid.width * size)));
  const long = t < 0 ? 1 : (variable.chunks?.[t] ?? 1);
  const across = Math.ceil(grid.width / width);
  const down = Math.ceil(grid.height / height);
  const most = Math.max(1, Math.floor(HELD / (width * height * long * size)));
  const pieces = new Map<number, Piece>();
  const { missing, wrap } = packingOf(variable);
  const pieceAt = (i: number, j: number, k: number): Piece => {
    const key = (k * down + j) * across + i;
    const held = pieces.get(key);
    if (held !== undefined) return held;
    const box = {
      left: i * width,
      top: j * height,
      width: Math.min(width, grid.width - i * width),
      height: Math.min(height, grid.height - j * height),
    };
    const count = Math.min(long, images - k * long);
    const samples = readBox(layer, box, k * long, count);
    const piece = { samples, ...placesOfSamples(layer, box, count), first: k * long, width: box.width };
    if (pieces.size >= most) {
      const [oldest] = pieces.keys();
      pieces.delete(oldest);
    }
    pieces.set(key, piece);
    return piece;
  };
  return (image, column, row) => {
    const [i, j, k] = [Math.floor(column / width), Math.floor(row / height), Math.floor(image / long)];
    const piece = pieceAt(i, j, k);
    const offset = (row - j * height) * piece.width + (column - i * width);
    const sample = piece.samples[piece.cell(offset) + (image - piece.first) * piece.perImage];
    const raw = sample < 0 && wrap > 0 ? sample + wrap : sample;
    return missing.includes(raw) ? Number.NaN : raw;
  };
}
