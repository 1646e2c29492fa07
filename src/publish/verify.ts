import { join } from "node:path";
import { InputError } from "../errors.ts";
import type { Disk } from "./disk.ts";
import { sha256 } from "./hash.ts";
import { RECORD_FILE, recordOf } from "./run-record.ts";

/** One way in which an output folder departs from its record. */
export interface Departure {
  readonly path: string;
  readonly what: "changed" | "missing" | "not in the record";
  /** e.g. `1204 bytes, sha256 3f…`; empty where there is nothing to say. */
  readonly expected: string;
  readonly found: string;
}

export interface Verification {
  readonly ok: boolean;
  /** Files the record names. */
  readonly recorded: number;
  /** SHA-256 of the record itself, which nothing in the folder vouches for; empty where there is none. */
  readonly record: string;
  readonly departures: readonly Departure[];
}

/**
 * Compares every file of an output folder with its record, by SHA-256. Throws `publish.record-missing` and
 * `publish.record-unreadable`.
 */
export function verifyOutput(disk: Disk, path: string): Verification {
  const folder = disk.resolve(path);
  if (disk.kind(join(folder, RECORD_FILE)) !== "file")
    throw new InputError({
      name: "publish.record-missing",
      expected: `an output folder of covey with its ${RECORD_FILE}`,
      found: disk.kind(folder) === "folder" ? "a folder without one" : "no such folder",
      where: { file: folder },
      remedy: "name the output folder of a finished run",
    });
  return verifyFolder(disk, folder);
}

/** As `verifyOutput`, but an absent or torn record is an answer (`ok` false), not an error. */
export function verifyFolder(disk: Disk, folder: string): Verification {
  const recordPath = join(folder, RECORD_FILE);
  if (disk.kind(recordPath) !== "file")
    return { ok: false, recorded: 0, record: "", departures: [missing(RECORD_FILE)] };
  const recordBytes = disk.read(recordPath);
  const { outputs } = recordOf(recordBytes, recordPath);
  const departures: Departure[] = outputs.flatMap((one) => {
    const file = join(folder, one.path);
    const kind = disk.kind(file);
    if (kind === undefined) return [missing(one.path)];
    if (kind !== "file") return [changed(one.path, one, "not a file")];
    const bytes = disk.read(file);
    const found = { bytes: bytes.length, sha256: sha256(bytes) };
    return found.sha256 === one.sha256 ? [] : [changed(one.path, one, digestText(found))];
  });
  const known = new Set([RECORD_FILE, ...outputs.map((one) => one.path)]);
  for (const path of disk.listFiles(folder))
    if (!known.has(path)) departures.push({ path, what: "not in the record", expected: "", found: "a file" });
  departures.sort((a, b) => (a.path < b.path ? -1 : 1));
  return {
    ok: departures.length === 0,
    recorded: outputs.length,
    record: sha256(recordBytes),
    departures,
  };
}

interface Digest {
  readonly bytes: number;
  readonly sha256: string;
}

function digestText(digest: Digest): string {
  return `${digest.bytes} bytes, sha256 ${digest.sha256.slice(0, 12)}…`;
}

function missing(path: string): Departure {
  return { path, what: "missing", expected: "a file", found: "nothing" };
}

function changed(path: string, expected: Digest, found: string): Departure {
  return { path, what: "changed", expected: digestText(expected), found };
}
