import { createHash } from "node:crypto";
import { mkdirSync, readdirSync, readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import { hostname } from "node:os";
import { join, relative, resolve } from "node:path";
import type { Reuse } from "../../effects/effects.ts";
import { InputError } from "../../errors.ts";
import { codeOf, machineError, onDisk } from "./machine.ts";

/** Keeps nothing and finds nothing. */
export const noReuse: Reuse = { get: async () => undefined, put: async () => {} };

/**
 * Earlier results as files named by the SHA-256 of their key. A file begins with the SHA-256 of its value, so that a
 * torn or damaged one is passed over; it comes into being by a rename, so that no reader meets a half of it. Halves that a
 * killed run of this machine left are removed before the first result is kept.
 */
export function reuseIn(folder: string): Reuse {
  let count = 0;
  const machine = digest(new TextEncoder().encode(hostname())).toString("hex").slice(0, 8);
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
      const value = new Uint8Array(held.subarray(32));
      return held.length >= 32 && digest(value).equals(held.subarray(0, 32)) ? value : undefined;
    },
    put: async (key, value) => {
      const file = fileOf(key);
      const part = `${file}.${machine}-${process.pid}-${count}.part`;
      onDisk("keep a result for later runs", file, () => {
        mkdirSync(folder, { recursive: true });
        if (count++ === 0) removeHalves(folder, machine);
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

/** Kept results, their halves, and what file managers leave in folders. */
const KEPT = /^[0-9a-f]{64}(\..*\.part)?$|^\.|^Thumbs\.db$|^desktop\.ini$/;

/**
 * Kept results need a folder of their own: those within the output would go with it when it is replaced, those among
 * other files would bury them. Throws `run.reuse-folder`.
 */
export function requireReuseFolder(folder: string, output: string): void {
  const refuse = (found: string) => {
    throw new InputError({
      name: "run.reuse-folder",
      expected: "a folder for kept results alone: absent, empty, or one that held them before",
      found,
      where: { file: folder === "" ? "--reuse" : folder },
      remedy: "name another folder, e.g. --reuse kept",
    });
  };
  if (folder.trim() === "") refuse("no name");
  const fromOutput = relative(resolve(output), resolve(folder));
  if (fromOutput === "" || !/^\.\.($|[\\/])|^[a-z]:/i.test(fromOutput))
    refuse("the output folder or one within it");
  const others = namesIn(folder).filter((name) => !KEPT.test(name));
  if (others.length > 0)
    refuse(`${others.length} other (${others.slice(0, 3).join(", ")}${others.length > 3 ? ", …" : ""})`);
}

function namesIn(folder: string): readonly string[] {
  try {
    return readdirSync(folder).sort();
  } catch (error) {
    if (codeOf(error) === "ENOENT") return [];
    throw machineError(error, "keep results for later runs in this folder", folder);
  }
}

/** A half-written result names its machine and process; it goes once that process is known to be gone. */
function removeHalves(folder: string, machine: string): void {
  for (const name of readdirSync(folder)) {
    const [, host, pid] = /\.([0-9a-f]{8})-(\d+)-\d+\.part$/.exec(name) ?? [];
    if (host === machine && isGone(Number(pid))) rmSync(join(folder, name), { force: true });
  }
}

function isGone(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return false;
  } catch (error) {
    return codeOf(error) === "ESRCH";
  }
}

function digest(bytes: Uint8Array): Buffer {
  return createHash("sha256").update(bytes).digest();
}
