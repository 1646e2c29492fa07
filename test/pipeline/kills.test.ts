import { expect, test } from "vitest";
import { killRuns } from "./kills.ts";

// Two hundred kills: test/prove/kills.prove.ts.
test("six runs killed at random moments: afterwards the old output or the new one, never a mixture", async () => {
  const { hit, old, fresh } = await killRuns(6, 1);
  expect(hit).toBeGreaterThanOrEqual(3);
  expect(old + fresh).toBe(hit);
}, 120_000);
