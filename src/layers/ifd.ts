import type { RandomAccess } from "../effects/effects.ts";
import { InputError } from "../errors.ts";

/** Field types of TIFF 6.0 §2 and BigTIFF: bytes per value, by type number. */
const TYPE_BYTES: Readonly<Record<number, number>> = {
  1: 1,
  2: 1,
  3: 2,
  4: 4,
  5: 8,
  6: 1,
  7: 1,
  8: 2,
  9: 4,
  10: 8,
  11: 4,
  12: 8,
  13: 4,
  16: 8,
  17: 8,
  18: 8,
};

/** No real layer has more; a chain of directories that is longer goes round in a circle or is noise. */
const MOST_DIRECTORIES = 2000;

interface Field {
  readonly type: number;
  readonly count: number;
  /** Where its bytes stand, if not in the entry itself. */
  readonly at: number;
  readonly inEntry: Uint8Array | undefined;
}

/** One image file directory; values are read when they are asked for. */
export interface Directory {
  readonly has: (tag: number) => boolean;
  /** The numbers of a tag; undefined if it is not there. */
  readonly numbers: (tag: number) => Float64Array | undefined;
  /** The first number of a tag, or the default. */
  readonly number: (tag: number, missing: number) => number;
  /** The text of a tag, up to its last NUL; undefined if it is not there. */
  readonly text: (tag: number) => string | undefined;
}

export interface TiffStructure {
  readonly littleEndian: boolean;
  readonly directories: readonly Directory[];
}

/** The error for a file that is cut short, corrupt or lying. */
export function brokenFile(path: string, found: string, expected = "a whole TIFF file"): InputError {
  return new InputError({
    name: "layers.broken-file",
    expected,
    found,
    where: { file: path },
    remedy: "fetch or make the file again, or take it out of the layer",
  });
}

/** Exactly `length` bytes, checked against the file's size before anything is asked for. */
export function readChecked(
  file: RandomAccess,
  offset: number,
  length: number,
  what: string,
  into?: Uint8Array,
): Uint8Array {
  if (!(Number.isSafeInteger(offset) && Number.isSafeInteger(length)) || offset < 0 || length < 0)
    throw brokenFile(file.path, `an impossible place for ${what} (byte ${offset}, ${length} bytes)`);
  if (offset + length > file.size)
    throw brokenFile(
      file.path,
      `a file of ${file.size} bytes whose ${what} should end at byte ${offset + length}`,
    );
  return file.read(offset, length, into);
}

/**
 * Reads the directories of a TIFF 6.0 or BigTIFF file of either byte order. Throws `layers.not-tiff` and
 * `layers.broken-file` (truncated, circular or absurd directories), always with the file's name.
 */
export function readStructure(opened: RandomAccess): TiffStructure {
  if (opened.size < 8) throw notTiff(opened.path, `${opened.size} bytes`);
  const file = withHead(opened);
  const head = readChecked(file, 0, Math.min(16, file.size), "header");
  const order = String.fromCharCode(head[0], head[1]);
  if (order !== "II" && order !== "MM")
    throw notTiff(file.path, `the first bytes ${hex(head.subarray(0, 4))}`);
  const littleEndian = order === "II";
  const view = viewOf(head);
  const magic = view.getUint16(2, littleEndian);
  if (magic !== 42 && magic !== 43) throw notTiff(file.path, `the first bytes ${hex(head.subarray(0, 4))}`);
  const big = magic === 43;
  if (big && (head.length < 16 || view.getUint16(4, littleEndian) !== 8))
    throw brokenFile(file.path, "a BigTIFF header that is cut short or not of 8-byte offsets");
  let next = big ? whole(view.getBigUint64(8, littleEndian), file.path) : view.getUint32(4, littleEndian);
  const seen = new Set<number>();
  const directories: Directory[] = [];
  while (next !== 0) {
    if (seen.has(next) || seen.size >= MOST_DIRECTORIES)
      throw brokenFile(file.path, "a chain of directories that does not end");
    seen.add(next);
    const read = readDirectory(file, next, big, littleEndian);
    directories.push(read.directory);
    next = read.next;
  }
  if (directories.length === 0) throw brokenFile(file.path, "no image in it");
  return { littleEndian, directories };
}

/** Bytes from the start that are read at once: headers stand there as a rule, and have a dozen small parts. */
const HEAD_BYTES = 16384;

function withHead(file: RandomAccess): RandomAccess {
  const head = file.read(0, Math.min(HEAD_BYTES, file.size));
  return {
    ...file,
    read: (offset, length) =>
      offset + length <= head.length ? head.subarray(offset, offset + length) : file.read(offset, length),
  };
}

function readDirectory(file: RandomAccess, at: number, big: boolean, little: boolean) {
  const countBytes = big ? 8 : 2;
  const entryBytes = big ? 20 : 12;
  const inline = big ? 8 : 4;
  const countView = viewOf(readChecked(file, at, countBytes, "image directory"));
  const entries = big ? whole(countView.getBigUint64(0, little), file.path) : countView.getUint16(0, little);
  if (entries > 65535) throw brokenFile(file.path, `an image directory of ${entries} entries`);
  const bytes = readChecked(file, at + countBytes, entries * entryBytes + (big ? 8 : 4), "image directory");
  const view = viewOf(bytes);
  const fields = new Map<number, Field>();
  for (let i = 0; i < entries; i++) {
    const start = i * entryBytes;
    const type = view.getUint16(start + 2, little);
    const size = TYPE_BYTES[type];
    if (size === undefined) continue; // TIFF 6.0 §2: readers skip fields of a type they do not know.
    const count = big
      ? whole(view.getBigUint64(start + 4, little), file.path)
      : view.getUint32(start + 4, little);
    const slot = start + (big ? 12 : 8);
    const inEntry = count * size <= inline ? bytes.subarray(slot, slot + count * size) : undefined;
    const place =
      inEntry !== undefined
        ? 0
        : big
          ? whole(view.getBigUint64(slot, little), file.path)
          : view.getUint32(slot, little);
    fields.set(view.getUint16(start, little), { type, count, at: place, inEntry });
  }
  const end = entries * entryBytes;
  const next = big ? whole(view.getBigUint64(end, little), file.path) : view.getUint32(end, little);
  return { directory: directoryOf(file, fields, little), next };
}

function directoryOf(file: RandomAccess, fields: ReadonlyMap<number, Field>, little: boolean): Directory {
  const bytesOf = (tag: number, field: Field) =>
    field.inEntry ?? readChecked(file, field.at, field.count * TYPE_BYTES[field.type], `tag ${tag}`);
  const numbers = (tag: number) => {
    const field = fields.get(tag);
    return field === undefined ? undefined : numbersOf(bytesOf(tag, field), field, little, file.path);
  };
  return {
    has: (tag) => fields.has(tag),
    numbers,
    number: (tag, missing) => numbers(tag)?.[0] ?? missing,
    text: (tag) => {
      const field = fields.get(tag);
      if (field === undefined) return undefined;
      return new TextDecoder("utf-8").decode(bytesOf(tag, field)).replace(/\0+$/, "");
    },
  };
}

function numbersOf(bytes: Uint8Array, field: Field, little: boolean, path: string): Float64Array {
  const view = viewOf(bytes);
  const size = TYPE_BYTES[field.type];
  const out = new Float64Array(field.count);
  for (let i = 0; i < field.count; i++) out[i] = numberAt(view, i * size, field.type, little, path);
  return out;
}

function numberAt(view: DataView, at: number, type: number, little: boolean, path: string): number {
  switch (type) {
    case 3:
      return view.getUint16(at, little);
    case 4:
    case 13:
      return view.getUint32(at, little);
    case 5:
      return view.getUint32(at, little) / view.getUint32(at + 4, little);
    case 6:
      return view.getInt8(at);
    case 8:
      return view.getInt16(at, little);
    case 9:
      return view.getInt32(at, little);
    case 10:
      return view.getInt32(at, little) / view.getInt32(at + 4, little);
    case 11:
      return view.getFloat32(at, little);
    case 12:
      return view.getFloat64(at, little);
    case 16:
    case 18:
      return whole(view.getBigUint64(at, little), path);
    case 17:
      return Number(view.getBigInt64(at, little));
    default:
      return view.getUint8(at);
  }
}

function whole(value: bigint, path: string): number {
  if (value > BigInt(Number.MAX_SAFE_INTEGER)) throw brokenFile(path, `an impossible number, ${value}`);
  return Number(value);
}

function viewOf(bytes: Uint8Array): DataView {
  return new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
}

function hex(bytes: Uint8Array): string {
  return Array.from(bytes, (byte) => byte.toString(16).padStart(2, "0")).join(" ");
}

function notTiff(path: string, found: string): InputError {
  return new InputError({
    name: "layers.not-tiff",
    expected: "a GeoTIFF (it begins with II or MM and 42 or 43)",
    found,
    where: { file: path },
    remedy: "name GeoTIFF files only; a failed download often leaves a web page or an empty file",
  });
}
