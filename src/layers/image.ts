import type { RandomAccess } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { brokenFile, type Directory, readChecked } from "./ifd.ts";
import { undoDifferences, undoFloatPlanes } from "./predictor.ts";
import { reusedMemory } from "./reused-memory.ts";
import { HOST_LITTLE, SAMPLE_BYTES, type Samples, type SampleType, samplesOf, swapBytes } from "./samples.ts";
import { type BlockShape, type Compression, compressionOf, unpack } from "./unpack.ts";

/** One image of a TIFF file: how its samples are laid out, before any georeference. */
export interface Image {
  readonly path: string;
  readonly littleEndian: boolean;
  readonly width: number;
  readonly height: number;
  readonly bands: number;
  readonly type: SampleType;
  /** One bit per sample, as in masks; read as 0 and 1. */
  readonly oneBit: boolean;
  readonly compression: Compression;
  readonly predictor: 1 | 2 | 3;
  /** Each block holds one band, not all of them. */
  readonly planar: boolean;
  readonly tiled: boolean;
  readonly blockWidth: number;
  readonly blockHeight: number;
  readonly across: number;
  readonly down: number;
  readonly offsets: Float64Array;
  readonly counts: Float64Array;
  readonly lercAdded: number;
}

/** Blocks larger than this are refused: one block is unpacked at a time, and a lying header must not take the memory. */
const MOST_BLOCK_BYTES = 2 ** 28;

/** Packed blocks: no way of unpacking keeps or hands on what it is given. */
const packedMemory = reusedMemory();
const unpackedMemory = reusedMemory();
const ownMemory = (length: number) => new Uint8Array(length);

const FORMATS: Readonly<Record<number, string>> = {
  1: "uint",
  2: "int",
  3: "float",
  4: "uint",
  5: "complex int",
  6: "complex float",
};

/** Reads the layout of one directory. Throws `layers.unsupported-…` and `layers.broken-file`. */
export function describeImage(directory: Directory, littleEndian: boolean, path: string): Image {
  const width = directory.number(256, 0);
  const height = directory.number(257, 0);
  const bands = directory.number(277, 1);
  if (!(width >= 1 && height >= 1 && bands >= 1 && width < 2 ** 31 && height < 2 ** 31))
    throw brokenFile(path, `an image of ${width} × ${height} pixels and ${bands} bands`);
  const { type, oneBit } = sampleType(directory, bands, path);
  const compression = compressionOf(directory.number(259, 1), path);
  const predictor = directory.number(317, 1);
  if (predictor !== 1 && predictor !== 2 && predictor !== 3)
    throw unsupported("predictor", "predictor 1, 2 or 3", `predictor ${predictor}`, path);
  if (predictor === 3 && !type.startsWith("float"))
    throw brokenFile(path, `the floating-point predictor on ${type} samples`);
  if (directory.number(266, 1) !== 1)
    throw unsupported("bit-order", "fill order 1", `fill order ${directory.number(266, 1)}`, path);
  const planarTag = directory.number(284, 1);
  if (planarTag !== 1 && planarTag !== 2) throw brokenFile(path, `planar configuration ${planarTag}`);
  const planar = planarTag === 2 && bands > 1;
  const tiled = directory.has(322) || directory.has(324);
  const blockWidth = tiled ? directory.number(322, 0) : width;
  const blockHeight = tiled ? directory.number(323, 0) : Math.min(directory.number(278, height), height);
  if (!(blockWidth >= 1 && blockHeight >= 1))
    throw brokenFile(path, `blocks of ${blockWidth} × ${blockHeight} pixels`);
  const across = Math.ceil(width / blockWidth);
  const down = Math.ceil(height / blockHeight);
  const blocks = across * down * (planar ? bands : 1);
  const offsets = directory.numbers(tiled ? 324 : 273);
  const counts = directory.numbers(tiled ? 325 : 279);
  if (offsets === undefined || counts === undefined)
    throw brokenFile(path, `no ${offsets === undefined ? "places" : "sizes"} of its blocks`);
  if (offsets.length < blocks || counts.length < blocks)
    throw brokenFile(
      path,
      `an image of ${width} × ${height} pixels in ${blocks} blocks with the places of ${Math.min(offsets.length, counts.length)}`,
    );
  const image: Image = {
    path,
    littleEndian,
    width,
    height,
    bands,
    type,
    oneBit,
    compression,
    predictor,
    planar,
    tiled,
    blockWidth,
    blockHeight,
    across,
    down,
    offsets,
    counts,
    lercAdded: compression === "LERC" ? (directory.numbers(50674)?.[1] ?? 0) : 0,
  };
  const bytes = rowBytes(image) * blockHeight;
  if (bytes > MOST_BLOCK_BYTES)
    throw unsupported(
      "block-size",
      `blocks (tiles or strips) of at most ${MOST_BLOCK_BYTES / 2 ** 20} MiB`,
      `blocks of ${blockWidth} × ${blockHeight} pixels, ${Math.round(bytes / 2 ** 20)} MiB`,
      path,
    );
  return image;
}

function sampleType(
  directory: Directory,
  bands: number,
  path: string,
): { type: SampleType; oneBit: boolean } {
  const bits = directory.numbers(258) ?? Float64Array.of(1);
  const formats = directory.numbers(339) ?? Float64Array.of(1);
  const [bit, format] = [bits[0], formats[0]];
  if (
    bits.slice(0, bands).some((one) => one !== bit) ||
    formats.slice(0, bands).some((one) => one !== format)
  )
    throw unsupported("type", "bands of one sample type", "bands of different types", path);
  const found = `${FORMATS[format] ?? `format ${format}`}${bit}`;
  if (found === "uint1") return { type: "uint8", oneBit: true };
  if (!(found in SAMPLE_BYTES))
    throw unsupported(
      "type",
      `samples of ${Object.keys(SAMPLE_BYTES).join(", ")}`,
      `samples of ${found}`,
      path,
    );
  // `in` has just told that it is one of the keys.
  return { type: found as SampleType, oneBit: false };
}

/** Samples side by side in one block: all bands, or one. */
export function samplesPerPixel(image: Image): number {
  return image.planar ? 1 : image.bands;
}

function rowBytes(image: Image): number {
  const values = image.blockWidth * samplesPerPixel(image);
  return image.oneBit ? Math.ceil(values / 8) : values * SAMPLE_BYTES[image.type];
}

/** Rows of the image that a block holds; only the last strip is short, tiles are always whole. */
export function blockRows(image: Image, blockRow: number): number {
  return image.tiled
    ? image.blockHeight
    : Math.min(image.blockHeight, image.height - blockRow * image.blockHeight);
}

/**
 * Reads and unpacks one block: row-major samples, `blockWidth` × `blockRows` × samplesPerPixel. `undefined` for a
 * block that was never written (offset and size 0), which stands for missing values. Band counts from 0 and matters
 * only where bands are kept apart.
 */
export function readBlock(
  file: RandomAccess,
  image: Image,
  blockColumn: number,
  blockRow: number,
  band: number,
): Samples | undefined {
  const rows: Rows = [0, blockRows(image, blockRow) - 1];
  return readRows(file, image, blockColumn, blockRow, band, rows, ownMemory)?.samples;
}

/** Pixels of a block from pixel `from` on. */
export interface Pixels {
  readonly samples: Samples;
  readonly from: number;
}

/**
 * The pixels `first` to `last` (both included, row-major within the block) at least. Uncompressed samples are read
 * from where they stand; of all others the block is unpacked as far as needed and the predictor undone in the rows
 * that hold them. The block must be whole in the file either way. They are gone with the next call.
 */
export function readPixels(
  file: RandomAccess,
  image: Image,
  blockColumn: number,
  blockRow: number,
  band: number,
  [first, last]: readonly [number, number],
): Pixels | undefined {
  if (image.compression !== "none" || image.predictor !== 1 || image.oneBit) {
    const rowOf = (pixel: number) => Math.floor(pixel / image.blockWidth);
    const rows: Rows = [rowOf(first), rowOf(last)];
    return readRows(file, image, blockColumn, blockRow, band, rows, unpackedMemory);
  }
  const { index, offset, count } = blockPlace(image, blockColumn, blockRow, band);
  if (count === 0) return undefined;
  const least = rowBytes(image) * blockRows(image, blockRow);
  if (count < least || offset + count > file.size)
    throw brokenFile(
      image.path,
      `a block ${index} of ${count} bytes at ${offset} that should hold ${least}, in a file of ${file.size} bytes`,
    );
  const pixel = SAMPLE_BYTES[image.type] * samplesPerPixel(image);
  const bytes = readChecked(file, offset + first * pixel, (last - first + 1) * pixel, `block ${index}`);
  // A copy where bytes are turned: the reader may own what it handed out.
  const own = image.littleEndian === HOST_LITTLE ? bytes : new Uint8Array(bytes);
  return { samples: finish(image, own, own.length, samplesPerPixel(image)), from: first };
}

/** First and last row, both included. */
type Rows = readonly [number, number];

/** Some rows of a block. Predictors work row by row, so others need not be undone. */
function readRows(
  file: RandomAccess,
  image: Image,
  blockColumn: number,
  blockRow: number,
  band: number,
  [top, bottom]: Rows,
  memory: BlockShape["memory"],
): Pixels | undefined {
  const { index, offset, count } = blockPlace(image, blockColumn, blockRow, band);
  if (count === 0) return undefined;
  const rows = blockRows(image, blockRow);
  const row = rowBytes(image);
  const shape: BlockShape = {
    need: row * (bottom + 1),
    least: row * rows,
    most: row * image.blockHeight,
    columns: image.blockWidth,
    rows,
    samples: samplesPerPixel(image),
    type: image.type,
    lercAdded: image.lercAdded,
    memory,
  };
  // Checked before memory is asked for: a lying count may be of gigabytes.
  const into = offset + count <= file.size ? packedMemory(count) : undefined;
  const packed = readChecked(file, offset, count, `block ${index}`, into);
  const bytes = unpack(packed, image.compression, shape, image.path).subarray(row * top, shape.need);
  const samples = image.oneBit
    ? spreadBits(bytes, image.blockWidth * shape.samples, bottom - top + 1)
    : finish(image, bytes, row, shape.samples);
  return { samples, from: top * image.blockWidth };
}

/** Where a block stands in the file: its number, first byte and bytes (0: never written). */
export function blockPlace(image: Image, blockColumn: number, blockRow: number, band: number) {
  const plane = image.planar ? band * image.across * image.down : 0;
  const index = plane + blockRow * image.across + blockColumn;
  return { index, offset: image.offsets[index], count: image.counts[index] };
}

/** Byte order, then the predictor: differences are of values, so the bytes must be in order before they are summed. */
function finish(image: Image, packed: Uint8Array, row: number, step: number): Samples {
  const size = SAMPLE_BYTES[image.type];
  const bytes = packed.byteOffset % size === 0 ? packed : new Uint8Array(packed);
  // LERC too: libtiff turns the samples before it packs them, though LERC has an order of its own.
  const turned = image.littleEndian !== HOST_LITTLE;
  if (image.predictor === 3) undoFloatPlanes(bytes, row, size, step, HOST_LITTLE);
  else {
    if (turned && size > 1) swapBytes(bytes, size);
    if (image.predictor === 2) undoDifferences(bytes, row, size, step);
  }
  return samplesOf(bytes, image.type);
}

function spreadBits(bytes: Uint8Array, perRow: number, rows: number): Uint8Array {
  const out = new Uint8Array(perRow * rows);
  const row = Math.ceil(perRow / 8);
  for (let r = 0; r < rows; r++)
    for (let i = 0; i < perRow; i++) out[r * perRow + i] = (bytes[r * row + (i >> 3)] >> (7 - (i & 7))) & 1;
  return out;
}

function unsupported(what: string, expected: string, found: string, path: string): InputError {
  return new InputError({
    name: `layers.unsupported-${what}`,
    expected,
    found,
    where: { file: path },
    remedy:
      "write the layer again in a form that is read, e.g. gdal_translate -co COMPRESS=DEFLATE -co TILED=YES",
  });
}
