import { Readable, Writable } from "node:stream";
import { pipeline } from "node:stream/promises";
import { createGunzip, gunzipSync, constants as zlib } from "node:zlib";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";

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
      bytes: path.endsWith(".gz") ? gunzipSync(bytes, { finishFlush: zlib.Z_SYNC_FLUSH }) : bytes,
      cut,
    };
  } finally {
    access.close();
  }
}

/** All bytes, unpacked if the name ends in .gz. */
export async function readWhole(files: Files, path: string): Promise<Uint8Array> {
  const bytes = await files.readBytes(path);
  return path.endsWith(".gz") ? gunzipSync(bytes) : bytes;
}

/**
 * Unpacks a .gz file once and throws the bytes away, so that its length and check sum are verified: the table reader takes a
 * file that was cut off for one that ends there, and rows would be lost in silence. Throws `stations.broken-gzip`.
 */
export async function checkPacked(files: Files, path: string): Promise<void> {
  if (!path.endsWith(".gz")) return;
  const access = files.open(path);
  function* parts() {
    for (let at = 0; at < access.size; at += PART_BYTES)
      yield access.read(at, Math.min(PART_BYTES, access.size - at));
  }
  const nowhere = new Writable({ write: (_chunk, _encoding, done) => done() });
  try {
    await pipeline(Readable.from(parts()), createGunzip(), nowhere);
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
