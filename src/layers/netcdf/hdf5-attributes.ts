import type { Attribute, NcType } from "./dataset.ts";

interface Hdf5Attribute {
  readonly dtype: unknown;
  readonly value: unknown;
}

/** What of the library's groups and datasets is used here. */
export interface Hdf5Entity {
  readonly file_id: bigint;
  readonly path: string;
  /** Properties are read from the file whenever they are looked at, and the list of names too. */
  readonly attrs: Readonly<Record<string, Hdf5Attribute>>;
}

/** Values of attributes by name; each is read from the file once, when it is first asked for. */
export interface AttributeValues {
  readonly names: readonly string[];
  readonly get: (name: string) => unknown;
}

export function attributeValues(entity: Hdf5Entity): AttributeValues {
  const { attrs } = entity;
  const names = Object.keys(attrs);
  const known = new Map<string, unknown>();
  return {
    names,
    get: (name) => {
      if (!known.has(name)) known.set(name, attrs[name]?.value);
      return known.get(name);
    },
  };
}

/** Housekeeping of NetCDF-4 within HDF5, of no meaning to a reader. */
const HIDDEN =
  /^(CLASS|NAME|DIMENSION_LIST|REFERENCE_LIST|_Netcdf4Dimid|_Netcdf4Coordinates|_NCProperties|_nc3_strict)$/;

export function attributesOf(values: AttributeValues): ReadonlyMap<string, Attribute> {
  const out = new Map<string, Attribute>();
  for (const name of values.names) {
    if (HIDDEN.test(name)) continue;
    const value = values.get(name);
    const numbers = numeric(value);
    if (numbers !== undefined) out.set(name, { type: arrayType(value), numbers });
    else if (typeof value === "string") out.set(name, value);
    else if (Array.isArray(value) && value.every((one) => typeof one === "string"))
      out.set(name, value.join(" "));
  }
  return out;
}

const ARRAY_TYPES: readonly (readonly [new (length: number) => object, NcType])[] = [
  [Int8Array, "int8"],
  [Uint8Array, "uint8"],
  [Int16Array, "int16"],
  [Uint16Array, "uint16"],
  [Int32Array, "int32"],
  [Uint32Array, "uint32"],
  [BigInt64Array, "int64"],
  [BigUint64Array, "uint64"],
  [Float32Array, "float32"],
  [Float64Array, "float64"],
];

function arrayType(value: unknown): NcType {
  const known = ARRAY_TYPES.find(([Type]) => value instanceof Type)?.[1];
  return known ?? (typeof value === "bigint" ? "int64" : "float64");
}

/** Numbers of an attribute: the library gives a number, a bigint or a typed array (of bigints for 64-bit integers). */
export function numeric(value: unknown): readonly number[] | undefined {
  if (typeof value === "number" || typeof value === "bigint") return [Number(value)];
  if (!ArrayBuffer.isView(value) || value instanceof DataView) return undefined;
  return Array.from(value as unknown as ArrayLike<number | bigint>, Number);
}
