import { expect, test } from "vitest";
import { DIPPER, killRuns } from "./kills.ts";

// Twenty kills of a short study; two hundred of the demo: test/prove/kills.prove.ts.
test("twenty runs killed at random moments: afterwards the old output or the new one, never a mixture", async () => {
  const { hit, old, fresh } = await killRuns(20, 1, DIPPER);
  expect(hit).toBeGreaterThanOrEqual(10);
  expect(old + fresh).toBe(hit);
}, 400_000);
