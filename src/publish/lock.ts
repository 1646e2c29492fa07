import { InputError, MachineError } from "../errors.ts";
import type { Disk, Owner } from "./disk.ts";

/** A held lock. */
export interface Lock {
  /** Throws `publish.lock-lost` if another run has taken the lock in the meantime. */
  check(): void;
  release(): void;
}

/**
 * Takes the lock file at `path`. A lock whose owner is known to be dead is set aside and taken. Throws
 * `publish.locked` (InputError) while another run holds it.
 *
 * Two runs that find the same dead lock at the same moment could both set it aside; the slower one would then remove
 * the faster one's new lock. `check`, called just before the swap, makes the loser stop before it changes anything.
 */
export function takeLock(disk: Disk, path: string): Lock {
  const self = disk.self();
  const mine = new TextEncoder().encode(`${JSON.stringify(self)}\n`);
  for (let attempt = 0; attempt < 3; attempt++) {
    if (disk.create(path, mine)) return heldLock(disk, path, mine);
    const holder = readOwner(disk, path);
    if (holder !== undefined && disk.alive(holder)) throw locked(path, holder);
    disk.remove(path);
  }
  throw locked(path, undefined);
}

function heldLock(disk: Disk, path: string, mine: Uint8Array): Lock {
  const isMine = () => disk.kind(path) === "file" && sameBytes(disk.read(path), mine);
  return {
    check: () => {
      if (isMine()) return;
      throw new MachineError({
        name: "publish.lock-lost",
        expected: "this run alone to write its output folder",
        found: "the lock taken by another run",
        where: { file: path },
        remedy: "run the command again when the other run has ended",
      });
    },
    release: () => {
      if (isMine()) disk.remove(path);
    },
  };
}

function locked(path: string, holder: Owner | undefined): InputError {
  const who = holder === undefined ? "another run" : `process ${holder.pid} on ${holder.host}`;
  return new InputError({
    name: "publish.locked",
    expected: "no other run writing this output folder",
    found: `a lock held by ${who}`,
    where: { file: path },
    remedy: "wait for it to end or choose another output; delete the lock file if no such run exists",
  });
}

/** The owner a lock names; undefined for one that was torn off while being written (its writer is dead). */
function readOwner(disk: Disk, path: string): Owner | undefined {
  if (disk.kind(path) !== "file") return undefined;
  try {
    const value: unknown = JSON.parse(new TextDecoder().decode(disk.read(path)));
    if (typeof value !== "object" || value === null) return undefined;
    const { host, pid, started } = value as Record<string, unknown>;
    if (typeof host !== "string" || typeof pid !== "number" || typeof started !== "string") return undefined;
    return { host, pid, started };
  } catch (error) {
    if (error instanceof SyntaxError) return undefined;
    throw error;
  }
}

function sameBytes(a: Uint8Array, b: Uint8Array): boolean {
  return a.length === b.length && a.every((byte, i) => byte === b[i]);
}
