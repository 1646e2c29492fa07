import { createHash } from "node:crypto";
import { closeSync, fstatSync, openSync, readdirSync, readFileSync, readSync } from "node:fs";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import type { Effects, Files, RandomAccess } from "../../src/effects/effects.ts";
import { InputError } from "../../src/errors.ts";

export const DATA = fileURLToPath(new URL("../data", import.meta.url));

/** Files below a folder, as the pipeline supplies them, for tests. */
export function filesBelow(root: string): Files & { readonly opened: string[] } {
  const opened: string[] = [];
  return {
    opened,
    list: async (patterns) =>
      readdirSync(root, { recursive: true, encoding: "utf8" })
        .filter((path) => patterns.some((pattern) => pattern === path || globMatches(path, pattern)))
        .sort((a, b) => (a < b ? -1 : 1)),
    readBytes: async (path) => readFileSync(join(root, path)),
    readText: async (path) => readFileSync(join(root, path), "utf8"),
    absolute: (path) => join(root, path),
    identity: async (path) => {
      const bytes = readFileSync(join(root, path));
      return { path, bytes: bytes.length, sha256: createHash("sha256").update(bytes).digest("hex") };
    },
    open: (path) => {
      opened.push(path);
      return openBelow(root, path);
    },
  };
}

function openBelow(root: string, path: string): RandomAccess {
  const fd = openSync(join(root, path), "r");
  return {
    path,
    size: fstatSync(fd).size,
    read: (offset, length) => {
      const bytes = new Uint8Array(length);
      if (readSync(fd, bytes, 0, length, offset) !== length) throw shortRead(path);
      return bytes;
    },
    close: () => closeSync(fd),
  };
}

function shortRead(path: string): InputError {
  return new InputError({
    name: "files.short-read",
    expected: "more bytes",
    found: "the end of the file",
    where: { file: path },
    remedy: "fetch the file again",
  });
}

/** A file that lies in memory, with a count of what was read of it. */
export function inMemory(bytes: Uint8Array, path = "made.tif"): RandomAccess {
  return {
    path,
    size: bytes.length,
    read: (offset, length) => {
      if (offset + length > bytes.length) throw shortRead(path);
      return bytes.slice(offset, offset + length);
    },
    close: () => {},
  };
}

export interface TestEffects extends Effects {
  readonly kept: Map<string, Uint8Array>;
  readonly ticks: number[];
  readonly opened: string[];
}

export function effectsBelow(root: string, kept = new Map<string, Uint8Array>()): TestEffects {
  const ticks: number[] = [];
  const files = filesBelow(root);
  return {
    files,
    opened: files.opened,
    kept,
    ticks,
    progress: { start: () => ({ tick: (n = 1) => ticks.push(n), done: () => {} }) },
    clock: { now: () => 0 },
    parallel: {
      map: () => {
        throw new Error("not used");
      },
    },
    reuse: {
      get: async (key) => kept.get(key),
      put: async (key, value) => {
        kept.set(key, value);
      },
    },
    checkInterrupted: () => {},
  };
}

/** Enough of a file pattern for these tests: `*` within a name, `\` before a letter that is taken as such. */
function globMatches(path: string, pattern: string): boolean {
  const source = pattern
    .replace(/\\(.)/g, "$1")
    .split("*")
    .map((part) => part.replace(/[\\^$.+?()[\]{}|]/g, "\\$&"))
    .join("[^/]*");
  return new RegExp(`^${source}$`).test(path);
}
