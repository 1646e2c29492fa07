import { expect, test } from "vitest";
import { temporaryFolder } from "./covey.ts";
import { DIPPER, killRuns } from "./kills.ts";

// Twenty kills of a short study; two hundred of the demo: test/prove/kills.prove.ts.
test("twenty runs killed at random moments: afterwards the old output or the new one, never a mixture", async () => {
  const folder = temporaryFolder();
  const tally = await killRuns(20, 1, DIPPER, folder.path).finally(folder.remove);
  expect(tally.kills).toBeGreaterThanOrEqual(10);
  expect(tally.old + tally.fresh).toBe(tally.kills);
  expect(tally.verified).toBe(tally.kills);
  expect(tally.at["before writing"] + tally.at["writing the output"]).toBeGreaterThan(0);
}, 400_000);
