import { beforeAll, describe, expect, test } from "vitest";
import { parallelTasks } from "../../src/pipeline/effects/parallel.ts";
import type { SumsInput } from "../../src/workers/example.ts";
import { ensureBuilt } from "./built.ts";

beforeAll(() => ensureBuilt("workers/entry.ts"));

const TASK = "example.sum-of-powers";
const never = new AbortController().signal;
const parallel = (workers: number, signal = never) =>
  parallelTasks({ workers, signal, now: () => performance.now() });

/** Tasks of very different length, the long ones first, so that results come back out of order. */
const inputs: SumsInput[] = Array.from({ length: 40 }, (_, i) => ({
  values: Float64Array.from({ length: (40 - i) * 500 }, (_, j) => Math.sin(i * 1000 + j)),
  power: 1 + (i % 3),
}));

describe("parallel tasks", () => {
  test("the same results in the order of the inputs on 0, 1, 2 and 3 workers", async () => {
    const expected = inputs.map(({ values, power }) =>
      values.reduce((sum, value) => sum + value ** power, 0),
    );
    for (const workers of [0, 1, 2, 3])
      expect(await parallel(workers).map<SumsInput, number>(TASK, inputs), `${workers} workers`).toEqual(
        expected,
      );
  });

  test("each finished task ticks once", async () => {
    for (const workers of [1, 2]) {
      let ticks = 0;
      await parallel(workers).map(TASK, inputs, { tick: (n = 1) => (ticks += n), done: () => {} });
      expect(ticks).toBe(inputs.length);
    }
  });

  test("of several failures the first in order is thrown, on any number of workers", async () => {
    const bad = inputs.map((one, i) => (i === 30 || i === 5 ? { ...one, power: i + 0.5 } : one));
    for (const workers of [1, 2])
      await expect(parallel(workers).map(TASK, bad)).rejects.toThrow("expected a whole power, found 5.5");
  });

  test("an unknown task is told by name", async () => {
    for (const workers of [1, 2])
      for (const task of ["no.such", "constructor", "__proto__"])
        await expect(parallel(workers).map(task, inputs)).rejects.toThrow(`no task named "${task}"`);
  });

  test("nothing to do needs no worker", async () => {
    expect(await parallel(8).map(TASK, [])).toEqual([]);
  });

  test("an interruption ends the map with run.interrupted, before and during it", async () => {
    const long = Array.from({ length: 4000 }, () => inputs[0]);
    const interrupted = expect.objectContaining({ tag: "interrupted", exitCode: 130 });
    for (const workers of [1, 2]) {
      await expect(parallel(workers, AbortSignal.abort()).map(TASK, long)).rejects.toEqual(interrupted);
      const stop = new AbortController();
      setTimeout(() => stop.abort(), 30);
      await expect(parallel(workers, stop.signal).map(TASK, long)).rejects.toEqual(interrupted);
    }
  });

  test("an interruption while the workers are being set up is not lost", async () => {
    const long = Array.from({ length: 400 }, () => inputs[0]);
    for (const workers of [1, 2]) {
      const stop = new AbortController();
      const mapped = parallel(workers, stop.signal).map(TASK, long);
      stop.abort();
      await expect(mapped).rejects.toMatchObject({ tag: "interrupted" });
    }
  });
});
