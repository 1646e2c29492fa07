import { createHash } from "node:crypto";
import { mkdirSync, readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import type { Reuse } from "../../effects/effects.ts";
import { codeOf, machineError, onDisk } from "./machine.ts";

/** Keeps nothing and finds nothing. */
export const noReuse: Reuse = { get: async () => undefined, put: async () => {} };

/**
 * Earlier results as files named by the SHA-256 of their key. A file begins with the SHA-256 of its value, so that a
 * torn or damaged one is passed over; it comes into being by a rename, so that no reader meets a half of it.
 */
export function reuseIn(folder: string): Reuse {
  let count = 0;
  const fileOf = (key: string) => join(folder, digest(new TextEncoder().encode(key)).toString("hex"));
  return {
    get: async (key) => {
      let held: Uint8Array;
      try {
        held = readFileSync(fileOf(key));
      } catch (error) {
        if (codeOf(error) === "ENOENT") return undefined;
        throw machineError(error, "read an earlier result", fileOf(key));
      }
      const value = Uint8Array.from(held.subarray(32));
      return held.length >= 32 && digest(value).equals(held.subarray(0, 32)) ? value : undefined;
    },
    put: async (key, value) => {
      const file = fileOf(key);
      const part = `${file}.${process.pid}.${count++}.part`;
      onDisk("keep a result for later runs", file, () => {
        mkdirSync(folder, { recursive: true });
        try {
          writeFileSync(part, Buffer.concat([digest(value), value]));
          renameSync(part, file);
        } catch (error) {
          rmSync(part, { force: true });
          throw error;
        }
      });
    },
  };
}

function digest(bytes: Uint8Array): Buffer {
  return createHash("sha256").update(bytes).digest();
}
