import { createHash } from "node:crypto";
import * as fs from "node:fs";
import { isAbsolute, join, relative, sep } from "node:path";
import { globSync } from "tinyglobby";
import { utf8Text } from "../../data/utf8.ts";
import type { FileIdentity, Files, RandomAccess } from "../../effects/effects.ts";
import { InputError, MachineError } from "../../errors.ts";
import { codeOf, machineError, onDisk } from "./machine.ts";

/** Bytes read at once while hashing, always into the same memory: new memory for each file takes nearly as long as hashing. */
const BLOCK = 1 << 18;
const block = new Uint8Array(BLOCK);

/**
 * The files below a data folder. Nothing outside it can be reached: not by `..`, an absolute path or an address, and
 * not through a symbolic link. Throws (InputError) `files.data-folder`, `files.outside`, `files.remote`,
 * `files.missing`, `files.not-a-file`, `files.short-read`; (MachineError) `files.changed` and the system's failures.
 */
export function filesBelow(dataFolder: string): Files {
  const root = rootOf(dataFolder);
  const seen = new Set<string>();
  const locate = (path: string) => locateIn(root, path, seen);
  return {
    list: async (patterns) => {
      const found = new Set(patterns.flatMap((pattern) => match(root, pattern)));
      const paths = [...found].sort();
      for (const path of paths) {
        locate(path);
        seen.add(path);
      }
      return paths;
    },
    readBytes: async (path) => readWhole(locate(path), path),
    readText: async (path) => utf8Text(readWhole(locate(path), path), path),
    open: (path) => openAt(locate(path), path),
    absolute: locate,
    identity: async (path) => identify(locate(path), path),
  };
}

function rootOf(dataFolder: string): string {
  let found = "no such folder";
  try {
    const root = fs.realpathSync.native(dataFolder);
    if (fs.statSync(root).isDirectory()) return root;
    found = "a file";
  } catch (error) {
    if (codeOf(error) !== "ENOENT" && codeOf(error) !== "ENOTDIR")
      throw machineError(error, "open the data folder", dataFolder);
  }
  throw new InputError({
    name: "files.data-folder",
    expected: "`data:` to name a folder",
    found,
    where: { file: dataFolder },
    remedy: "write the folder that holds the input files, relative to the pipeline file",
  });
}

/** Refuses what is not a plain path downwards. */
function requireBelow(path: string): void {
  if (/^[a-z][a-z0-9+.-]+:\/\//i.test(path))
    throw new InputError({
      name: "files.remote",
      expected: "a file below the data folder",
      found: `the address ${JSON.stringify(path)}`,
      remedy: "download the file into the data folder first",
    });
  const parts = path.split(/[/\\]/);
  if (
    path === "" ||
    isAbsolute(path) ||
    parts[0].includes(":") ||
    parts.includes("..") ||
    path.includes("\0")
  )
    throw outside(path, "a path that leads out of it");
}

function outside(path: string, found: string): InputError {
  return new InputError({
    name: "files.outside",
    expected: "a file below the data folder, written with / and without ..",
    found,
    where: { file: path },
    remedy: "move the file below the data folder, or let `data:` name a folder that holds all inputs",
  });
}

/** The file's real absolute path. */
function locateIn(root: string, path: string, seen: Set<string>): string {
  requireBelow(path);
  let real: string;
  try {
    real = fs.realpathSync.native(join(root, path));
  } catch (error) {
    const code = codeOf(error);
    if (code === "ELOOP") throw outside(path, "a link that leads back to itself");
    if ((code === "ENOENT" || code === "ENOTDIR") && !seen.has(path)) throw missing(path);
    throw machineError(error, "find", path);
  }
  if (!isInside(root, real)) throw outside(path, "a link that leads out of it");
  // A file that was there once and is gone later vanished while covey ran, which is not a slip in the pipeline file.
  seen.add(path);
  return real;
}

function missing(path: string): InputError {
  return new InputError({
    name: "files.missing",
    expected: "a file of this name in the data folder",
    found: "none",
    where: { file: path },
    remedy: "check the spelling (capitals count) and the `data:` folder",
  });
}

function isInside(root: string, real: string): boolean {
  const way = relative(root, real);
  return way !== ".." && !way.startsWith(`..${sep}`) && !isAbsolute(way);
}

/** Files that match a pattern, relative to the root. A name that exists as written is not read as a pattern. */
function match(root: string, pattern: string): string[] {
  requireBelow(pattern);
  const literal = fs.statSync(join(root, pattern), { throwIfNoEntry: false });
  if (literal?.isFile())
    return [
      pattern
        .split("/")
        .filter((part) => part !== "." && part !== "")
        .join("/"),
    ];
  const failures: unknown[] = [];
  const paths = globSync(pattern, {
    cwd: root,
    expandDirectories: false,
    onlyFiles: true,
    fs: {
      // The library passes over folders it cannot read, and follows links anywhere: both are seen to here.
      readdirSync: ((folder: string) => {
        const shown = relative(root, folder).split(sep).join("/") || ".";
        try {
          if (!isInside(root, fs.realpathSync.native(folder)))
            throw outside(shown, "a link that leads out of it");
          return fs.readdirSync(folder, { withFileTypes: true }).map((entry) => tamed(root, folder, entry));
        } catch (error) {
          failures.push(machineError(error, "list", shown));
          throw error;
        }
        // The adapter's type has all of readdir's overloads; the library calls this one only.
      }) as unknown as typeof fs.readdirSync,
    },
  });
  if (failures.length > 0) throw failures[0];
  return paths;
}

/**
 * An entry of a folder as the search may see it. A link out of the root, or to a folder it lies in, is shown as a file:
 * it is not followed, and if the pattern asks for it, it is refused by name.
 */
function tamed(root: string, folder: string, entry: fs.Dirent): fs.Dirent {
  if (!entry.isSymbolicLink()) return entry;
  const link = join(folder, entry.name);
  let real: string | undefined;
  try {
    real = fs.realpathSync.native(link);
  } catch {
    // A link to nothing: shown as a file too, so that it is missed by name.
  }
  if (real !== undefined && isInside(root, real) && !isInside(real, fs.realpathSync.native(folder)))
    return entry;
  return Object.assign(Object.create(entry) as fs.Dirent, {
    isFile: () => true,
    isSymbolicLink: () => false,
    isDirectory: () => false,
  });
}

/** What shows that a file was written to: its size, time of change and place on the disk. */
function stamp(file: number): string {
  const { size, mtimeNs, ino } = fs.fstatSync(file, { bigint: true });
  return `${size} ${mtimeNs} ${ino}`;
}

/** What shows that the file at an absolute path was written to. */
export function stampAt(absolute: string): string {
  const stats = onDisk("look at", absolute, () => fs.statSync(absolute, { bigint: true }));
  return `${stats.size} ${stats.mtimeNs} ${stats.ino}`;
}

/** The error of a file that another program writes to while it is used. */
export function changedWhileRead(path: string): MachineError {
  return new MachineError({
    name: "files.changed",
    expected: "the file to stay as it is while it is read",
    found: "that another program has written to it",
    where: { file: path },
    remedy: "wait until the file is finished, and run the same command again",
  });
}

function openAt(real: string, path: string): RandomAccess {
  const file = onDisk("open", path, () => fs.openSync(real, "r"));
  let open = true;
  const close = () => {
    if (open) fs.closeSync(file);
    open = false;
  };
  try {
    const stats = onDisk("open", path, () => fs.fstatSync(file));
    if (!stats.isFile()) throw notAFile(path);
    const before = stamp(file);
    const size = stats.size;
    return {
      path,
      size,
      read: (offset, length, into) => {
        const here = Math.max(0, Math.min(length, size - offset));
        const bytes =
          into !== undefined && into.length >= here ? into.subarray(0, here) : new Uint8Array(here);
        let got = 0;
        while (got < bytes.length) {
          const n = onDisk("read", path, () =>
            fs.readSync(file, bytes, got, bytes.length - got, offset + got),
          );
          if (n === 0) throw changedWhileRead(path);
          got += n;
        }
        if (got < length || offset < 0) throw shortRead(path, offset, length, size);
        return bytes;
      },
      close: () => {
        if (!open) return;
        const same = stamp(file) === before;
        close();
        if (!same) throw changedWhileRead(path);
      },
    };
  } catch (error) {
    close();
    throw error;
  }
}

function notAFile(path: string): InputError {
  return new InputError({
    name: "files.not-a-file",
    expected: "a file",
    found: "a folder or a device",
    where: { file: path },
    remedy: "name the file itself",
  });
}

function shortRead(path: string, offset: number, length: number, size: number): InputError {
  return new InputError({
    name: "files.short-read",
    expected: `${length} bytes from byte ${offset} on`,
    found: `a file that ends at byte ${size}`,
    where: { file: path },
    remedy: "the file is cut off: copy or download it again",
  });
}

function readWhole(real: string, path: string): Uint8Array {
  const file = openAt(real, path);
  try {
    return file.read(0, file.size);
  } finally {
    file.close();
  }
}

/** SHA-256 by blocks, so that a large layer need not fit into memory. */
function identify(real: string, path: string): FileIdentity {
  const file = openAt(real, path);
  try {
    const hash = createHash("sha256");
    for (let at = 0; at < file.size; at += BLOCK)
      hash.update(file.read(at, Math.min(BLOCK, file.size - at), block));
    return { path, bytes: file.size, sha256: hash.digest("hex") };
  } finally {
    file.close();
  }
}
