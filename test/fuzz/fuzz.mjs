// Fuzzing for a bounded time: node test/fuzz/fuzz.mjs [--seconds 60] [--seed N]. Readers, pipeline file and likelihood get
// changed inputs; each must be read or refused by name, within a limit of time. What breaks is written to corpus/, where it
// stays and is tried first ever after. Ends with counts; exit code 1 if anything broke.
import { createHash } from "node:crypto";
import { readdirSync, readFileSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { parseArgs } from "node:util";
import { Worker } from "node:worker_threads";

/** The longest that one input may take, so long that only a hang reaches it. */
const MOST_MS = 30_000;
const corpus = fileURLToPath(new URL("corpus/", import.meta.url));
const { values } = parseArgs({ options: { seconds: { type: "string" }, seed: { type: "string" } } });
const seconds = Number(values.seconds ?? 60);
const seed = Number(values.seed ?? Date.now() % 2 ** 32);
console.log(`fuzzing for ${seconds} s, --seed ${seed}`);

const kept = readdirSync(corpus)
  .filter((name) => name.endsWith(".input"))
  .sort()
  .map((name) => ({
    name: name.replace(/\.[0-9a-f]+\.input$/, "").replaceAll("_", " "),
    bytes: readFileSync(corpus + name),
  }));
const worker = new Worker(new URL("worker.mjs", import.meta.url), { workerData: { seed, seconds, kept } });
let broken = 0;
let last;
let lastAt = Date.now();

function keep(target, bytes, why) {
  broken++;
  const mark = createHash("sha256").update(bytes).digest("hex").slice(0, 12);
  const name = `${target.replaceAll(" ", "_")}.${mark}.input`;
  if (broken <= 20) {
    writeFileSync(corpus + name, bytes);
    console.error(`\n${target}: ${why}\n  kept as test/fuzz/corpus/${name}`);
  }
}

const watch = setInterval(() => {
  if (last === undefined || Date.now() - lastAt < MOST_MS) return;
  keep(last.began, last.bytes, `did not end within ${MOST_MS / 1000} s`);
  process.exit(1);
}, 1000);

worker.on("message", (message) => {
  if (message.began !== undefined) [last, lastAt] = [message, Date.now()];
  else if (message.broke !== undefined) keep(message.broke, message.bytes, message.error);
  else {
    const rows = Object.entries(message.tally);
    for (const [name, one] of rows)
      console.log(
        `${name.padEnd(18)} ${one.executions} executions, ${one.read} read, ${one.refused} refused`,
      );
    const all = rows.reduce((sum, [, one]) => sum + one.executions, 0);
    console.log(`${all} executions, ${broken} broke, ${kept.length} kept inputs tried first`);
  }
});
worker.on("error", (error) => {
  console.error(error);
  broken++;
});
worker.on("exit", (code) => {
  clearInterval(watch);
  process.exitCode = broken > 0 || code !== 0 ? 1 : 0;
});
