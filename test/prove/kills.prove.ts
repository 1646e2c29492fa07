import { existsSync, mkdirSync, readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, expect, test } from "vitest";
import { temporaryFolder } from "../pipeline/covey.ts";
import { DEMO, type Killed, killRuns } from "../pipeline/kills.ts";

// The longer form of test/pipeline/kills.test.ts, in eight parts. With a folder's path in KILLS_FOLDER its state is kept there,
// parts that are done are not done again, and `-t "part 3"` does one alone.

const PARTS = 8;
const EACH = 25;
const given = process.env.KILLS_FOLDER;
const folder = given === undefined ? temporaryFolder() : { path: given, remove: () => {} };
afterAll(folder.remove);
const noteOf = (part: number) => join(folder.path, `part-${part}.json`);

for (let part = 1; part <= PARTS; part++)
  test(`part ${part} of ${PARTS}: ${EACH} kills of the demo leave the old output or the new one, whole`, async () => {
    mkdirSync(folder.path, { recursive: true });
    if (!existsSync(noteOf(part))) {
      const tally = await killRuns(EACH, part, DEMO, folder.path);
      writeFileSync(noteOf(part), JSON.stringify(tally));
    }
    const { kills, old, fresh, verified, right } = noted(part);
    expect({ sum: old + fresh, verified, right }).toEqual({ sum: kills, verified: kills, right: kills });
  });

test("the kills fell on every part of a run", () => {
  const parts = Array.from({ length: PARTS }, (_, i) => i + 1).filter((part) => existsSync(noteOf(part)));
  const all = parts.map(noted);
  const sum = (of: (one: Killed) => number) => all.reduce((total, one) => total + of(one), 0);
  const total = {
    kills: sum((one) => one.kills),
    missed: sum((one) => one.missed),
    cold: sum((one) => one.cold),
    "before writing": sum((one) => one.at["before writing"]),
    "writing the output": sum((one) => one.at["writing the output"]),
    swapping: sum((one) => one.at.swapping),
    "after the swap": sum((one) => one.at["after the swap"]),
    "a kept result half-written": sum((one) => one.keptHalf),
    old: sum((one) => one.old),
    fresh: sum((one) => one.fresh),
    verified: sum((one) => one.verified),
    right: sum((one) => one.right),
  };
  console.log(JSON.stringify(total));
  if (parts.length < PARTS) return;
  expect(total.kills).toBeGreaterThanOrEqual(200);
  expect(total["writing the output"]).toBeGreaterThan(20);
  expect(total.old).toBeGreaterThan(20);
  expect(total.fresh).toBeGreaterThan(0);
});

function noted(part: number): Killed {
  return JSON.parse(readFileSync(noteOf(part), "utf8")) as Killed;
}
