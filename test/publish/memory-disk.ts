import { posix } from "node:path";
import type { Disk, Owner } from "../../src/publish/disk.ts";

/** Thrown in the place of a kill: from then on the disk does nothing more for this process. */
export class Killed extends Error {}

/** A file system in memory that outlives the processes that use it. */
export class MemoryTree {
  readonly files = new Map<string, Uint8Array>();
  readonly folders = new Set<string>(["/"]);
  readonly living = new Set<number>();

  has(path: string): boolean {
    return this.files.has(path) || this.folders.has(path);
  }

  under(path: string): string[] {
    return [...this.files.keys()].filter((one) => one.startsWith(`${path}/`)).sort();
  }

  /** Everything, as text, for comparison. */
  picture(): Record<string, string> {
    return Object.fromEntries(
      [...this.files].map(([path, bytes]) => [path, new TextDecoder().decode(bytes)] as const).sort(),
    );
  }
}

/**
 * A disk for process `pid` that is killed at its `kill`-th changing step: `torn` before the step has done more than a
 * half of its work, otherwise after it.
 */
export function memoryDisk(
  tree: MemoryTree,
  pid: number,
  kill = Number.POSITIVE_INFINITY,
  torn = false,
): Disk {
  let steps = 0;
  let dead = false;
  tree.living.add(pid);
  const alive = () => {
    if (dead) throw new Killed();
  };
  const step = (half: () => void, whole: () => void) => {
    alive();
    if (++steps >= kill) {
      dead = true;
      tree.living.delete(pid);
      if (torn) half();
      else whole();
      throw new Killed();
    }
    whole();
  };
  const addFolder = (path: string) => {
    for (let at = path; at !== "/"; at = posix.dirname(at)) tree.folders.add(at);
  };
  const put = (path: string, bytes: Uint8Array) => {
    addFolder(posix.dirname(path));
    tree.files.set(path, bytes);
  };
  const drop = (path: string, some: (i: number) => boolean) => {
    const inside = [path, ...tree.under(path)].filter((one) => tree.files.has(one));
    inside.forEach((one, i) => some(i) && tree.files.delete(one));
    if (inside.some((one) => tree.files.has(one))) return;
    for (const one of [...tree.folders])
      if (one === path || one.startsWith(`${path}/`)) tree.folders.delete(one);
  };
  return {
    resolve: (path) => path,
    kind: (path) => {
      alive();
      return tree.files.has(path) ? "file" : tree.folders.has(path) ? "folder" : undefined;
    },
    listFiles: (folder) => {
      alive();
      return tree.under(folder).map((path) => path.slice(folder.length + 1));
    },
    read: (path) => {
      alive();
      const bytes = tree.files.get(path);
      if (bytes === undefined) throw new Error(`no ${path}`);
      return bytes;
    },
    write: (path, bytes) =>
      step(
        () => put(path, bytes.slice(0, bytes.length / 2)),
        () => put(path, bytes),
      ),
    create: (path, bytes) => {
      alive();
      if (tree.has(path)) return false;
      step(
        () => put(path, bytes.slice(0, bytes.length / 2)),
        () => put(path, bytes),
      );
      return true;
    },
    makeFolder: (path) =>
      step(
        () => {},
        () => addFolder(path),
      ),
    rename: (from, to) =>
      step(
        () => {},
        () => {
          if (!tree.has(from)) throw new Error(`no ${from}`);
          // As rename(2): a folder may not take the place of one that holds something.
          if (tree.folders.has(to)) throw new Error(`${to} is there`);
          for (const one of [from, ...tree.under(from)]) {
            const bytes = tree.files.get(one);
            if (bytes === undefined) continue;
            tree.files.delete(one);
            put(to + one.slice(from.length), bytes);
          }
          for (const one of [...tree.folders])
            if (one === from || one.startsWith(`${from}/`)) {
              tree.folders.delete(one);
              addFolder(to + one.slice(from.length));
            }
        },
      ),
    remove: (path) =>
      step(
        () => drop(path, (i) => i % 2 === 0),
        () => drop(path, () => true),
      ),
    syncFolder: () => alive(),
    self: (): Owner => ({ host: "here", pid, started: "" }),
    alive: (owner) => tree.living.has(owner.pid),
    scratch: async () => {
      throw new Error("no scratch folder in memory");
    },
  };
}
