import { execFileSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { standardised } from "./animals.mjs";

// How typical is the shipped draw? Makes the study with the seeds 1 to 60, fits the true model to each (recapture by
// effort) and lists F of the analysis of deviance for both drivers, and their fitted effects. Needs `npm run build`.

const dist = (path) => import(new URL(`../dist/${path}.js`, import.meta.url).href);
const { readOccasions } = await dist("study/occasions");
const { readCaptures } = await dist("study/captures");
const { sufficientStatistics } = await dist("survival/statistics");
const { fitModel } = await dist("survival/fit");
const { covariateSurvival, intervalSurvival } = await dist("survival/design");
const { designOf, recapturePart } = await dist("survival/recapture-choice");
const { analysisOfDeviance } = await dist("survival/analysis-of-deviance");

const OCCASIONS = {
  file: "occasions.csv",
  name: "visit",
  start: "from",
  end: "to",
  format: "yyyy-MM-dd",
  lengths: "whole years",
  effort: "net_hours",
};
const CAPTURES = {
  layout: "dated",
  file: "captures.csv",
  animal: "ring",
  date: "date",
  format: "yyyy-MM-dd",
  strata: ["age_at_ringing"],
  lost: { column: "fate", values: ["died", "ring removed"] },
};

async function evidence(seed, folder) {
  execFileSync(process.execPath, [fileURLToPath(new URL("make.mjs", import.meta.url)), folder, String(seed)]);
  const files = { readText: async (name) => readFileSync(join(folder, name), "utf8") };
  const { occasions, intervals } = await readOccasions(OCCASIONS, files);
  const { counts } = await readCaptures(CAPTURES, occasions, files);
  const truth = JSON.parse(readFileSync(join(folder, "truth.json"), "utf8")).intervals;
  const data = counts.map(sufficientStatistics);
  const frame = {
    strata: data.map((one) => one.stratum),
    intervals: intervals.length,
    lengths: Float64Array.from(intervals, (one) => one.length),
    forced: [],
    effort: Float64Array.from(standardised(occasions.slice(1).map((one) => one.effort))),
  };
  const recapture = recapturePart(frame, "effort");
  const fitted = (survival) => fitModel(data, designOf(frame, survival, recapture));
  const drivers = ["winter rain", "spring green"].map((name) => ({
    name,
    values: Float64Array.from(truth, (row) => row[`${name} standardised`]),
  }));
  const both = fitted(covariateSurvival(frame, drivers));
  const { f } = analysisOfDeviance(
    fitted(covariateSurvival(frame, [])),
    both,
    fitted(intervalSurvival(frame)),
  );
  const effects = drivers.map(({ name }) => both.estimates[both.names.indexOf(name)]);
  return { seed, f, effects };
}

const folder = mkdtempSync(join(tmpdir(), "covey-typical-"));
const all = [];
for (let seed = 1; seed <= 60; seed++) all.push(await evidence(seed, folder));
rmSync(folder, { recursive: true, force: true });
all.sort((a, b) => a.f - b.f);
for (const { seed, f, effects } of all)
  process.stdout.write(
    `seed ${seed}: F = ${f.toFixed(2)}, effects ${effects.map((one) => one.toFixed(2)).join(", ")}\n`,
  );
process.stdout.write(`middle: ${((all[29].f + all[30].f) / 2).toFixed(2)}\n`);
