import { Readable, Writable } from "node:stream";
import { pipeline } from "node:stream/promises";
import { createGunzip, gunzipSync, constants as zlib } from "node:zlib";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { isTooLarge, mostUnpacked, unpacksTooLarge } from "./unpacked-size.ts";

const HEAD_BYTES = 1 << 18;
const PART_BYTES = 1 << 20;

/** The first bytes of a file, unpacked if its name ends in .gz. */
export function readHead(files: Files, path: string): { readonly bytes: Uint8Array; readonly cut: boolean } {
  const access = files.open(path);
  try {
    const size = Math.min(access.size, HEAD_BYTES);
    const bytes = access.read(0, size);
    const cut = size < access.size;
    // Sync flush: give what can be unpacked of a stream that ends early.
    return {
      bytes: path.endsWith(".gz") ? unpack(bytes, path, { finishFlush: zlib.Z_SYNC_FLUSH }) : bytes,
      cut,
    };
  } finally {
    access.close();
  }
}

/** All bytes, unpacked if the name ends in .gz. */
export async function readWhole(files: Files, path: string): Promise<Uint8Array> {
  const bytes = await files.readBytes(path);
  return path.endsWith(".gz") ? unpack(bytes, path, {}) : bytes;
}

function unpack(bytes: Uint8Array, path: string, options: { readonly finishFlush?: number }): Uint8Array {
  try {
    return gunzipSync(bytes, { ...options, maxOutputLength: mostUnpacked(bytes.length) });
  } catch (error) {
    throw isTooLarge(error) ? unpacksTooLarge(path, bytes.length) : error;
  }
}

/**
 * Unpacks a .gz file once and throws the bytes away, so that its length and check sum are verified: the table reader takes a
 * file that was cut off for one that ends there, and rows would be lost in silence. Throws `stations.broken-gzip` and
 * `stations.unpacks-too-large`.
 */
export async function checkPacked(files: Files, path: string): Promise<void> {
  if (!path.endsWith(".gz")) return;
  await throughBytes(files, path, () => {});
}

/** What one pass over the (unpacked) bytes of a text file tells. */
export interface BytesSeen {
  /** `_` stands between two digits somewhere. */
  readonly parted: boolean;
  /** Lines that end with a line feed, and a last one that does not. */
  readonly lines: number;
}

export async function seeBytes(files: Files, path: string): Promise<BytesSeen> {
  const digit = (byte: number | undefined) => byte !== undefined && byte >= 0x30 && byte <= 0x39;
  let [parted, feeds, last, before] = [false, 0, 0x0a, 0];
  await throughBytes(files, path, (part) => {
    // The seam: `_` as the last byte of the part before, or as the first of this one.
    if (last === 0x5f && digit(before) && digit(part[0])) parted = true;
    if (part[0] === 0x5f && digit(last) && digit(part[1])) parted = true;
    for (let i = part.indexOf(0x5f, 1); i >= 0 && !parted; i = part.indexOf(0x5f, i + 1))
      parted = digit(part[i - 1]) && digit(part[i + 1]);
    for (let i = 0; i < part.length; i++) if (part[i] === 0x0a) feeds++;
    before = part.length > 1 ? part[part.length - 2] : last;
    last = part[part.length - 1];
  });
  return { parted, lines: feeds + (last === 0x0a ? 0 : 1) };
}

/** The same bytes, not a copy: a Buffer searches many times faster than a plain array of bytes. */
function asBuffer(bytes: Uint8Array): Buffer {
  return Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
}

async function throughBytes(files: Files, path: string, use: (bytes: Buffer) => void): Promise<void> {
  const access = files.open(path);
  function* parts() {
    for (let at = 0; at < access.size; at += PART_BYTES)
      yield asBuffer(access.read(at, Math.min(PART_BYTES, access.size - at)));
  }
  let unpacked = 0;
  const sink = new Writable({
    write: (chunk: Buffer, _encoding, done) => {
      unpacked += chunk.length;
      if (unpacked > mostUnpacked(access.size)) return done(unpacksTooLarge(path, access.size));
      use(chunk);
      done();
    },
  });
  try {
    if (!path.endsWith(".gz")) for (const part of parts()) use(part);
    else await pipeline(Readable.from(parts()), createGunzip(), sink);
  } catch (error) {
    if (!(error instanceof Error && "code" in error && String(error.code).startsWith("Z_"))) throw error;
    throw new InputError(
      {
        name: "stations.broken-gzip",
        expected: "a whole gzip file, as its name says",
        found: error.message,
        where: { file: path },
        remedy: "fetch or pack it again, or take the .gz off its name if it is not packed",
      },
      error,
    );
  } finally {
    access.close();
  }
}
