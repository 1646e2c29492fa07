import { availableParallelism } from "node:os";
import type { Clock, Effects, Progress } from "../effects/effects.ts";
import { InterruptedError } from "../errors.ts";
import { filesBelow } from "./effects/files.ts";
import { parallelTasks } from "./effects/parallel.ts";
import { nodeRemote } from "./effects/remote.ts";
import { noReuse, reuseIn } from "./effects/reuse.ts";

export { nodeDisk } from "./effects/disk.ts";

export interface NodeEffectsOptions {
  /** Absolute, or relative to the working directory. */
  readonly dataFolder: string;
  /** Worker threads; 0 or 1: none. */
  readonly workers: number;
  /** How progress is shown; drawing it is the terminal's work, so the caller hands it in. */
  readonly progress: Progress;
  /** Where earlier results are kept; without it nothing is reused. */
  readonly reuseFolder?: string;
  /** Aborted once the user has asked to stop. */
  readonly signal: AbortSignal;
}

/** What a run needs of the world, by Node. This file alone reads the clock and the environment. */
export function nodeEffects(options: NodeEffectsOptions): Effects {
  const { signal } = options;
  return {
    files: { ...filesBelow(options.dataFolder), remote: nodeRemote },
    progress: options.progress,
    clock: nodeClock,
    parallel: parallelTasks({ workers: options.workers, signal, now: nodeClock.now }),
    reuse: options.reuseFolder === undefined ? noReuse : reuseIn(options.reuseFolder),
    checkInterrupted: () => {
      if (signal.aborted) throw new InterruptedError();
    },
  };
}

const nodeClock: Clock = { now: () => performance.now() };

/** What the process's surroundings say about how to speak to the person. */
export interface Surroundings {
  /** A continuous-integration service runs covey: nothing that moves. */
  readonly ci: boolean;
  /** Colours may be used on a terminal (NO_COLOR is empty and the terminal is not a dumb one). */
  readonly colour: boolean;
  /** Major version of Node. */
  readonly nodeMajor: number;
  /** Worker threads to use if nothing is said: one for each processor that is left to us. */
  readonly workers: number;
}

/** Read once, by the command line. */
export function surroundings(): Surroundings {
  const { CI, NO_COLOR, TERM } = process.env;
  return {
    ci: CI !== undefined && CI !== "" && CI !== "false" && CI !== "0",
    colour: (NO_COLOR === undefined || NO_COLOR === "") && TERM !== "dumb",
    nodeMajor: Number(process.versions.node.split(".")[0]),
    workers: availableParallelism(),
  };
}
