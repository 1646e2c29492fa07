import {
  closeSync,
  mkdirSync,
  mkdtempSync,
  openSync,
  readFileSync,
  readSync,
  statSync,
  writeFileSync,
} from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { globSync } from "tinyglobby";
import { type Effects, type Files, silentProgress } from "../../src/effects/effects.ts";

/** A folder with the given files, and effects that read below it. */
export function folder(contents: Readonly<Record<string, string | Uint8Array>>): Effects {
  const root = mkdtempSync(join(tmpdir(), "covey-stations-"));
  for (const [name, content] of Object.entries(contents)) {
    mkdirSync(dirname(join(root, name)), { recursive: true });
    writeFileSync(join(root, name), content);
  }
  return effectsBelow(root);
}

export function effectsBelow(root: string): Effects {
  const files: Files = {
    list: async (patterns) =>
      [...new Set(globSync([...patterns], { cwd: root }))].sort((a, b) => (a < b ? -1 : 1)),
    readBytes: async (path) => readFileSync(join(root, path)),
    readText: async (path) => readFileSync(join(root, path), "utf8").replace(/^\uFEFF/, ""),
    open: (path) => {
      const handle = openSync(join(root, path), "r");
      return {
        path,
        size: statSync(join(root, path)).size,
        read: (offset, length) => {
          const out = new Uint8Array(length);
          if (readSync(handle, out, 0, length, offset) !== length) throw new Error("short read");
          return out;
        },
        close: () => closeSync(handle),
      };
    },
    absolute: (path) => join(root, path),
    identity: async (path) => ({ path, bytes: statSync(join(root, path)).size, sha256: "" }),
  };
  return {
    files,
    progress: silentProgress,
    clock: { now: () => 0 },
    parallel: { map: async () => [] },
    reuse: { get: async () => undefined, put: async () => {} },
    checkInterrupted: () => {},
  };
}
