import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { readCsv } from "../../src/data/csv.ts";
import { dayOf, isoDay } from "../../src/data/day.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { InputError } from "../../src/errors.ts";
import { type AppliedRun, applyRecorded } from "../../src/pipeline/apply.ts";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { type Executed, execute } from "../../src/pipeline/execute.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import { verifyOutput } from "../../src/publish/verify.ts";

// Twelve years of one station's rain and cold; the first eight intervals are recorded, four follow. The winter of 2010
// is made wetter than any before.
const MAKER = { version: "0.0.0", nodeMajor: 20 };
const OPTIONS = { workers: 1, progress: silentProgress, signal: new AbortController().signal };
let folder: string;

const rain = (day: number) => {
  const wet = day >= dayOf(2010, 11, 1) && day < dayOf(2011, 3, 1) ? 9 : 0;
  return ((day * 7919) % 13) / 2 + ((day * 31) % 401) / 100 + wet;
};
const cold = (day: number) => ((day * 104729) % 29) / 3 - 6 + (day - dayOf(2001, 1, 1)) / 2000;

function pipeline(name: string, from: number, to: number, more = "", prepare = ""): string {
  const visits: string[] = [];
  for (let year = from; year <= to; year++) visits.push(`${year},${year}-07-20,${year}-07-22`);
  writeFileSync(join(folder, `${name}.csv`), `visit,from,to\n${visits.join("\n")}\n`);
  const file = join(folder, `${name}.yaml`);
  writeFileSync(
    file,
    `covey: 1
study: { title: ${name}, coarsen: 5 km }
output: out-${name}
occasions: { file: ${name}.csv, name: visit, start: from, end: to }
records:
  - files: [days.csv]
    station: { column: site }
    date: { column: day }
    series:
      rain: { column: rain, unit: mm, kind: total }
      tmin: { column: tn, unit: degC, kind: minimum }
covariates:
  - { name: winter rain, theme: rain, from: rain, window: { season: Nov to Feb }, statistic: sum }
  - { name: frost, theme: cold, from: tmin, window: { season: Nov to Feb }, statistic: { days below: 0 } }
${more}derive:
  - { name: rain per frost, theme: rain, ratio: [winter rain, frost] }
${prepare}`,
  );
  return file;
}

const run = (file: string) => execute(loadPipeline(file), MAKER, { ...OPTIONS, through: "aggregate" });
const apply = (recorded: string, file: string) =>
  applyRecorded(join(folder, recorded), loadPipeline(file), MAKER, OPTIONS);
const refusal = async (work: Promise<unknown>) => {
  try {
    await work;
  } catch (error) {
    if (error instanceof InputError) return error.facts;
    throw error;
  }
  throw new Error("nothing was refused");
};

let done: AppliedRun;
let trend: Executed;

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), "covey-apply-"));
  const rows = ["site,day,rain,tn"];
  for (let day = dayOf(2001, 1, 1); day < dayOf(2013, 12, 1); day++)
    rows.push(`Ash,${isoDay(day)},${rain(day)},${cold(day)}`);
  writeFileSync(join(folder, "days.csv"), `${rows.join("\n")}\n`);
  const prepare = "prepare: { transform: { winter rain: log } }\n";
  await run(pipeline("first", 2001, 2009, "", prepare));
  trend = await run(pipeline("trend", 2001, 2009, "", "prepare: { detrend: linear }\n"));
  await execute(loadPipeline(pipeline("reduced", 2001, 2009)), MAKER, { ...OPTIONS, through: "reduce" });
  await run(pipeline("steps", 2001, 2009, "", "prepare: { detrend: difference }\n"));
  const extra =
    "  - { name: spring, theme: cold, from: tmin, window: { season: Mar to May }, statistic: mean }\n";
  done = await apply("out-first", pipeline("later", 2009, 2013, extra));
}, 300_000);

afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** Winter sums and frost days straight from the made days. */
const winter = (year: number) => {
  let [sum, frost] = [0, 0];
  for (let day = dayOf(year, 11, 1); day < dayOf(year + 1, 3, 1); day++) {
    sum += rain(day);
    if (cold(day) < 0) frost++;
  }
  return { sum, frost };
};

const moments = (values: readonly number[]) => {
  const mean = values.reduce((a, b) => a + b, 0) / values.length;
  return [mean, Math.sqrt(values.reduce((a, b) => a + (b - mean) ** 2, 0) / (values.length - 1))] as const;
};

describe("apply", () => {
  test("scores of new years are those of the recorded loadings, means and sd on the recorded scale", async () => {
    const applied = await apply("out-reduced", pipeline("scored", 2009, 2013));
    const json = JSON.parse(readFileSync(join(folder, "out-reduced", "components.json"), "utf8")) as {
      names: string[];
      centre: number[];
      scale: number[];
      loadings: number[][];
    };
    const csv = readFileSync(join(folder, "out-scored", "tables", "component-scores.csv"), "utf8");
    const { rows } = readCsv(csv, "component-scores.csv");
    const { standard, names } = applied.matrix;
    expect(json.names).toEqual(names);
    for (let t = 0; t < 4; t++)
      json.loadings[0].forEach((_, j) => {
        const score = json.names.reduce((sum, _name, k) => {
          const z = (standard.data[t * names.length + k] - json.centre[k]) / json.scale[k];
          return sum + z * json.loadings[k][j];
        }, 0);
        expect(Number(rows[t].cells[j + 1])).toBeCloseTo(score, 9);
      });
    // the components go along, so that the new folder can be applied to still newer years
    expect(readFileSync(join(folder, "out-scored", "components.json"))).toEqual(
      readFileSync(join(folder, "out-reduced", "components.json")),
    );
    writeFileSync(join(folder, "out-reduced", "components.json"), "{}");
    const facts = await refusal(apply("out-reduced", pipeline("again", 2009, 2013)));
    expect(facts.name).toBe("apply.recipes-changed");
  });

  const old = Array.from({ length: 8 }, (_, k) => winter(2001 + k));
  const late = Array.from({ length: 4 }, (_, k) => winter(2009 + k));

  test("new years get the constants of the recorded years, after the recorded transform", () => {
    const [mean, sd] = moments(old.map((one) => Math.log(one.sum)));
    const { standard, raw, names, rows } = done.matrix;
    expect(names).toEqual(["winter rain", "frost", "rain per frost"]);
    expect(rows).toEqual(["2009 to 2010", "2010 to 2011", "2011 to 2012", "2012 to 2013"]);
    late.forEach(({ sum, frost }, t) => {
      expect(raw.data[t * 3]).toBeCloseTo(sum, 8);
      expect(standard.data[t * 3]).toBeCloseTo((Math.log(sum) - mean) / sd, 9);
      expect(raw.data[t * 3 + 2]).toBeCloseTo(sum / frost, 9);
    });
  });

  test("what no recorded year reached is told: table, finding and number", () => {
    const greatest = Math.max(...old.map((one) => one.sum));
    const wet = done.outside.filter((one) => one.covariate === "winter rain" && one.value > one.greatest);
    expect(wet.map((one) => one.interval)).toContain("2010 to 2011");
    expect(wet[0].greatest).toBeCloseTo(greatest, 8);
    const finding = done.study.findings.find(
      (one) => one.kind === "out-of-range" && one.subject === "winter rain",
    );
    expect(finding?.message).toContain("2010 to 2011");
    const csv = readFileSync(join(done.folder, "tables/out-of-range.csv"), "utf8");
    expect(readCsv(csv, "out-of-range.csv").rows).toHaveLength(done.outside.length);
    for (const { value, least, greatest } of done.outside)
      expect(value < least || value > greatest).toBe(true);
  });

  test("a covariate without a recipe is left out and named", () => {
    expect(done.leftOut).toEqual([{ name: "spring", reason: "it has no recorded recipe" }]);
  });

  test("the output is published as a run's: recorded, and its recipes go along", () => {
    expect(verifyOutput(nodeDisk(), done.folder)).toMatchObject({ ok: true });
    const record = JSON.parse(readFileSync(join(done.folder, "run-record.json"), "utf8"));
    expect(record.inputs.map((one: { path: string }) => one.path)).toEqual([
      "days.csv",
      "later.csv",
      "recorded/recipes.json",
    ]);
    const recipes = (name: string) => readFileSync(join(folder, name, "recipes.json"), "utf8");
    expect(recipes("out-later")).toBe(recipes("out-first"));
  });

  test("the recorded years themselves come out as the run standardised them, to the last bit", async () => {
    await apply("out-first", pipeline("again", 2001, 2009));
    const table = (name: string) =>
      readFileSync(join(folder, name, "tables/covariates-standardised.csv"), "utf8");
    expect(table("out-again")).toBe(table("out-first"));
  });

  test("a linear trend goes on along the recorded line", async () => {
    const { matrix } = await apply("out-trend", pipeline("trend-later", 2009, 2013));
    const { matrix: whole } = await apply("out-trend", pipeline("trend-all", 2001, 2013));
    expect(Array.from(matrix.standard.data)).toEqual(Array.from(whole.standard.data.subarray(8 * 3)));
    expect(Array.from(whole.standard.data.subarray(0, 24))).toEqual(
      Array.from(trend.study.matrix.standard.data),
    );
  });

  test("differences begin from the last recorded value, or say that they cannot", async () => {
    const { matrix, findings } = await apply("out-steps", pipeline("steps-later", 2009, 2013));
    const [mean, sd] = moments(old.slice(1).map((one, t) => one.sum - old[t].sum));
    // The first recorded difference was filled with the mean of the others, which shrinks the sd of eight values.
    const recorded = sd * Math.sqrt(6 / 7);
    expect(matrix.standard.data[0]).toBeCloseTo((late[0].sum - old[7].sum - mean) / recorded, 8);
    expect(findings.filter((one) => one.kind === "incomplete-column")).toEqual([]);
    const apart = await apply("out-steps", pipeline("steps-apart", 2010, 2013));
    expect(apart.matrix.standard.data[0]).toBeNaN();
    expect(apart.matrix.standard.data[3]).toBeCloseTo(matrix.standard.data[6], 12);
    expect(apart.findings.map((one) => one.kind)).toContain("incomplete-column");
  });
});

describe("apply refuses", () => {
  test("a covariate that is not there, another unit, another definition", async () => {
    const edit = (name: string, find: string, put: string) => {
      const file = pipeline(name, 2009, 2013);
      const text = readFileSync(file, "utf8");
      expect(text).toContain(find);
      writeFileSync(file, text.replace(find, put));
      return refusal(apply("out-first", file));
    };
    const missing = await edit("missing", "  - { name: rain per frost", "  - { name: rain by frost");
    expect([missing.name, missing.remedy]).toEqual([
      "covariates.apply-missing",
      'rename "rain by frost" if it is the same',
    ]);
    const unit = await edit("unit", "statistic: sum }", "statistic: sum, unit: cm }");
    expect([unit.name, unit.found]).toEqual(["covariates.apply-unit", "cm"]);
    const other = await edit(
      "other",
      "{ season: Nov to Feb }, statistic: sum",
      "{ season: Nov to Mar }, statistic: sum",
    );
    expect(other.name).toBe("findings.stop");
    expect(other.found).toContain('recorded as "sum of rain over Nov to Feb, at Ash"');
  });

  test("its own source as output, a folder without recipes, and recipes that were changed", async () => {
    const own = pipeline("own", 2009, 2013);
    writeFileSync(own, readFileSync(own, "utf8").replace("output: out-own", "output: out-first"));
    expect((await refusal(apply("out-first", own))).name).toBe("apply.same-folder");
    expect((await refusal(apply("nowhere", own))).name).toBe("publish.record-missing");
    const file = join(folder, "out-first/recipes.json");
    const text = readFileSync(file, "utf8");
    writeFileSync(file, text.replace('"scale": ', '"scale": 1'));
    const changed = await refusal(apply("out-first", pipeline("last", 2009, 2013)));
    writeFileSync(file, text);
    expect(changed.name).toBe("apply.recipes-changed");
  });
});
