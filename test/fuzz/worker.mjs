// One thread that runs targets on changed inputs. It tells the main thread of every input before it runs it, so that an
// input it never comes back from is known.
import { parentPort, workerData } from "node:worker_threads";
import { CoveyError } from "../../dist/errors.js";
import { mutate, sequence } from "./mutate.mjs";
import { TARGETS } from "./targets.mjs";

const { seed, seconds, kept } = workerData;
const random = sequence(seed);
const until = performance.now() + 1000 * seconds;
const tally = Object.fromEntries(TARGETS.map(({ name }) => [name, { executions: 0, refused: 0, read: 0 }]));

async function once(target, bytes) {
  const count = tally[target.name];
  count.executions++;
  parentPort.postMessage({ began: target.name, bytes });
  try {
    await target.run(Buffer.from(bytes));
    count.read++;
  } catch (error) {
    if (error instanceof CoveyError && error.exitCode === 2) count.refused++;
    else
      parentPort.postMessage({
        broke: target.name,
        bytes,
        error: error instanceof Error ? error.stack : String(error),
      });
  }
}

// What was found before comes first, unchanged.
for (const { name, bytes } of kept) {
  const target = TARGETS.find((one) => one.name === name);
  if (target !== undefined) await once(target, bytes);
}
while (performance.now() < until)
  for (const target of TARGETS) {
    const all = [...target.seeds, ...kept.filter((one) => one.name === target.name).map((one) => one.bytes)];
    const pick = () => all[Math.floor(random() * all.length)];
    for (let i = 0; i < target.turn && performance.now() < until; i++)
      await once(target, mutate(pick(), pick(), random));
  }
parentPort.postMessage({ tally });
