import type { RandomAccess } from "../../effects/effects.ts";
import { HOST_LITTLE, type Samples, samplesOf, swapBytes } from "../samples.ts";
import { type ClassicVariable, readClassicHeader } from "./classic-header.ts";
import { brokenNetcdf, type Dataset, type NcVariable, TYPE_BYTES } from "./dataset.ts";

/** A span of at most so many bytes is read in one piece, gaps included; further apart, piece by piece. */
const SHORT_SPAN = 32 * 1024;
const LONG_SPAN = 8 * 2 ** 20;

/** Opens a classic file (CDF-1, 2 or 5). Hyperslabs are read from where their bytes stand; nothing is held. */
export function openClassic(file: RandomAccess): Dataset {
  const header = readClassicHeader(file);
  const places = new Map<NcVariable, ClassicVariable>();
  const variables = new Map<string, NcVariable>();
  for (const one of header.variables) {
    const variable: NcVariable = {
      name: one.name,
      dimensions: one.dimensions.map((id) => header.dimensions[id].name),
      shape: one.dimensions.map((id) => header.dimensions[id].length),
      type: one.type,
      attributes: one.attributes,
      chunks: undefined,
      compression: "none",
    };
    variables.set(one.name, variable);
    places.set(variable, one);
  }
  const bytesOf = (variable: NcVariable, start: readonly number[], count: readonly number[]): Uint8Array => {
    const place = places.get(variable);
    if (place === undefined) throw new Error(`${variable.name} is of another file`);
    return readBytes(file, variable, place, header.recordBytes, start, count);
  };
  return {
    path: file.path,
    format: `NetCDF classic (CDF-${header.version})`,
    variables,
    attributes: header.attributes,
    read: (variable, start, count) => decode(bytesOf(variable, start, count), variable),
    texts: (variable) => {
      const { shape } = variable;
      const bytes = bytesOf(
        variable,
        shape.map(() => 0),
        shape,
      );
      const length = shape[shape.length - 1] ?? 1;
      return Array.from({ length: length === 0 ? 0 : bytes.length / length }, (_, i) =>
        new TextDecoder()
          .decode(bytes.subarray(i * length, (i + 1) * length))
          .replace(/\0.*$/s, "")
          .trim(),
      );
    },
    close: () => {},
  };
}

/** Bytes of a hyperslab, row-major, big-endian as the file has them. */
function readBytes(
  file: RandomAccess,
  { name, shape, type }: NcVariable,
  { begin, isRecord }: ClassicVariable,
  recordBytes: number,
  start: readonly number[],
  count: readonly number[],
): Uint8Array {
  const size = TYPE_BYTES[type];
  const rank = shape.length;
  const strides = new Array<number>(rank);
  let stride = size;
  for (let d = rank - 1; d >= 0; d--) {
    strides[d] = d === 0 && isRecord ? recordBytes : stride;
    stride *= shape[d];
  }
  // spans[d] and useful[d]: bytes from the first to the last sample of dimensions d and on, and those that are wanted.
  const spans = new Array<number>(rank + 1).fill(size);
  const useful = new Array<number>(rank + 1).fill(size);
  for (let d = rank - 1; d >= 0; d--) {
    spans[d] = spans[d + 1] + (count[d] - 1) * strides[d];
    useful[d] = useful[d + 1] * count[d];
  }
  const out = new Uint8Array(useful[0]);
  if (out.length === 0) return out;
  const first = begin + start.reduce((sum, one, d) => sum + one * strides[d], 0);
  if (first + spans[0] > file.size)
    throw brokenNetcdf(
      file.path,
      `a file of ${file.size} bytes whose variable ${name} should reach byte ${first + spans[0]}`,
    );
  let filled = 0;
  const copy = (from: Uint8Array, at: number, d: number): void => {
    if (spans[d] === useful[d]) {
      out.set(from.subarray(at, at + useful[d]), filled);
      filled += useful[d];
      return;
    }
    for (let i = 0; i < count[d]; i++) copy(from, at + i * strides[d], d + 1);
  };
  const gather = (at: number, d: number): void => {
    if (
      spans[d] === useful[d] ||
      spans[d] <= SHORT_SPAN ||
      (spans[d] <= LONG_SPAN && spans[d] <= 4 * useful[d])
    )
      copy(file.read(at, spans[d]), 0, d);
    else for (let i = 0; i < count[d]; i++) gather(at + i * strides[d], d + 1);
  };
  gather(first, 0);
  return out;
}

function decode(bytes: Uint8Array, { type }: NcVariable): Samples {
  if (type === "int64" || type === "uint64") {
    const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
    return Float64Array.from({ length: bytes.length / 8 }, (_, i) =>
      Number(type === "int64" ? view.getBigInt64(8 * i) : view.getBigUint64(8 * i)),
    );
  }
  if (type === "text" || type === "other") return bytes;
  if (HOST_LITTLE) swapBytes(bytes, TYPE_BYTES[type]);
  return samplesOf(bytes, type);
}
