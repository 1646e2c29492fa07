import * as fs from "node:fs";
import { hostname, tmpdir } from "node:os";
import { basename, dirname, join, resolve } from "node:path";
import type { Disk, Owner } from "../../publish/disk.ts";
import { codeOf, machineError, onDisk } from "./machine.ts";

/** The disk of this machine, for publishing. */
export function nodeDisk(): Disk {
  return {
    resolve: (path) => onDisk("reach this path", path, () => realPath(resolve(path))),
    kind,
    listFiles: (folder) => onDisk("list", folder, () => below(folder, "").sort()),
    read: (path) => onDisk("read", path, () => fs.readFileSync(path)),
    write: (path, bytes) =>
      onDisk("write", path, () => {
        fs.mkdirSync(dirname(path), { recursive: true });
        writeThrough(path, bytes, "w");
      }),
    create: (path, bytes) => {
      try {
        writeThrough(path, bytes, "wx");
        return true;
      } catch (error) {
        if (codeOf(error) === "EEXIST") return false;
        throw machineError(error, "make", path);
      }
    },
    makeFolder: (path) => onDisk("make the folder", path, () => void fs.mkdirSync(path, { recursive: true })),
    rename: (from, to) => onDisk(`rename to ${basename(to)}`, from, () => fs.renameSync(from, to)),
    remove: (path) =>
      onDisk("remove", path, () => fs.rmSync(path, { recursive: true, force: true, maxRetries: 3 })),
    syncFolder,
    self: () => ({ host: hostname(), pid: process.pid, started: startOf(process.pid) }),
    alive,
    scratch: async (use) => {
      const folder = onDisk("make a scratch folder in", tmpdir(), () =>
        fs.mkdtempSync(join(tmpdir(), "covey-")),
      );
      try {
        return await use(folder);
      } finally {
        fs.rmSync(folder, { recursive: true, force: true });
      }
    },
  };
}

/** Links of the part that exists are followed; the rest is taken as written. */
function realPath(path: string): string {
  try {
    return fs.realpathSync(path);
  } catch (error) {
    const parent = dirname(path);
    if (codeOf(error) !== "ENOENT" || parent === path) throw error;
    return join(realPath(parent), basename(path));
  }
}

function kind(path: string): "file" | "folder" | "other" | undefined {
  const stats = onDisk("look at", path, () => fs.lstatSync(path, { throwIfNoEntry: false }));
  if (stats === undefined) return undefined;
  return stats.isFile() ? "file" : stats.isDirectory() ? "folder" : "other";
}

function below(folder: string, prefix: string): string[] {
  return fs
    .readdirSync(join(folder, prefix), { withFileTypes: true })
    .flatMap((entry) =>
      entry.isDirectory() ? below(folder, `${prefix}${entry.name}/`) : [`${prefix}${entry.name}`],
    );
}

function writeThrough(path: string, bytes: Uint8Array, flag: "w" | "wx"): void {
  const file = fs.openSync(path, flag);
  try {
    let written = 0;
    while (written < bytes.length) written += fs.writeSync(file, bytes, written);
    fs.fsyncSync(file);
  } finally {
    fs.closeSync(file);
  }
}

/** Some systems (Windows, network disks) cannot force a folder's names to the disk; that is no failure. */
function syncFolder(path: string): void {
  try {
    const folder = fs.openSync(path, "r");
    try {
      fs.fsyncSync(folder);
    } finally {
      fs.closeSync(folder);
    }
  } catch (error) {
    const code = codeOf(error);
    if (code === "EIO" || code === "ENOSPC") throw machineError(error, "write", path);
  }
}

/**
 * Boot and start time of a process where the system tells them (Linux: /proc), so that a number that was given to
 * another process after a restart is not taken for the old run.
 */
function startOf(pid: number): string {
  try {
    const boot = fs.readFileSync("/proc/sys/kernel/random/boot_id", "utf8").trim();
    // Field 22 of the line; the second field, the program's name in brackets, may itself hold blanks.
    const line = fs.readFileSync(`/proc/${pid}/stat`, "utf8");
    const fields = line.slice(line.lastIndexOf(")") + 2).split(" ");
    return `${boot} ${fields[19]}`;
  } catch {
    return "";
  }
}

/** A run on another machine cannot be asked, so it counts as alive. */
function alive(owner: Owner): boolean {
  if (owner.host !== hostname()) return true;
  try {
    process.kill(owner.pid, 0);
  } catch (error) {
    if (codeOf(error) === "ESRCH") return false;
  }
  const started = startOf(owner.pid);
  return owner.started === "" || started === "" || owner.started === started;
}
