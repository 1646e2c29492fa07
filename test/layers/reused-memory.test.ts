import { expect, test } from "vitest";
import { reusedMemory } from "../../src/layers/reused-memory.ts";

test("small pieces share one memory, of exactly the asked length; large ones have their own", () => {
  const memory = reusedMemory();
  const first = memory(1000);
  expect(first.length).toBe(1000);
  expect(memory(10).buffer).toBe(first.buffer);
  expect(memory(10).byteOffset).toBe(0);
  expect(memory(1001).length).toBe(1001);
  const large = memory(2 ** 22 + 1);
  expect(large.length).toBe(2 ** 22 + 1);
  expect(memory(2 ** 22 + 1).buffer).not.toBe(large.buffer);
  expect(memory(1001).buffer).not.toBe(large.buffer);
  expect(reusedMemory()(1000).buffer).not.toBe(memory(1000).buffer);
});
