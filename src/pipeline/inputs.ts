import type { FileIdentity, Files } from "../effects/effects.ts";

/** Files as they are, remembering which ones were used. */
export interface RecordingFiles {
  readonly files: Files;
  /** Identities of all files used so far, sorted by path. */
  identities(): Promise<readonly FileIdentity[]>;
}

/** Every file whose content or path was handed out counts as an input of the run. */
export function recording(files: Files): RecordingFiles {
  const used = new Set<string>();
  const note = (path: string) => {
    used.add(path);
    return path;
  };
  return {
    files: {
      list: (patterns) => files.list(patterns),
      readBytes: (path) => files.readBytes(note(path)),
      readText: (path) => files.readText(note(path)),
      open: (path) => files.open(note(path)),
      absolute: (path) => files.absolute(note(path)),
      identity: (path) => files.identity(path),
      ...(files.remote === undefined ? {} : { remote: files.remote }),
    },
    identities: async () => {
      const paths = [...used].sort((a, b) => (a < b ? -1 : 1));
      const out: FileIdentity[] = [];
      for (const path of paths) out.push(await files.identity(path));
      return out;
    },
  };
}
