/** A file opened for reading at positions. Reads are exact: fewer bytes than asked for is an error. */
export interface RandomAccess {
  readonly path: string;
  readonly size: number;
  /**
   * Exactly `length` bytes from `offset`; throws InputError `files.short-read` if the file ends before. They may stand
   * at the beginning of `into`, if that is given and long enough, and are then gone once it is used again.
   */
  read(offset: number, length: number, into?: Uint8Array): Uint8Array;
  close(): void;
}

/** What identifies a file's content without trusting its name. */
export interface FileIdentity {
  readonly path: string;
  readonly bytes: number;
  readonly sha256: string;
  /** Of a file at an address, of which only parts were read: what the server marks its version by. */
  readonly version?: string;
}

/** Input files, all below the pipeline's data folder; paths are relative to it and use `/`. */
export interface Files {
  /** Files that match any of the patterns, sorted by code unit, without repeats. A literal name is a pattern too. */
  list(patterns: readonly string[]): Promise<readonly string[]>;
  readBytes(path: string): Promise<Uint8Array>;
  /** UTF-8 (with or without BOM); other encodings are the table readers' work. */
  readText(path: string): Promise<string>;
  open(path: string): RandomAccess;
  /** The absolute path, for libraries that open files themselves. */
  absolute(path: string): string;
  identity(path: string): Promise<FileIdentity>;
  /** Files at addresses, for layers that allow it. */
  readonly remote?: Remote;
}

/** Parts of files at addresses. */
export interface Remote {
  /** `length` bytes from a place on (fewer at the end), the file's size, and what marks its version. */
  range(
    address: string,
    from: number,
    length: number,
  ): Promise<{ readonly bytes: Uint8Array; readonly size: number; readonly version: string }>;
}

export interface ProgressStep {
  /** `n` more units are done. */
  tick(n?: number): void;
  done(): void;
}

export interface Progress {
  start(label: string, total: number): ProgressStep;
}

export interface Clock {
  /** Milliseconds, for durations only; no result may depend on it. */
  now(): number;
}

/** Named tasks that a worker can run; the table of them is `workers/tasks.ts`. */
export interface Parallel {
  /** Results in the order of the inputs, whatever the number of workers. */
  map<Input, Output>(task: string, inputs: readonly Input[], step?: ProgressStep): Promise<Output[]>;
}

/** Earlier results by content key. */
export interface Reuse {
  get(key: string): Promise<Uint8Array | undefined>;
  put(key: string, value: Uint8Array): Promise<void>;
}

/** All that touches the world, handed in by `pipeline`. */
export interface Effects {
  readonly files: Files;
  readonly progress: Progress;
  readonly clock: Clock;
  readonly parallel: Parallel;
  readonly reuse: Reuse;
  /** Throws InterruptedError once the user has asked to stop. */
  checkInterrupted(): void;
}

export const silentProgress: Progress = {
  start: () => ({ tick: () => {}, done: () => {} }),
};
