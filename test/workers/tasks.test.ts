import { expect, test } from "vitest";
import { CoveyError, InputError, InterruptedError, MachineError } from "../../src/errors.ts";
import entry from "../../src/workers/entry.ts";
import { runTask, unwrap } from "../../src/workers/tasks.ts";

test("a task's value comes back", async () => {
  const input = { values: Float64Array.of(1, 2, 3), power: 2 };
  expect(unwrap(await entry({ task: "example.sum-of-powers", input }))).toBe(14);
});

test("covey's errors keep their facts across a structured clone, bugs their message and stack", async () => {
  const facts = { name: "x.y", expected: "a", found: "b", where: { file: "f", line: 3 }, remedy: "c" };
  for (const tag of ["input", "machine", "interrupted"] as const) {
    const outcome = structuredClone({ failed: { tag, facts } });
    const error = (() => {
      try {
        return unwrap(outcome);
      } catch (thrown) {
        return thrown;
      }
    })();
    expect(error).toBeInstanceOf({ input: InputError, machine: MachineError, interrupted: CoveyError }[tag]);
    expect(error).toMatchObject({ tag, facts, exitCode: { input: 2, machine: 3, interrupted: 130 }[tag] });
  }
  expect(new InterruptedError().exitCode).toBe(130);
  const bug = structuredClone(
    await runTask({ task: "example.sum-of-powers", input: { values: [], power: 0.5 } }),
  );
  expect(() => unwrap(bug)).toThrow("expected a whole power, found 0.5");
});
