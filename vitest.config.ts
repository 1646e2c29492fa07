import { defineConfig } from "vitest/config";

export default defineConfig({
  // Files share a process and its loaded modules: tests are pure, and loading the rooms anew for each of 150 files took
  // most of the time.
  test: {
    include: ["test/**/*.test.ts"],
    setupFiles: ["test/support/property-seed.ts"],
    testTimeout: 300_000,
    hookTimeout: 300_000,
    pool: "forks",
    maxWorkers: 2,
    isolate: false,
  },
});
