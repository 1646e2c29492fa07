/** Where in a user's material something was found. Every part that is known is said. */
export interface Place {
  readonly file?: string;
  readonly line?: number;
  readonly column?: number;
  /** A named part: a pipeline key path, a column and row, a covariate and interval. */
  readonly cell?: string;
}

/** What every covey error tells: what was expected, what was found, where, and what to do. */
export interface ErrorFacts {
  /** Stable name, `room.what`, e.g. `stations.column-missing`. */
  readonly name: string;
  readonly expected: string;
  readonly found: string;
  readonly where?: Place;
  readonly remedy: string;
}

export type ErrorTag = "input" | "machine" | "interrupted";

const EXIT: Readonly<Record<ErrorTag, number>> = { input: 2, machine: 3, interrupted: 130 };

/** The base of all errors that are not bugs; `tag` decides the exit code. */
export class CoveyError extends Error {
  readonly tag: ErrorTag;
  readonly facts: ErrorFacts;

  constructor(tag: ErrorTag, facts: ErrorFacts, cause?: unknown) {
    super(errorText(facts), cause === undefined ? undefined : { cause });
    this.tag = tag;
    this.facts = facts;
    this.name = "CoveyError";
  }

  get exitCode(): number {
    return EXIT[this.tag];
  }
}

/** The user's input is at fault (exit code 2). */
export class InputError extends CoveyError {
  constructor(facts: ErrorFacts, cause?: unknown) {
    super("input", facts, cause);
  }
}

/** The machine is at fault: disk, permission, network (exit code 3). */
export class MachineError extends CoveyError {
  constructor(facts: ErrorFacts, cause?: unknown) {
    super("machine", facts, cause);
  }
}

/** The user stopped the run (exit code 130). */
export class InterruptedError extends CoveyError {
  constructor() {
    super("interrupted", {
      name: "run.interrupted",
      expected: "the run to finish",
      found: "an interruption (Ctrl-C or a termination signal)",
      remedy: "nothing was half-written; run the same command again",
    });
  }
}

/** Does something; an InputError that does not say where is given this place. */
export function placed<Result>(where: Place, work: () => Result): Result {
  try {
    return work();
  } catch (error) {
    if (!(error instanceof InputError) || error.facts.where !== undefined) throw error;
    throw new InputError({ ...error.facts, where }, error);
  }
}

/** `file:line:column (cell)`, as far as it is known. */
export function placeText(where: Place | undefined): string {
  if (where === undefined) return "";
  const spot = [where.file, where.line, where.column].filter((part) => part !== undefined).join(":");
  if (where.cell === undefined) return spot;
  return spot === "" ? where.cell : `${spot} (${where.cell})`;
}

function errorText(facts: ErrorFacts): string {
  const where = placeText(facts.where);
  const head = where === "" ? "" : `${where}: `;
  return `${head}expected ${facts.expected}, found ${facts.found}; ${facts.remedy}`;
}
