import { CoveyError, MachineError } from "../../errors.ts";

interface Words {
  readonly name: string;
  readonly found: string;
  readonly remedy: string;
}

const FULL: Words = {
  name: "machine.disk-full",
  found: "no space left on the disk",
  remedy: "free some space, or choose another disk, and run the same command again",
};
const DENIED: Words = {
  name: "machine.permission",
  found: "permission denied",
  remedy: "ask for access to it, or choose another place",
};
const MANY: Words = {
  name: "machine.too-many-files",
  found: "too many files open at once",
  remedy: "close other programs, or raise the limit of open files",
};
const NO_FOLDER: Words = {
  name: "machine.not-a-folder",
  found: "a file where a folder should be",
  remedy: "rename the file, or choose another place",
};

/** What the operating system's error codes mean to a person. */
const WORDS: Readonly<Record<string, Words>> = {
  ENOSPC: FULL,
  EDQUOT: { ...FULL, found: "the disk quota used up" },
  EFBIG: { ...FULL, found: "a file larger than the disk takes" },
  EACCES: DENIED,
  EPERM: DENIED,
  EROFS: {
    name: "machine.read-only",
    found: "a disk that can only be read",
    remedy: "choose a place that can be written",
  },
  ENOENT: {
    name: "machine.vanished",
    found: "nothing there any more",
    remedy: "leave the files in place while covey runs, and run the same command again",
  },
  EMFILE: MANY,
  ENFILE: MANY,
  EBUSY: {
    name: "machine.busy",
    found: "held by another program",
    remedy: "close the program that has it open, and run the same command again",
  },
  ENAMETOOLONG: {
    name: "machine.name-too-long",
    found: "a name longer than the disk takes",
    remedy: "choose a shorter path",
  },
  ENOTDIR: NO_FOLDER,
  // From making a folder whose name a file has.
  EEXIST: NO_FOLDER,
};

/** The system's code of an error, if it has one. */
export function codeOf(error: unknown): string | undefined {
  const code = error instanceof Error && "code" in error ? error.code : undefined;
  return typeof code === "string" ? code : undefined;
}

/** A MachineError in words for an error of the file system; errors that are not of the system stay as they are. */
export function machineError(error: unknown, doing: string, path: string): unknown {
  if (error instanceof CoveyError) return error;
  const code = codeOf(error);
  if (code === undefined || !/^E[A-Z0-9]+$/.test(code)) return error;
  const words = WORDS[code] ?? {
    name: "machine.disk",
    found: `an error of the disk (${code})`,
    remedy: "check the disk, and run the same command again",
  };
  const facts = { name: words.name, expected: `to ${doing}`, found: words.found, where: { file: path } };
  return new MachineError({ ...facts, remedy: words.remedy }, error);
}

/** Does something with a file; the system's failures become MachineErrors that name it. */
export function onDisk<Result>(doing: string, path: string, act: () => Result): Result {
  try {
    return act();
  } catch (error) {
    throw machineError(error, doing, path);
  }
}
