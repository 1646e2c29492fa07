import { expect, test } from "vitest";
import { DEMO, killRuns } from "../pipeline/kills.ts";

// The longer form of test/pipeline/kills.test.ts. Enough kills that some fall into the swap of the folders itself.
test("two hundred kills of the demo at random moments leave the old output or the new one, whole", async () => {
  const tally = await killRuns(200, 2, DEMO);
  console.log(JSON.stringify(tally));
  expect(tally.hit).toBeGreaterThan(120);
  expect(tally.old).toBeGreaterThan(20);
  expect(tally.fresh).toBeGreaterThan(0);
  expect(tally.leftovers).toBeGreaterThan(20);
});
