import type { RandomAccess } from "../../effects/effects.ts";
import { InputError } from "../../errors.ts";
import { fromHalf, type Samples } from "../samples.ts";
import { brokenNetcdf, type Dataset, type NcType, type NcVariable } from "./dataset.ts";
import {
  type AttributeValues,
  attributesOf,
  attributeValues,
  type Hdf5Entity,
  numeric,
} from "./hdf5-attributes.ts";

/** What is used of the library; its own types leave out what the file system needs. */
interface Library {
  readonly FS: {
    createFile(
      parent: string,
      name: string,
      properties: object,
      canRead: boolean,
      canWrite: boolean,
    ): FileNode;
    unlink(path: string): void;
    readonly ErrnoError: new (errno: number) => Error;
  };
  readonly module: Hdf5Module;
  readonly File: new (path: string, mode: "r") => Hdf5Group;
}

interface FileNode {
  node_ops: object;
  stream_ops: object;
  readonly id: number;
  readonly mode: number;
}

interface Hdf5Module {
  activate_throwing_error_handler(): number;
  get_attached_scales(file: bigint, path: string, index: number): string[];
}

interface Hdf5Group extends Hdf5Entity {
  keys(): string[];
  get(name: string): Hdf5Entity | null;
  close(): void;
}

interface Hdf5Dataset extends Hdf5Entity {
  readonly metadata: {
    readonly chunks: readonly number[] | null;
    readonly shape: readonly number[] | null;
    readonly type: number;
    readonly size: number;
    readonly signed: boolean;
    readonly vlen: boolean;
  };
  readonly filters: readonly { readonly id: number; readonly name: string }[];
  readonly value: unknown;
  slice(ranges: readonly (readonly [number, number])[]): unknown;
}

const NO_VARIABLE = "This is a netCDF dimension but not a netCDF variable";
/** Filters that the library has built in: deflate, shuffle, Fletcher-32, szip, nbit, scale-offset. */
const KNOWN_FILTERS = new Set([1, 2, 3, 5, 6]);
const EIO = 29;

let library: Promise<Library> | undefined;
let opened = 0;

/** The library is large and slow to start, so it is loaded with the first file. */
async function load(): Promise<Library> {
  const h5 = await import("h5wasm");
  const module = (await h5.ready) as unknown as Hdf5Module; // its types do not have the error handler
  // Without it a corrupt chunk reads as zeros, with no error.
  module.activate_throwing_error_handler();
  return {
    FS: h5.FS as unknown as Library["FS"],
    module,
    File: h5.File as unknown as Library["File"],
  };
}

/**
 * Opens a NetCDF-4 file. The library sees a file whose bytes come from `file`, so that it reads no more than it needs
 * and nothing outside the data folder. Throws `layers.broken-file`.
 */
export async function openHdf5(file: RandomAccess): Promise<Dataset> {
  library ??= load();
  const { FS, File, module } = await library;
  const name = `file-${++opened}`;
  let failure: unknown;
  const node = FS.createFile("/", name, {}, true, false);
  present(node, file, (error) => {
    failure = error;
    return new FS.ErrnoError(EIO);
  });
  /** Runs the library; its errors, which hold its whole stack, become one line. */
  const guarded = <Result>(work: () => Result): Result => {
    failure = undefined;
    try {
      return work();
    } catch (error) {
      if (failure !== undefined) throw failure;
      if (error instanceof InputError) throw error;
      throw brokenNetcdf(file.path, said(error), error);
    }
  };
  const root = guarded(() => new File(`/${name}`, "r"));
  const datasets = new Map<NcVariable, Hdf5Dataset>();
  const variables = new Map<string, NcVariable>();
  const attributes = guarded(() => {
    const found = datasetsIn(root, "");
    const scales = dimensionNames(found);
    for (const { path, dataset, values } of found) {
      if (isBareDimension(values)) continue;
      const variable = describe(path, dataset, values, scales, module);
      variables.set(variable.name, variable);
      datasets.set(variable, dataset);
    }
    return attributesOf(attributeValues(root));
  });
  const checked = new Set<Hdf5Dataset>();
  const datasetOf = (variable: NcVariable) => {
    const dataset = datasets.get(variable);
    if (dataset === undefined) throw new Error(`${variable.name} is of another file`);
    return dataset;
  };
  return {
    path: file.path,
    format: "NetCDF-4",
    variables,
    attributes,
    read: (variable, start, count) => {
      const dataset = datasetOf(variable);
      if (!checked.has(dataset)) refuseUnknown(dataset, variable.name, file.path);
      checked.add(dataset);
      const short = count.findIndex((one, d) => start[d] + one > variable.shape[d]);
      if (short >= 0) throw unfinished(variable, short, start[short] + count[short], file.path);
      if (count.some((one) => one === 0)) return new Float64Array(0);
      const read = () =>
        count.length === 0
          ? dataset.value
          : dataset.slice(count.map((one, d) => [start[d], start[d] + one] as const));
      return samplesFrom(guarded(read), variable, file.path);
    },
    texts: (variable) => {
      const value = guarded(() => datasetOf(variable).value);
      const texts = (Array.isArray(value) ? value : [value]).map((one) => String(one));
      // Single characters are joined along their last dimension.
      const length = variable.shape[variable.shape.length - 1] ?? 1;
      if (variable.type !== "text" || !texts.every((one) => one.length <= 1) || variable.shape.length < 2)
        return texts.map((one) => one.trim());
      return Array.from({ length: texts.length / length }, (_, i) =>
        texts
          .slice(i * length, (i + 1) * length)
          .join("")
          .trim(),
      );
    },
    close: () => {
      try {
        root.close();
      } finally {
        FS.unlink(`/${name}`);
      }
    },
  };
}

/** Gives a node of the library's file system the bytes of a file. */
function present(node: FileNode, file: RandomAccess, failed: (error: unknown) => Error): void {
  const time = new Date(0);
  node.node_ops = {
    ...node.node_ops,
    getattr: () => ({
      dev: 1,
      ino: node.id,
      mode: node.mode,
      nlink: 1,
      uid: 0,
      gid: 0,
      rdev: 0,
      size: file.size,
      atime: time,
      mtime: time,
      ctime: time,
      blksize: 4096,
      blocks: Math.ceil(file.size / 4096),
    }),
  };
  node.stream_ops = {
    ...node.stream_ops,
    read: (_stream: unknown, buffer: Uint8Array, offset: number, length: number, position: number) => {
      const there = Math.max(0, Math.min(length, file.size - position));
      if (there === 0) return 0;
      try {
        buffer.set(file.read(position, there), offset);
        return there;
      } catch (error) {
        throw failed(error);
      }
    },
    llseek: (stream: { position: number }, offset: number, whence: number) =>
      offset + (whence === 1 ? stream.position : whence === 2 ? file.size : 0),
  };
}

/** The innermost reason of an HDF5 error stack, e.g. "inflate() failed". */
function said(error: unknown): string {
  const text = error instanceof Error ? error.message : String(error);
  const reasons = [...text.matchAll(/#\d+:[^\n]*?in \w+\(\): ([^\n]+)/g)].map((match) => match[1].trim());
  const last = reasons[reasons.length - 1] ?? text.split("\n")[0];
  return `one that HDF5 cannot read (${last.slice(0, 200)})`;
}

function isDataset(entity: Hdf5Entity | null): entity is Hdf5Dataset {
  return entity !== null && "metadata" in entity && "slice" in entity;
}

interface Found {
  readonly path: string;
  readonly dataset: Hdf5Dataset;
  readonly values: AttributeValues;
}

/** All datasets by path, groups gone through; links to other files are left alone. */
function datasetsIn(group: Hdf5Group, prefix: string): readonly Found[] {
  return group.keys().flatMap((key): readonly Found[] => {
    const entity = group.get(key);
    if (isDataset(entity)) return [{ path: prefix + key, dataset: entity, values: attributeValues(entity) }];
    return entity !== null && "keys" in entity ? datasetsIn(entity as Hdf5Group, `${prefix}${key}/`) : [];
  });
}

function isBareDimension(values: AttributeValues): boolean {
  const name = values.get("NAME");
  return typeof name === "string" && name.startsWith(NO_VARIABLE);
}

/** Paths of dimension scales by the number NetCDF-4 gives them. */
function dimensionNames(found: readonly Found[]): ReadonlyMap<number, string> {
  return new Map(
    found.flatMap(({ path, values }) => {
      const id = numeric(values.get("_Netcdf4Dimid"))?.[0];
      return id === undefined || !values.names.includes("CLASS") ? [] : [[id, plainName(path)] as const];
    }),
  );
}

/** A variable that shares its name with a dimension it is not the coordinate of is stored under another name. */
function plainName(path: string): string {
  return path.replace(/^\//, "").replace(/(^|\/)_nc4_non_coord_/, "$1");
}

function describe(
  path: string,
  dataset: Hdf5Dataset,
  values: AttributeValues,
  scales: ReadonlyMap<number, string>,
  module: Hdf5Module,
): NcVariable {
  const { metadata } = dataset;
  const shape = metadata.shape ?? [];
  const ids = numeric(values.get("_Netcdf4Coordinates"));
  const dimension = (d: number): string => {
    const known = ids === undefined ? undefined : scales.get(ids[d]);
    if (known !== undefined) return known;
    if (shape.length === 1 && values.get("CLASS") === "DIMENSION_SCALE") return plainName(path);
    const [scale] = module.get_attached_scales(dataset.file_id, dataset.path, d);
    return scale === undefined ? `unnamed ${d + 1} of ${path}` : plainName(scale);
  };
  return {
    name: plainName(path),
    dimensions: shape.map((_, d) => dimension(d)),
    shape,
    type: typeOf(metadata),
    attributes: attributesOf(values),
    chunks: metadata.chunks ?? undefined,
    compression: dataset.filters.map((one) => one.name).join(" + ") || "none",
  };
}

/** By HDF5's class of type: 0 integer, 1 float, 3 string, 8 enumeration. */
function typeOf({ type, size, signed }: Hdf5Dataset["metadata"]): NcType {
  if (type === 3) return "text";
  if (type === 1) return size === 8 ? "float64" : size === 4 ? "float32" : "other";
  if (type !== 0 && type !== 8) return "other";
  const bits = `${signed ? "int" : "uint"}${8 * size}`;
  switch (bits) {
    case "int8":
    case "uint8":
    case "int16":
    case "uint16":
    case "int32":
    case "uint32":
    case "int64":
    case "uint64":
      return bits;
    default:
      return "other";
  }
}

/** Along a dimension without a limit each variable has a length of its own; one that is still being written lags. */
function unfinished({ name, shape, dimensions }: NcVariable, d: number, wanted: number, path: string) {
  return brokenNetcdf(path, `a variable ${name} of ${shape[d]} steps along ${dimensions[d]}, not ${wanted}`);
}

function refuseUnknown({ filters }: Hdf5Dataset, name: string, path: string): void {
  const unknown = filters.find((one) => !KNOWN_FILTERS.has(one.id));
  if (unknown === undefined) return;
  throw new InputError({
    name: "layers.unsupported-compression",
    expected: "chunks packed by deflate, with or without shuffle, nbit, scale-offset and checksums",
    found: `variable ${name} packed by ${unknown.name || "a filter"} (HDF5 filter ${unknown.id})`,
    where: { file: path },
    remedy: "pack the file anew, e.g. nccopy -F none, or nccopy -d 4 -s",
  });
}

function samplesFrom(value: unknown, { name, type }: NcVariable, path: string): Samples {
  if (value instanceof BigInt64Array || value instanceof BigUint64Array)
    return Float64Array.from(value, Number);
  if (typeof value === "number") return Float64Array.of(value);
  if (typeof value === "bigint") return Float64Array.of(Number(value));
  if (type !== "other" && type !== "text" && ArrayBuffer.isView(value) && !(value instanceof DataView))
    // One of the eight kinds of numbers, since 64-bit integers were told apart above.
    return value as unknown as Samples;
  if (value instanceof Uint16Array) return Float32Array.from(value, fromHalf);
  throw new InputError({
    name: "layers.unsupported-type",
    expected: "a variable of numbers",
    found: `variable ${name} of another type`,
    where: { file: path },
    remedy: "choose another variable",
  });
}
