import type { FileIdentity, Files, Remote } from "../effects/effects.ts";
import { changedWhileRead } from "./effects/files.ts";
import { changedAtAddress } from "./effects/remote.ts";

/** Files as they are, remembering which ones were used. */
export interface RecordingFiles {
  readonly files: Files;
  /** Identities of all files used so far, sorted by path. */
  identities(): Promise<readonly FileIdentity[]>;
}

/** Stands for the hash of a file at an address: only the parts that places need are fetched. */
const IN_PARTS = "not known: read in parts";

/**
 * Every file whose content, path or identity was handed out counts as an input of the run. `stampOf` tells cheaply whether
 * a file was written to (size, time of change): a file that is not at the end what it was when it was first used would
 * make the record untrue. Throws `files.changed` (MachineError) then. Files at addresses are recorded by size and by the
 * version their server names; `network.changed` (MachineError) where that changes within the run.
 */
export function recording(files: Files, stampOf: (absolute: string) => string): RecordingFiles {
  const used = new Map<string, string>();
  const fetched = new Map<string, FileIdentity>();
  // Hashed once a run: the stamp at the end shows that a file is still what it was when that was done.
  const hashed = new Map<string, FileIdentity>();
  const identity = async (path: string) => {
    const known = hashed.get(path) ?? (await files.identity(path));
    hashed.set(path, known);
    return known;
  };
  // What stands on a server has no stamp.
  const stamp = (path: string) =>
    /^[a-z][a-z0-9+.-]+:\/\//i.test(path) ? "" : stampOf(files.absolute(path));
  const note = (path: string) => {
    if (!used.has(path)) used.set(path, stamp(path));
    return path;
  };
  return {
    files: {
      list: (patterns) => files.list(patterns),
      readBytes: (path) => files.readBytes(note(path)),
      readText: (path) => files.readText(note(path)),
      open: (path) => files.open(note(path)),
      absolute: (path) => files.absolute(note(path)),
      identity: (path) => identity(note(path)),
      ...(files.remote === undefined ? {} : { remote: watched(files.remote, fetched) }),
    },
    identities: async () => {
      const sorted = [...used].sort(([a], [b]) => (a < b ? -1 : 1));
      const out: FileIdentity[] = [...fetched.values()];
      for (const [path, first] of sorted) {
        out.push(await identity(path));
        if (stamp(path) !== first) throw changedWhileRead(path);
      }
      return out.sort((a, b) => (a.path < b.path ? -1 : 1));
    },
  };
}

/** Addresses, remembering which were read and in which version. */
function watched(remote: Remote, fetched: Map<string, FileIdentity>): Remote {
  return {
    range: async (address, from, length) => {
      const got = await remote.range(address, from, length);
      const { size, version } = got;
      const known = fetched.get(address);
      if (known !== undefined && known.version !== version) throw changedAtAddress(address);
      fetched.set(address, { path: address, bytes: size, sha256: IN_PARTS, version });
      return got;
    },
  };
}
