import { basename, dirname, join } from "node:path";
import { InputError } from "../errors.ts";
import type { Disk, FileSet } from "./disk.ts";
import { type Lock, takeLock } from "./lock.ts";
import { RECORD_FILE, recordOf } from "./run-record.ts";
import { verifyFolder } from "./verify.ts";

/** What the start of a run did about a run that was stopped before: nothing, or brought the swap to an end. */
export type Recovery = "nothing" | "undone" | "finished";

/** An output folder that this run alone may write, until it is closed. */
export interface OutputFolder {
  readonly path: string;
  readonly recovery: Recovery;
  /** Puts `files` in the place of what the folder held; all of them or, after a failure, none. */
  publish(files: FileSet, check?: () => void): void;
  /** Gives the lock back. To be called whatever happened. */
  close(): void;
}

interface Names {
  readonly folder: string;
  readonly next: string;
  readonly previous: string;
  readonly journal: string;
  readonly lock: string;
}

/** The journal's two states. `writing`: NAME.next is unfinished. `swapping`: it is whole and on the disk. */
type Step = "writing" | "swapping";

/** Names that file managers and office programs leave in folders; they are nobody's work. */
const DROPPINGS = /(^|\/)(\.DS_Store|Thumbs\.db|desktop\.ini|~\$[^/]*|\.~lock\.[^/]*)$/;

/**
 * Takes the lock of an output folder, brings an interrupted swap to an end and makes sure that the folder may be
 * replaced: it is absent, empty, or an earlier output of covey with nothing else in it.
 * Throws `publish.locked`, `publish.folder-not-ours`, `publish.folder-has-others`, `publish.name-taken`,
 * `publish.tangled` (InputError) and the disk's MachineErrors.
 */
export function openOutput(disk: Disk, path: string): OutputFolder {
  const names = namesOf(disk, path);
  disk.makeFolder(dirname(names.folder));
  const lock = takeLock(disk, names.lock);
  try {
    const recovery = recover(disk, names);
    refuseForeign(disk, names);
    return {
      path: names.folder,
      recovery,
      publish: (files, check) => publish(disk, names, lock, files, check ?? (() => {})),
      close: () => lock.release(),
    };
  } catch (error) {
    lock.release();
    throw error;
  }
}

/** Only the bringing to an end of an interrupted swap, for commands that read an output folder. */
export function recoverOutput(disk: Disk, path: string): Recovery {
  const names = namesOf(disk, path);
  const begun = [names.journal, `${names.journal}.part`];
  if (begun.every((path) => disk.kind(path) === undefined)) return "nothing";
  const lock = takeLock(disk, names.lock);
  try {
    return recover(disk, names);
  } finally {
    lock.release();
  }
}

function namesOf(disk: Disk, path: string): Names {
  const folder = disk.resolve(path);
  const beside = (what: string) => join(dirname(folder), `${basename(folder)}.${what}`);
  return {
    folder,
    next: beside("next"),
    previous: beside("previous"),
    journal: beside("journal"),
    lock: beside("lock"),
  };
}

/**
 * Write NAME.next whole; say so in the journal; NAME → NAME.previous; NAME.next → NAME; remove NAME.previous; remove
 * the journal. The journal is there before NAME.next and goes after NAME.previous, so that whatever stands beside the
 * folder without a journal is somebody else's and is never removed.
 */
function publish(disk: Disk, names: Names, lock: Lock, files: FileSet, check: () => void): void {
  const paths = [...files.keys()].sort();
  paths.forEach(requireRelative);
  const record = files.get(RECORD_FILE);
  if (record === undefined) throw new Error(`an output needs its ${RECORD_FILE}`);
  recordOf(record, RECORD_FILE);
  try {
    check();
    writeJournal(disk, names, "writing");
    disk.makeFolder(names.next);
    for (const path of paths) {
      check();
      disk.write(join(names.next, path), bytesOf(files, path));
    }
    disk.syncFolder(names.next);
    check();
    lock.check();
    writeJournal(disk, names, "swapping");
  } catch (error) {
    undoQuietly(disk, names);
    throw error;
  }
  finish(disk, names);
}

function finish(disk: Disk, names: Names): void {
  if (disk.kind(names.folder) !== undefined) disk.rename(names.folder, names.previous);
  disk.rename(names.next, names.folder);
  disk.syncFolder(dirname(names.folder));
  clear(disk, names);
}

/** Removes what is left beside the folder, the journal last. */
function clear(disk: Disk, names: Names): void {
  disk.remove(names.next);
  disk.remove(names.previous);
  disk.remove(names.journal);
  disk.syncFolder(dirname(names.folder));
}

function recover(disk: Disk, names: Names): Recovery {
  disk.remove(`${names.journal}.part`);
  const has = (path: string) => disk.kind(path) !== undefined;
  if (!has(names.journal)) {
    for (const path of [names.next, names.previous]) if (has(path)) throw nameTaken(path);
    return "nothing";
  }
  const step = readJournal(disk, names);
  if (step === "writing") {
    // Nothing was renamed yet: NAME.previous, if there is one, was never ours.
    disk.remove(names.next);
    disk.remove(names.journal);
    return "undone";
  }
  const [folder, next, previous] = [has(names.folder), has(names.next), has(names.previous)];
  if (folder && next && previous) throw tangled(names);
  if (next && verifyFolder(disk, names.next).ok) {
    finish(disk, names);
    return "finished";
  }
  if (next || !folder) {
    if (!folder && previous) disk.rename(names.previous, names.folder);
    clear(disk, names);
    return "undone";
  }
  clear(disk, names);
  return "finished";
}

function refuseForeign(disk: Disk, names: Names): void {
  const kind = disk.kind(names.folder);
  if (kind === undefined) return;
  if (kind !== "folder") throw notOurs(names.folder, "something that is not a folder");
  const held = disk.listFiles(names.folder).filter((path) => !DROPPINGS.test(path));
  if (held.length === 0) return;
  if (!held.includes(RECORD_FILE)) throw notOurs(names.folder, `files without a ${RECORD_FILE}`);
  const record = recordOf(disk.read(join(names.folder, RECORD_FILE)), join(names.folder, RECORD_FILE));
  const known = new Set([RECORD_FILE, ...record.outputs.map((one) => one.path)]);
  const others = held.filter((path) => !known.has(path));
  if (others.length === 0) return;
  throw new InputError({
    name: "publish.folder-has-others",
    expected: "nothing but covey's own files in the output folder, which is replaced as a whole",
    found: `${others.length} other (${others.slice(0, 3).join(", ")}${others.length > 3 ? ", …" : ""})`,
    where: { file: names.folder },
    remedy: "move them elsewhere, or choose another output",
  });
}

function notOurs(folder: string, found: string): InputError {
  return new InputError({
    name: "publish.folder-not-ours",
    expected: "an output folder that is absent, empty, or an earlier output of covey",
    found,
    where: { file: folder },
    remedy: "choose another output: this folder would be replaced as a whole",
  });
}

function nameTaken(path: string): InputError {
  return new InputError({
    name: "publish.name-taken",
    expected: "no file or folder of this name, which covey needs while it writes",
    found: "one that covey did not leave there",
    where: { file: path },
    remedy: "rename it, or choose another output",
  });
}

function tangled(names: Names): InputError {
  return new InputError({
    name: "publish.tangled",
    expected: "at most two of the folder, its .next and its .previous after an interrupted run",
    found: "all three",
    where: { file: names.folder },
    remedy: "keep the one you want under the folder's name, then delete the others and the .journal",
  });
}

function bytesOf(files: FileSet, path: string): Uint8Array {
  return files.get(path) ?? new Uint8Array();
}

function requireRelative(path: string): void {
  const parts = path.split("/");
  if (parts.some((part) => part === "" || part === "." || part === ".." || /[\\:\p{Cc}]/u.test(part)))
    throw new Error(`not a path below an output folder: ${JSON.stringify(path)}`);
}

/** The journal comes into being whole: written beside its place, then renamed. */
function writeJournal(disk: Disk, names: Names, step: Step): void {
  disk.write(`${names.journal}.part`, new TextEncoder().encode(`${step}\n`));
  disk.rename(`${names.journal}.part`, names.journal);
  disk.syncFolder(dirname(names.journal));
}

function readJournal(disk: Disk, names: Names): Step {
  const text = new TextDecoder().decode(disk.read(names.journal)).trim();
  if (text === "writing" || text === "swapping") return text;
  throw nameTaken(names.journal);
}

/** After a failure: what is half-written goes; if even that fails the next run does it, by the journal. */
function undoQuietly(disk: Disk, names: Names): void {
  try {
    disk.remove(`${names.journal}.part`);
    disk.remove(names.next);
    disk.remove(names.journal);
  } catch {
    // The first failure is the one to tell.
  }
}
