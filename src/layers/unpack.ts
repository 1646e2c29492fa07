import { inflateSync } from "node:zlib";
import Lerc from "lerc";
import { InputError } from "../errors.ts";
import { brokenFile } from "./ifd.ts";
import { unpackLzw } from "./lzw.ts";
import { unpackPackBits } from "./packbits.ts";
import { SAMPLE_BYTES, type SampleType } from "./samples.ts";
import { readyForZstandard, unpackZstandard } from "./zstandard.ts";

export type Compression = "none" | "deflate" | "LZW" | "PackBits" | "Zstandard" | "LERC";

/** Compression numbers of TIFF and its registered extensions. */
const BY_NUMBER: Readonly<Record<number, Compression>> = {
  1: "none",
  5: "LZW",
  8: "deflate",
  32773: "PackBits",
  32946: "deflate",
  34887: "LERC",
  50000: "Zstandard",
};

const OTHERS: Readonly<Record<number, string>> = {
  2: "CCITT",
  3: "CCITT fax 3",
  4: "CCITT fax 4",
  6: "old JPEG",
  7: "JPEG",
  34661: "JBIG",
  34712: "JPEG 2000",
  34925: "LZMA",
  50001: "WebP",
  50002: "JPEG XL",
  52546: "JPEG XL",
};

/**
 * The most a packed byte can stand for: deflate's longest match takes two bits for 258 bytes; an LZW string has at
 * most 3838 bytes and takes 12 bits. Other methods have no such bound that is of use.
 */
const MOST_PER_BYTE: Readonly<Partial<Record<Compression, number>>> = {
  none: 1,
  deflate: 1040,
  LZW: 2600,
  PackBits: 64.5,
};

export function compressionOf(number: number, path: string): Compression {
  const found = BY_NUMBER[number];
  if (found !== undefined) return found;
  throw new InputError({
    name: "layers.unsupported-compression",
    expected: `one of ${[...new Set(Object.values(BY_NUMBER))].join(", ")}`,
    found: `compression ${number}${OTHERS[number] === undefined ? "" : ` (${OTHERS[number]})`}`,
    where: { file: path },
    remedy: "write the layer again with deflate, e.g. gdal_translate -co COMPRESS=DEFLATE",
  });
}

/** What must be loaded before blocks of this compression can be unpacked. */
export async function readyFor(compression: Compression): Promise<void> {
  if (compression === "Zstandard" || compression === "LERC") await readyForZstandard();
}

export interface BlockShape {
  /** Bytes from the first on that are wanted; methods without a checksum stop once they have them. */
  readonly need: number;
  /** Bytes that the block must have, and that it may at most unpack to. */
  readonly least: number;
  readonly most: number;
  readonly columns: number;
  readonly rows: number;
  readonly samples: number;
  readonly type: SampleType;
  /** LERC's second compression: 0 none, 1 deflate, 2 Zstandard. */
  readonly lercAdded: number;
  /** Where bytes are unpacked to, by the methods that let one say so; what it holds does not matter. */
  readonly memory: (length: number) => Uint8Array;
}

/**
 * Unpacks one block, or at least its first `need` bytes, into `memory` or memory of its own, never into the packed bytes. Throws `layers.broken-file` where the
 * packed bytes are corrupt, end early or stand for more than the block can hold; nothing much larger than the block is
 * ever allocated. Deflate is always unpacked to its end, since its checksum stands there.
 */
export function unpack(
  packed: Uint8Array,
  compression: Compression,
  shape: BlockShape,
  path: string,
): Uint8Array {
  const bound = MOST_PER_BYTE[compression];
  if (bound !== undefined && packed.length * bound + 64 < shape.least)
    throw brokenFile(path, `a block of ${packed.length} packed bytes that should hold ${shape.least} bytes`);
  const bytes = unpackAny(packed, compression, shape, path);
  const least = stopsEarly(compression) ? shape.need : shape.least;
  if (bytes.length < least)
    throw brokenFile(path, `a ${compression} block that ends after ${bytes.length} of ${shape.least} bytes`);
  return bytes;
}

/** Methods without a checksum at their end, of which only what is needed is unpacked. */
function stopsEarly(compression: Compression): boolean {
  return compression === "LZW" || compression === "Zstandard" || compression === "PackBits";
}

function unpackAny(
  packed: Uint8Array,
  compression: Compression,
  shape: BlockShape,
  path: string,
): Uint8Array {
  switch (compression) {
    case "none":
      // A copy (Buffer's own slice would be none): later steps work in place and the reader may own its bytes.
      return copied(packed.subarray(0, shape.most), shape.memory);
    case "deflate":
      return inflate(packed, shape, path);
    case "Zstandard":
      return unpackZstandard(packed, shape.need, shape.most, path);
    case "PackBits": {
      const out = shape.memory(shape.need);
      return out.subarray(0, unpackPackBits(packed, out));
    }
    case "LZW": {
      const out = shape.memory(shape.need);
      // The first code is 256 in nine bits, so the first byte is 128; old files that begin with 0 and 1 have the
      // bits the other way round (TIFF 6.0 §13 does not allow it).
      if (packed.length > 1 && packed[0] === 0 && (packed[1] & 1) === 1)
        throw new InputError({
          name: "layers.unsupported-compression",
          expected: "LZW codes with the most significant bit first (TIFF 6.0)",
          found: "the old order of bits",
          where: { file: path },
          remedy: "write the layer again with deflate, e.g. gdal_translate -co COMPRESS=DEFLATE",
        });
      const written = unpackLzw(packed, out);
      if (written < 0) throw brokenFile(path, "an LZW block with an impossible code");
      return out.subarray(0, written);
    }
    case "LERC":
      return unpackLerc(packed, shape, path);
  }
}

function copied(bytes: Uint8Array, memory: BlockShape["memory"]): Uint8Array {
  const out = memory(bytes.length);
  out.set(bytes);
  return out;
}

function inflate(packed: Uint8Array, shape: BlockShape, path: string): Uint8Array {
  try {
    // Room for a little more than the block: where it is filled exactly, another piece of the same size is made.
    const out = inflateSync(packed, { maxOutputLength: shape.most, chunkSize: shape.most + 64 });
    // A plain array: Buffer's own slice would share its bytes where a copy is meant.
    return new Uint8Array(out.buffer, out.byteOffset, out.byteLength);
  } catch (error) {
    throw brokenFile(path, `a deflate block that cannot be unpacked (${(error as Error).message})`);
  }
}

function unpackLerc(packed: Uint8Array, shape: BlockShape, path: string): Uint8Array {
  // A LERC blob has a header and ranges beside its values; its bound is the block and some more.
  const room = { ...shape, most: shape.most * 2 + 65536 };
  const blob =
    shape.lercAdded === 1
      ? inflate(packed, room, path)
      : shape.lercAdded === 2
        ? unpackZstandard(packed, room.most, room.most, path)
        : packed;
  const view = new DataView(blob.buffer, blob.byteOffset, blob.byteLength);
  if (blob.length < 40 || String.fromCharCode(...blob.subarray(0, 6)) !== "Lerc2 ")
    throw brokenFile(path, "a LERC block without its header");
  const version = view.getInt32(6, true);
  const at = version >= 3 ? 14 : 10;
  const [rows, columns] = [view.getInt32(at, true), view.getInt32(at + 4, true)];
  const samples = version >= 4 ? view.getInt32(at + 8, true) : 1;
  // After the shape: valid pixels, micro-block size, then the blob's own length. The decoder steps by that length,
  // so it must lie within the bytes, and only that stretch is handed over.
  const length = view.getInt32(at + (version >= 4 ? 20 : 16), true);
  if (length < 40 || length > blob.length)
    throw brokenFile(path, `a LERC block of ${blob.length} bytes that says it has ${length}`);
  if (rows !== shape.rows || columns !== shape.columns || samples !== shape.samples)
    throw brokenFile(path, `a LERC block of ${columns} × ${rows} × ${samples}`);
  let decoded: ReturnType<typeof Lerc.decode>;
  try {
    decoded = Lerc.decode(new Uint8Array(blob.subarray(0, length)).buffer, {
      returnPixelInterleavedDims: true,
    });
  } catch (error) {
    throw brokenFile(path, `a LERC block that cannot be unpacked (${String(error)})`);
  }
  const pixels = decoded.pixels[0];
  if (pixels.byteLength !== columns * rows * samples * SAMPLE_BYTES[shape.type])
    throw brokenFile(path, `a LERC block of another sample type (${decoded.pixelType})`);
  if (decoded.mask && (shape.type === "float32" || shape.type === "float64"))
    for (let i = 0; i < decoded.mask.length; i++)
      if (decoded.mask[i] === 0) pixels.fill(Number.NaN, i * samples, (i + 1) * samples);
  return new Uint8Array(pixels.buffer, pixels.byteOffset, pixels.byteLength);
}
