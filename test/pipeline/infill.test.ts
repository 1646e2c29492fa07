import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { dayOf, isoDay } from "../../src/data/day.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { nodeEffects } from "../../src/pipeline/effects.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import { type RunResult, runStages } from "../../src/pipeline/run.ts";
import { dictionaryTable, intervalValuesTable } from "../../src/tables/covariate-tables.ts";
import type { Table } from "../../src/tables/table.ts";

let folder: string;
let done: RunResult;

// Ash is 2·Beck + 3 on every day, so that a line fills its gaps without error; it lacks 10 and 11 January 2002 (a gap of
// two days) and 1 to 6 January 2003 (six days, too long). Beck takes no part in the covariates of Ash.
const beck = (day: number) => (day % 7) + (day % 5) + Math.floor((day - dayOf(2001, 1, 1)) / 365);
const lacking = (day: number) => /^(2002-01-1[01]|2003-01-0[1-6])$/.test(isoDay(day));

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), "covey-infill-"));
  const rows = ["site,day,tn"];
  for (let day = dayOf(2001, 6, 1); day < dayOf(2004, 8, 1); day++) {
    rows.push(
      `Ash,${isoDay(day)},${lacking(day) ? "" : 2 * beck(day) + 3}`,
      `Beck,${isoDay(day)},${beck(day)}`,
    );
  }
  writeFileSync(join(folder, "days.csv"), `${rows.join("\n")}\n`);
  const visits = [2001, 2002, 2003, 2004].map((year) => `${year},${year}-07-20,${year}-07-20`);
  writeFileSync(join(folder, "visits.csv"), `visit,from,to\n${visits.join("\n")}\n`);
  const shared =
    "theme: cold, from: tmin, stations: [Ash], window: { season: Jan }, statistic: mean, complete: { share: 1 }";
  writeFileSync(
    join(folder, "p.yaml"),
    `covey: 1
study: { title: Gaps, coarsen: 5 km }
occasions: { file: visits.csv, name: visit, start: from, end: to }
records:
  - files: [days.csv]
    station: { column: site }
    date: { column: day }
    series: { tmin: { column: tn, unit: degC, kind: minimum } }
covariates:
  - { name: filled, ${shared}, infill: { method: neighbour regression, longest gap: 2 days } }
  - { name: open, ${shared} }
prepare: { incomplete: leave out }
`,
  );
  const loaded = loadPipeline(join(folder, "p.yaml"));
  const effects = nodeEffects({
    dataFolder: folder,
    workers: 0,
    progress: silentProgress,
    signal: new AbortController().signal,
  });
  done = await runStages(loaded, effects, "aggregate");
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

const column = (table: Table, name: string) => {
  const at = table.columns.findIndex((one) => one.name === name);
  return table.rows.map((row) => row[at]);
};

describe("infilling in a pipeline", () => {
  test("a station outside the covariate lends its values; what is too long stays open", () => {
    const [filled, open] = done.study.covariates;
    const days = Array.from({ length: 31 }, (_, k) => 2 * beck(dayOf(2002, 1, 1) + k) + 3);
    const truth = days.reduce((sum, one) => sum + one, 0) / 31;
    expect(filled.values[0].value).toBeCloseTo(truth, 9);
    expect(filled.values.map((one) => one.daysInfilled ?? 0)).toEqual([2, 0, 0]);
    expect(filled.values.map((one) => one.failed === undefined)).toEqual([true, false, true]);
    expect(open.values.map((one) => one.failed === undefined)).toEqual([false, false, true]);
    expect(filled.values[0].stations).toEqual(["Ash"]);
    expect(filled.definition).toBe(
      "mean of tmin over Jan, at Ash, gaps of up to 2 days filled by regression on neighbours",
    );
  });

  test("the finding gives the leave-one-out error beside the values' own sd", () => {
    const told = done.study.findings.filter((one) => one.kind === "infilled");
    expect(told).toHaveLength(1);
    expect(told[0].count).toBe(2);
    expect(told[0].message).toMatch(
      /^Ash: 2 days in 1 gap filled by regression on Beck \(leave-one-out error \S+ degC over 1149 values, whose own sd is 5\.\d+\); 1 gap left/,
    );
  });

  test("the tables count the days", () => {
    const values = intervalValuesTable(done.study);
    expect(column(values, "days_infilled")).toEqual([2, 0, 0, 0, 0, 0]);
    const dictionary = dictionaryTable(done.study);
    expect(column(dictionary, "days_infilled")).toEqual([2, 0]);
    // 31 + 25 + 31 of 93 days with infilling, 29 + 25 + 31 without.
    expect(column(dictionary, "coverage")).toEqual([87 / 93, 85 / 93]);
  });
});
