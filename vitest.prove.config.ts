import { defineConfig } from "vitest/config";

/** Long proofs: simulations over thousands of data sets. Run once, quoted in DEVELOPERS.md. */
export default defineConfig({
  test: {
    include: ["test/prove/**/*.prove.ts"],
    testTimeout: 3_600_000,
    pool: "forks",
    reporters: ["verbose"],
  },
});
