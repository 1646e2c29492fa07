import { expect, test } from "vitest";
import { peakMemoryOf } from "./peak-memory.ts";

test("memory that a script takes is seen, also if it is given back at once", () => {
  const { said, marks, kilobytes } = peakMemoryOf(`
    mark("before");
    new Uint8Array(400_000_000).fill(1);
    mark("after");
    console.log("done");`);
  expect(said).toBe("done");
  expect(marks.map(([name]) => name)).toEqual(["before", "after"]);
  expect(marks[1][1] - marks[0][1]).toBeGreaterThan(380_000);
  expect(kilobytes).toBeGreaterThanOrEqual(marks[1][1]);
});

test("memory of the process that asks is not", () => {
  const own = new Uint8Array(400_000_000).fill(1);
  expect(process.memoryUsage().rss).toBeGreaterThan(own.length);
  const { kilobytes } = peakMemoryOf("");
  expect(kilobytes).toBeLessThan(200_000);
  // A process takes some: else the number would not be one of memory.
  expect(kilobytes).toBeGreaterThan(30_000);
  expect(own[own.length - 1]).toBe(1);
});
