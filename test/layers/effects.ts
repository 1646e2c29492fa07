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

/** Effects over files in memory. */
export function effectsOf(contents: Readonly<Record<string, Uint8Array>>): TestEffects {
  const base = effectsBelow(DATA);
  const bytesOf = (path: string) => {
    const bytes = contents[path];
    if (bytes === undefined) throw new Error(`no file ${path}`);
    return bytes;
  };
  const files: Files = {
    ...base.files,
    list: async (patterns) =>
      Object.keys(contents)
        .filter((path) => patterns.some((pattern) => pattern === path || globMatches(path, pattern)))
        .sort((a, b) => (a < b ? -1 : 1)),
    readBytes: async (path) => bytesOf(path),
    readText: async (path) => new TextDecoder().decode(bytesOf(path)),
    open: (path) => {
      base.opened.push(path);
      return inMemory(bytesOf(path), path);
    },
    identity: async (path) => {
      const bytes = bytesOf(path);
      return { path, bytes: bytes.length, sha256: createHash("sha256").update(bytes).digest("hex") };
    },
  };
  return { ...base, files };
}

/** A little-endian classic TIFF made by hand: SHORT, LONG or DOUBLE tags and blocks, to lie with. */
export function madeTiff(
  tags: Readonly<Record<number, readonly number[]>>,
  blocks: readonly Uint8Array[],
): Uint8Array {
  const entries = Object.entries(tags)
    .map(([tag, values]) => ({
      tag: Number(tag),
      values,
      double: [33550, 33922, 34264].includes(Number(tag)),
    }))
    .sort((a, b) => a.tag - b.tag);
  const dataAt = 8 + 2 + entries.length * 12 + 4;
  const room = ({ values, double }: (typeof entries)[number]) =>
    Math.max(values.length, blocks.length) * (double ? 8 : 4);
  let end = dataAt + entries.reduce((sum, entry) => sum + room(entry), 0);
  const placed = blocks.map((block) => {
    const at = end;
    end += block.length;
    return at;
  });
  const out = new Uint8Array(end);
  const view = new DataView(out.buffer);
  out.set([0x49, 0x49, 42, 0, 8, 0, 0, 0]);
  view.setUint16(8, entries.length, true);
  let data = dataAt;
  entries.forEach(({ tag, values, double }, i) => {
    const at = 10 + i * 12;
    const numbers = tag === 273 || tag === 324 ? (values.length > 0 ? values : placed) : values;
    view.setUint16(at, tag, true);
    view.setUint16(at + 2, double ? 12 : 4, true);
    view.setUint32(at + 4, numbers.length, true);
    if (!double && numbers.length === 1) {
      view.setUint32(at + 8, numbers[0], true);
      return;
    }
    view.setUint32(at + 8, data, true);
    for (const value of numbers) {
      if (double) view.setFloat64(data, value, true);
      else view.setUint32(data, value, true);
      data += double ? 8 : 4;
    }
  });
  blocks.forEach((block, i) => {
    out.set(block, placed[i]);
  });
  return out;
}
