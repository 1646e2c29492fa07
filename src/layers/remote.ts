import { createHash } from "node:crypto";
import type { Files, RandomAccess } from "../effects/effects.ts";
import { InputError, MachineError } from "../errors.ts";
import type { LayerOptions } from "./options.ts";

/** Bytes fetched with the first request: the headers of a cloud-optimised GeoTIFF as a rule. */
const HEAD = 16384;

export function isAddress(path: string): boolean {
  return /^https?:\/\//i.test(path);
}

/** A file at an address: bytes that are at hand are read, others must be fetched first. */
export interface RemoteFile extends RandomAccess {
  /** What marks the version that is read: size, entity tag or date. */
  readonly version: string;
  /** Fetches ranges that are not at hand; neighbours in one request, nothing between them. */
  prefetch(ranges: readonly (readonly [offset: number, length: number])[]): Promise<void>;
}

/** Thrown by `read` for bytes that are not at hand; `fetching` catches it. */
class Absent extends Error {
  readonly offset: number;
  readonly length: number;

  constructor(offset: number, length: number) {
    super(`bytes ${offset} to ${offset + length} were not fetched`);
    this.offset = offset;
    this.length = length;
  }
}

/** The files of a layer: those below the data folder by pattern, and addresses as they are, if they are allowed. */
export async function layerPaths(options: LayerOptions, files: Files): Promise<readonly string[]> {
  const addresses = options.files.filter(isAddress);
  if (addresses.length > 0 && options.network !== "allow")
    throw new InputError({
      name: "layers.network",
      expected: "files below the data folder, since the network was not allowed",
      found: `the address ${JSON.stringify(addresses[0])}`,
      remedy: "write network: allow under the layer, or download the file first",
    });
  const { quality } = options;
  const graded = quality === undefined ? undefined : [...addresses, ...(quality.files ?? [])].find(isAddress);
  if (graded !== undefined)
    throw new InputError({
      name: "layers.quality-address",
      expected: "a layer with quality numbers to lie below the data folder",
      found: `the address ${JSON.stringify(graded)}`,
      remedy: "download values and quality first; their pixels are read one beside the other",
    });
  const local = options.files.filter((one) => !isAddress(one));
  return [...(local.length === 0 ? [] : await files.list(local)), ...addresses.sort()];
}

/** Opens a file of a layer, at an address by its first bytes. Throws `network.…` (MachineError). */
export async function openFile(path: string, files: Files): Promise<RandomAccess> {
  return isAddress(path) ? openRemote(path, files) : files.open(path);
}

async function openRemote(path: string, { remote }: Files): Promise<RemoteFile> {
  if (remote === undefined) throw new Error("no network was handed in");
  const head = await remote.range(path, 0, HEAD);
  const pieces: { readonly offset: number; readonly bytes: Uint8Array }[] = [
    { offset: 0, bytes: head.bytes },
  ];
  const { size, version } = head;
  const held = (offset: number, length: number) =>
    pieces.find((one) => one.offset <= offset && offset + length <= one.offset + one.bytes.length);
  return {
    path,
    size,
    version,
    read: (offset, length) => {
      const piece = held(offset, length);
      if (piece === undefined) throw new Absent(offset, length);
      return piece.bytes.slice(offset - piece.offset, offset - piece.offset + length);
    },
    prefetch: async (ranges) => {
      for (const [offset, length] of together(
        ranges.filter(([at, count]) => held(at, count) === undefined),
      )) {
        const got = await remote.range(path, offset, length);
        if (got.version !== version || got.bytes.length !== length)
          throw new MachineError({
            name: "network.changed",
            expected: "the file at the address to stay as it is while it is read",
            found:
              got.version === version ? `${got.bytes.length} of ${length} bytes` : "another version of it",
            where: { file: path },
            remedy: "run the same command again",
          });
        pieces.push({ offset, bytes: got.bytes });
      }
    },
    close: () => {
      pieces.length = 0;
    },
  };
}

/** Ranges in order of place; those that touch or overlap become one. */
function together(ranges: readonly (readonly [number, number])[]): readonly (readonly [number, number])[] {
  const out: [number, number][] = [];
  for (const [offset, length] of [...ranges].sort((a, b) => a[0] - b[0])) {
    const last = out[out.length - 1];
    if (last !== undefined && offset <= last[0] + last[1])
      last[1] = Math.max(last[1], offset + length - last[0]);
    else out.push([offset, length]);
  }
  return out;
}

/** Runs work on a file; where bytes of an address are not at hand, fetches them and runs it again. */
export async function fetching<Result>(file: RandomAccess, work: () => Promise<Result>): Promise<Result> {
  for (;;)
    try {
      return await work();
    } catch (error) {
      if (!(error instanceof Absent) || !isRemote(file)) throw error;
      if (error.offset < 0 || error.offset + error.length > file.size)
        throw new InputError({
          name: "files.short-read",
          expected: `${error.length} bytes from byte ${error.offset} on`,
          found: `a file that ends at byte ${file.size}`,
          where: { file: file.path },
          remedy: "the file is cut off: fetch it from elsewhere",
        });
      await file.prefetch([[error.offset, error.length]]);
    }
}

export function isRemote(file: RandomAccess): file is RemoteFile {
  return "prefetch" in file;
}

/** What stands for the content of a file at an address: the address and its version. */
export function versionHash({ path, version }: RemoteFile): string {
  return createHash("sha256")
    .update(JSON.stringify([path, version]))
    .digest("hex");
}
