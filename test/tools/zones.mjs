// Runs the whole suite once in each of three time zones (behind UTC with daylight saving, UTC, and a zone of 45
// minutes on the other side of the date line), since nothing may depend on the machine's. The zone must be set before
// the process starts, so each pass is a process of its own. Ends with one line of totals.
import { spawn } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";

const ZONES = ["UTC", "America/Edmonton", "Pacific/Chatham"];
/** Tests of whole runs, processes, signals and the browser: slow, and the zone reaches them through the same code as the rest. */
const ONCE = [
  "test/commands/command-line.test.ts",
  "test/bad-input/hostile-values.test.ts",
  "test/pipeline/faults.test.ts",
  "test/pipeline/kills.test.ts",
  "test/pipeline/reuse.test.ts",
  "test/pipeline/invariance.test.ts",
  "test/report/page.browser.test.ts",
  "test/readme.test.ts",
  // Rooms of numbers, which know no dates: no zone can reach them.
  "test/collinearity/**",
  "test/compare/**",
  "test/components/**",
  "test/math/**",
  "test/screen/**",
  "test/simulate/**",
  "test/solve/**",
  "test/survival/**",
];
const extra = process.argv.slice(2);
const folder = mkdtempSync(join(tmpdir(), "covey-test-"));
let passed = 0;
let failed = 0;
let skipped = 0;
let broken = false;

for (const [i, zone] of ZONES.entries()) {
  const report = join(folder, `${i}.json`);
  console.log(`\n== ${zone}`);
  const args = [
    "vitest",
    "run",
    "--reporter=dot",
    "--reporter=json",
    `--outputFile.json=${report}`,
    ...(i === 0 ? [] : ONCE.map((file) => `--exclude=${file}`)),
    ...extra,
  ];
  const code = await new Promise((resolve) => {
    const child = spawn("npx", ["--no", ...args], { stdio: "inherit", env: { ...process.env, TZ: zone } });
    child.on("close", resolve);
  });
  broken ||= code !== 0;
  try {
    const result = JSON.parse(readFileSync(report, "utf8"));
    passed += result.numPassedTests;
    failed += result.numFailedTests;
    skipped += result.numPendingTests;
  } catch {
    broken = true;
  }
}
rmSync(folder, { recursive: true, force: true });
console.log(`\n${passed} passed, ${failed} failed, ${skipped} skipped`);
process.exitCode = broken || failed > 0 || passed === 0 ? 1 : 0;
