import { existsSync } from "node:fs";
import { fileURLToPath } from "node:url";
import type { Parallel } from "../../effects/effects.ts";
import { InterruptedError, MachineError } from "../../errors.ts";
import { runTask, type TaskCall, type TaskOutcome, unwrap } from "../../workers/tasks.ts";

/** While tasks run in this process, how long it works before it listens for an interruption, in milliseconds. */
const LISTEN_EVERY = 50;

export interface ParallelOptions {
  /** Threads; with 0 or 1 all runs in this process. */
  readonly workers: number;
  readonly signal: AbortSignal;
  /** Milliseconds, for pacing only. */
  readonly now: () => number;
}

/**
 * Runs named tasks here or on threads. Results are in the order of the inputs; if tasks fail, the first one in that
 * order is the one that is thrown, so neither depends on the number of workers.
 */
export function parallelTasks(options: ParallelOptions): Parallel {
  return {
    map: async <Input, Output>(task: string, inputs: readonly Input[], step?: { tick(n?: number): void }) => {
      const calls = inputs.map((input) => ({ task, input }));
      const tick = () => step?.tick();
      const threads = Math.min(options.workers, calls.length);
      const outcomes =
        threads <= 1 ? await inProcess(calls, options, tick) : await onThreads(calls, threads, options, tick);
      // The table of tasks erases types; the caller names the one that fits its task.
      return outcomes.map(unwrap) as Output[];
    },
  };
}

async function inProcess(
  calls: readonly TaskCall[],
  { signal, now }: ParallelOptions,
  tick: () => void,
): Promise<TaskOutcome[]> {
  const outcomes: TaskOutcome[] = [];
  let listened = now();
  for (const call of calls) {
    if (now() - listened > LISTEN_EVERY) {
      await new Promise((resume) => setImmediate(resume));
      listened = now();
    }
    if (signal.aborted) throw new InterruptedError();
    const outcome = await runTask(call);
    outcomes.push(outcome);
    if (!("value" in outcome)) break;
    tick();
  }
  return outcomes;
}

async function onThreads(
  calls: readonly TaskCall[],
  threads: number,
  { signal }: ParallelOptions,
  tick: () => void,
): Promise<TaskOutcome[]> {
  const { Tinypool } = await import("tinypool");
  // Asked only now: an interruption while the pool's code was being loaded has no listener yet and would be lost.
  if (signal.aborted) throw new InterruptedError();
  const pool = new Tinypool({ filename: workerFile(), minThreads: threads, maxThreads: threads });
  let stopped: Promise<void> | undefined;
  const stop = () => {
    stopped ??= pool.destroy();
    return stopped;
  };
  // Not the pool's own signal option: it puts a listener for every task on the signal.
  const onInterrupt = () => void stop();
  signal.addEventListener("abort", onInterrupt, { once: true });
  try {
    return await Promise.all(
      calls.map(async (call) => {
        const outcome: TaskOutcome = await pool.run(call);
        if ("value" in outcome) tick();
        return outcome;
      }),
    );
  } catch (error) {
    if (signal.aborted) throw new InterruptedError();
    throw lostWorker(error);
  } finally {
    signal.removeEventListener("abort", onInterrupt);
    await stop();
  }
}

/** Worker threads run compiled JavaScript; from the sources (under a test runner) the build's is taken. */
export function workerFile(from = import.meta.url): string {
  const fromSource = from.endsWith(".ts");
  const file = fileURLToPath(
    new URL(fromSource ? "../../../dist/workers/entry.js" : "../../workers/entry.js", from),
  );
  if (existsSync(file)) return file;
  throw new MachineError({
    name: "machine.not-built",
    expected: "the compiled worker",
    found: "no such file",
    where: { file },
    remedy: "build first: npm run build",
  });
}

/** A MachineError where a thread ended early (memory, a signal); any other error as it is. */
export function lostWorker(error: unknown): unknown {
  if (!(error instanceof Error) || !/terminat|exit|memory/i.test(error.message)) return error;
  return new MachineError(
    {
      name: "machine.worker-lost",
      expected: "the worker threads to finish",
      found: `a thread that ended early (${error.message})`,
      remedy: "run with fewer workers; each needs memory of its own",
    },
    error,
  );
}
