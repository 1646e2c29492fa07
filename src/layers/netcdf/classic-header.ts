import type { RandomAccess } from "../../effects/effects.ts";
import { type Attribute, brokenNetcdf, type NcType, TYPE_BYTES } from "./dataset.ts";

/** Where a variable of a classic file stands. */
export interface ClassicVariable {
  readonly name: string;
  readonly dimensions: readonly number[];
  readonly type: NcType;
  readonly attributes: ReadonlyMap<string, Attribute>;
  /** First byte. */
  readonly begin: number;
  readonly isRecord: boolean;
}

export interface ClassicHeader {
  readonly version: 1 | 2 | 5;
  readonly dimensions: readonly { readonly name: string; readonly length: number }[];
  readonly attributes: ReadonlyMap<string, Attribute>;
  readonly variables: readonly ClassicVariable[];
  /** Bytes from one record to the next. */
  readonly recordBytes: number;
}

const TYPES: Readonly<Record<number, NcType>> = {
  1: "int8",
  2: "text",
  3: "int16",
  4: "int32",
  5: "float32",
  6: "float64",
  7: "uint8",
  8: "uint16",
  9: "uint32",
  10: "int64",
  11: "uint64",
};

/** A header larger than this is a lie; the largest real ones have some thousand variables. */
const MOST_BYTES = 64 * 2 ** 20;

/** Reads numbers and names one after the other, fetching more of the file as it goes. */
class Cursor {
  private readonly file: RandomAccess;
  private readonly wide: boolean;
  private bytes: Uint8Array;
  at = 4;

  constructor(file: RandomAccess, wide: boolean) {
    this.file = file;
    this.wide = wide;
    this.bytes = file.read(0, Math.min(file.size, 65536));
  }

  /** The next `count` bytes. */
  take(count: number): DataView {
    const end = this.at + count;
    if (!(count >= 0) || end > MOST_BYTES || end > this.file.size)
      throw brokenNetcdf(this.file.path, `a header that should end beyond byte ${end} of ${this.file.size}`);
    if (end > this.bytes.length)
      this.bytes = this.file.read(0, Math.min(this.file.size, Math.max(end, 2 * this.bytes.length)));
    const view = new DataView(this.bytes.buffer, this.bytes.byteOffset + this.at, count);
    this.at = end;
    return view;
  }

  int(): number {
    return this.take(4).getUint32(0);
  }

  /** A count or size: 4 bytes, 8 in CDF-5. */
  size(): number {
    return this.wide ? this.long() : this.int();
  }

  long(): number {
    const value = this.take(8).getBigUint64(0);
    if (value > BigInt(Number.MAX_SAFE_INTEGER)) throw brokenNetcdf(this.file.path, `the size ${value}`);
    return Number(value);
  }

  padded(count: number): DataView {
    const view = this.take(count);
    this.take((4 - (count % 4)) % 4);
    return view;
  }

  name(): string {
    return new TextDecoder().decode(this.padded(this.size()));
  }
}

/**
 * Reads the header of a classic file by the grammar of the NetCDF Classic and 64-bit Offset File Formats (OGC 10-092r3)
 * and its CDF-5 extension. The number of records is worked out from the file where it was left open while streaming.
 */
export function readClassicHeader(file: RandomAccess): ClassicHeader {
  const version = file.read(3, 1)[0];
  if (version !== 1 && version !== 2 && version !== 5)
    throw brokenNetcdf(file.path, `format number ${version} after CDF; 1, 2 and 5 are known`);
  const cursor = new Cursor(file, version === 5);
  const broken = (what: string) => brokenNetcdf(file.path, what);
  const written = version === 5 ? cursor.take(8).getBigUint64(0) : BigInt(cursor.int());
  const streaming = written === (version === 5 ? 2n ** 64n - 1n : 2n ** 32n - 1n);

  const list = <Entry>(tag: number, what: string, read: () => Entry): Entry[] => {
    const found = cursor.int();
    const count = cursor.size();
    if (found === 0 && count === 0) return [];
    if (found !== tag || count > 1e6) throw broken(`mark ${found} where its ${what} should begin`);
    return Array.from({ length: count }, read);
  };
  const typeOf = () => {
    const number = cursor.int();
    const type = TYPES[number];
    if (type === undefined) throw broken(`values of type ${number}`);
    return type;
  };
  const attribute = (): [string, Attribute] => {
    const name = cursor.name();
    const type = typeOf();
    const count = cursor.size();
    return [name, attributeOf(cursor.padded(count * TYPE_BYTES[type]), type, count)];
  };

  const dimensions = list(10, "dimensions", () => ({ name: cursor.name(), length: cursor.size() }));
  const attributes = new Map(list(12, "attributes", attribute));
  const found = list(11, "variables", () => {
    const name = cursor.name();
    const ids = Array.from({ length: checkedRank(cursor.size(), broken) }, () => cursor.size());
    if (ids.some((id) => dimensions[id] === undefined))
      throw broken(`variable ${name} with a dimension that is not there`);
    const own = new Map(list(12, "attributes", attribute));
    const type = typeOf();
    cursor.size(); // vsize: redundant, and too small a field for large variables
    const begin = version === 1 ? cursor.int() : cursor.long();
    const isRecord = ids.length > 0 && dimensions[ids[0]].length === 0;
    return { name, dimensions: ids, type, attributes: own, begin, isRecord };
  });

  const records = found.filter((one) => one.isRecord);
  const bytesOf = (one: ClassicVariable) =>
    one.dimensions.slice(1).reduce((product, id) => product * dimensions[id].length, TYPE_BYTES[one.type]);
  const padded = (bytes: number) => 4 * Math.ceil(bytes / 4);
  // A single record variable is packed without padding between its records.
  const recordBytes =
    records.length === 1 ? bytesOf(records[0]) : records.reduce((sum, one) => sum + padded(bytesOf(one)), 0);
  const begins = Math.min(...records.map((one) => one.begin));
  const length = streaming
    ? recordBytes === 0
      ? 0
      : Math.floor((file.size - begins) / recordBytes)
    : Number(written);
  return {
    version,
    dimensions: dimensions.map((one) => (one.length === 0 ? { ...one, length } : one)),
    attributes,
    variables: found,
    recordBytes,
  };
}

function checkedRank(rank: number, broken: (what: string) => Error): number {
  if (rank > 1024) throw broken(`a variable of ${rank} dimensions`);
  return rank;
}

function attributeOf(view: DataView, type: NcType, count: number): Attribute {
  if (type === "text") return new TextDecoder().decode(view).replace(/\0+$/, "");
  const size = TYPE_BYTES[type];
  return { type, numbers: Array.from({ length: count }, (_, i) => numberAt(view, i * size, type)) };
}

/** A big-endian number. */
function numberAt(view: DataView, at: number, type: NcType): number {
  switch (type) {
    case "int8":
      return view.getInt8(at);
    case "int16":
      return view.getInt16(at);
    case "uint16":
      return view.getUint16(at);
    case "int32":
      return view.getInt32(at);
    case "uint32":
      return view.getUint32(at);
    case "int64":
      return Number(view.getBigInt64(at));
    case "uint64":
      return Number(view.getBigUint64(at));
    case "float32":
      return view.getFloat32(at);
    case "float64":
      return view.getFloat64(at);
    default:
      return view.getUint8(at);
  }
}
