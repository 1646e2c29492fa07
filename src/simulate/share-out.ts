/** What work is handed to; an Effects is one. */
export interface Helpers {
  readonly parallel: {
    map<Input, Output>(task: string, inputs: readonly Input[], step?: Step): Promise<Output[]>;
  };
  readonly progress: { start(label: string, total: number): Step };
}

interface Step {
  tick(n?: number): void;
  done(): void;
}

/** Replicates a worker takes at a time. */
const CHUNK = 5;

/**
 * Does `replicates` replicates of every run by the task named, cut into chunks that workers take: for each run its results, in
 * the order of the replicates however the work was shared.
 */
export async function shareOut<Run, Result>(
  { parallel, progress }: Helpers,
  work: { readonly label: string; readonly task: string; readonly replicates: number },
  runs: readonly Run[],
): Promise<Result[][]> {
  const { label, task, replicates } = work;
  const chunks = runs.flatMap((run) =>
    Array.from({ length: Math.ceil(replicates / CHUNK) }, (_, i) => ({
      ...run,
      from: i * CHUNK,
      to: Math.min((i + 1) * CHUNK, replicates),
    })),
  );
  const step = progress.start(label, chunks.length);
  const parts = await parallel.map<(typeof chunks)[number], Result[]>(task, chunks, step);
  step.done();
  const all = parts.flat();
  return runs.map((_, i) => all.slice(i * replicates, (i + 1) * replicates));
}
