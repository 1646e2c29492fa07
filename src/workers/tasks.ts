import { CoveyError, type ErrorFacts, type ErrorTag, InputError, MachineError } from "../errors.ts";

/** A function of one structured-cloneable value to another; pure, so that it may run anywhere and in any order. */
type Task = (input: never) => unknown;

/**
 * Named tasks that a worker can run, each loaded when it is first asked for. To add one, add its line:
 * `"room.task": () => import("../room/file.ts").then((room) => room.task),`
 */
const TASKS: Readonly<Record<string, () => Promise<Task>>> = {
  "example.sum-of-powers": () => import("./example.ts").then((room) => room.sumOfPowers),
  "compare.folds": () => import("../compare/fold.ts").then((room) => room.predictLeftOut),
  "screen.permutation": () => import("../screen/permutation.ts").then((room) => room.permuteYears),
  "simulate.resampling": () => import("../simulate/resampling.ts").then((room) => room.resampleStudies),
  "simulate.replicates": () => import("../simulate/replicate.ts").then((room) => room.simulateReplicates),
};

export interface TaskCall {
  readonly task: string;
  readonly input: unknown;
}

/** What comes back from a worker: errors as values, because structured cloning would strip them of their facts. */
export type TaskOutcome =
  | { readonly value: unknown }
  | { readonly failed: { readonly tag: ErrorTag; readonly facts: ErrorFacts } }
  | { readonly bug: { readonly message: string; readonly stack: string } };

/** Runs one task and tells how it went; never rejects. */
export async function runTask({ task, input }: TaskCall): Promise<TaskOutcome> {
  try {
    if (!Object.hasOwn(TASKS, task))
      throw new Error(`no task named ${JSON.stringify(task)} in workers/tasks.ts`);
    const run = await TASKS[task]();
    // The caller of Parallel.map vouches for the input's type; it is erased on its way through the table.
    return { value: await run(input as never) };
  } catch (error) {
    if (error instanceof CoveyError) return { failed: { tag: error.tag, facts: error.facts } };
    const { message, stack } = error instanceof Error ? error : new Error(String(error));
    return { bug: { message, stack: stack ?? message } };
  }
}

/** The value of an outcome; throws what the task threw. */
export function unwrap(outcome: TaskOutcome): unknown {
  if ("value" in outcome) return outcome.value;
  if ("failed" in outcome) {
    const { tag, facts } = outcome.failed;
    throw tag === "input"
      ? new InputError(facts)
      : tag === "machine"
        ? new MachineError(facts)
        : new CoveyError(tag, facts);
  }
  const bug = new Error(outcome.bug.message);
  bug.stack = outcome.bug.stack;
  throw bug;
}
