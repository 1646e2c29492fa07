import { PassThrough } from "node:stream";
import { expect, test } from "vitest";
import { silentProgress } from "../../src/effects/effects.ts";
import {
  type ProgressStream,
  progressText,
  spanText,
  terminalProgress,
} from "../../src/terminal/progress.ts";

function screen(isTTY: boolean, columns: number) {
  const stream = new PassThrough();
  const held: string[] = [];
  stream.on("data", (chunk) => held.push(String(chunk)));
  // readline, through which the bar moves the cursor, only needs `write`.
  return { stream: Object.assign(stream, { isTTY, columns }) as ProgressStream, text: () => held.join("") };
}

test("nothing is written into a pipe, under continuous integration, or on a terminal without width", () => {
  for (const [isTTY, columns, ci] of [
    [false, 80, false],
    [true, 80, true],
    [true, 0, false],
    [true, 39, false],
  ] as const) {
    const { stream, text } = screen(isTTY, columns);
    expect(terminalProgress(stream, ci)).toBe(silentProgress);
    const step = terminalProgress(stream, ci).start("reading", 3);
    step.tick();
    step.done();
    expect(text()).toBe("");
  }
});

test("on a terminal a stage is drawn and cleared; a stage within a stage gives the line back", async () => {
  const { stream, text } = screen(true, 80);
  const progress = terminalProgress(stream, false);
  const outer = progress.start("screen", 4);
  outer.tick(2);
  const inner = progress.start("permutations", 10);
  inner.tick(10);
  inner.done();
  outer.tick(2);
  outer.done();
  outer.done();
  outer.tick();
  await new Promise((done) => setImmediate(done));
  const drawn = text();
  const first = [...drawn.matchAll(/(screen|permutations) +[■·]+ +(\d+) %/g)].map(
    (one) => `${one[1]} ${one[2]}`,
  );
  expect(first[0]).toBe("screen 0");
  expect(first).toContain("permutations 0");
  expect(first.slice(first.lastIndexOf("permutations 0") + 1)).toContain("screen 50");
  // ECMA-48 §8.3.41: EL, erase in line; the last thing that is done to the line.
  expect(drawn.slice(drawn.lastIndexOf("%"))).toContain(`${String.fromCharCode(27)}[0K`);
});

test("the line", () => {
  expect(progressText("screen          ", 0.5, 125, 80)).toBe(
    "screen           ■■■■■■■■■■■■■■■···············  50 %  2 min 5 s left",
  );
  expect(progressText("x", 0, Number.POSITIVE_INFINITY, 80)).toBe(`x ${"·".repeat(30)}   0 %`);
  for (const width of [40, 50, 60, 80, 200])
    for (const share of [0, 0.001, 0.999, 1])
      expect(progressText("permutations    ", share, 86399, width).length).toBeLessThan(width);
});

test("spans of time", () => {
  expect([0, 8.4, 60, 125, 3600, 11_400, -1].map(spanText)).toEqual([
    "0 s",
    "8 s",
    "1 min",
    "2 min 5 s",
    "1 h",
    "3 h 10 min",
    "0 s",
  ]);
});
