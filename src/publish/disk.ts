/** Who holds a lock: enough to tell a living run from one that died, on this machine. */
export interface Owner {
  readonly host: string;
  readonly pid: number;
  /** What tells this process from a later one with the same number (boot and start time); empty if unknown. */
  readonly started: string;
}

/**
 * What publishing needs of a file system, handed in by `pipeline` so that a test can stop it after any step. Paths are
 * absolute. All is synchronous: between two steps nothing else of this process runs. Failures are MachineErrors.
 */
export interface Disk {
  /** The absolute path with symbolic links of its existing part resolved. */
  resolve(path: string): string;
  /** What stands at the path; a link is not followed. */
  kind(path: string): "file" | "folder" | "other" | undefined;
  /** Everything below a folder that is not itself a folder: paths relative to it, `/`, sorted by code unit. */
  listFiles(folder: string): readonly string[];
  read(path: string): Uint8Array;
  /** Writes a file, making its folders, and forces it to the disk. */
  write(path: string, bytes: Uint8Array): void;
  /** Makes a file that must not be there yet; false if it is. */
  create(path: string, bytes: Uint8Array): boolean;
  makeFolder(path: string): void;
  rename(from: string, to: string): void;
  /** Removes a file or a folder with all that is in it; nothing there is no failure. */
  remove(path: string): void;
  /** Forces a folder's list of names to the disk, where the system can. */
  syncFolder(path: string): void;
  self(): Owner;
  /** False only if the owner is known to be gone. */
  alive(owner: Owner): boolean;
  /** Runs `use` with a fresh folder for passing files to a library, and removes it afterwards. */
  scratch<Result>(use: (folder: string) => Promise<Result>): Promise<Result>;
}

/** Files to publish by relative path (`/` separators). */
export type FileSet = ReadonlyMap<string, Uint8Array>;
