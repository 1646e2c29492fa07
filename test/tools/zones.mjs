// Runs the whole suite once in each of three time zones (behind UTC with daylight saving, UTC, and a zone of 45
// minutes on the other side of the date line), since nothing may depend on the machine's. The zone must be set before
// the process starts, so each pass is a process of its own. Ends with one line of totals.
import { spawn } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, relative } from "node:path";
import { stripVTControlCharacters } from "node:util";

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
/** What failed, told once more at the very end: of a long log often only its last lines are kept. */
const failures = [];

/** Each failed test, or file that could not be loaded, with the first lines of its message. */
function failuresOf(zone, result) {
  const whatFailed = (path, name, message) => {
    const told = stripVTControlCharacters(message ?? "")
      .split("\n")
      .slice(0, 6)
      .join("\n  ");
    return `${zone}  ${relative(process.cwd(), path)}  ${name}\n  ${told}`;
  };
  return result.testResults.flatMap((file) => {
    const tests = file.assertionResults.filter(({ status }) => status === "failed");
    if (tests.length === 0 && file.status === "failed")
      return [whatFailed(file.name, "(the file)", file.message)];
    return tests.map((one) => whatFailed(file.name, one.fullName, one.failureMessages[0]));
  });
}

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
    failures.push(...failuresOf(zone, result));
  } catch {
    broken = true;
  }
}
rmSync(folder, { recursive: true, force: true });
for (const failure of failures) console.log(`\n${failure}`);
console.log(`\n${passed} passed, ${failed} failed, ${skipped} skipped`);
process.exitCode = broken || failed > 0 || passed === 0 ? 1 : 0;
