import { existsSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { afterEach, beforeEach, describe, expect, test } from "vitest";
import { startCommand } from "../../src/commands/start.ts";
import { isoDay } from "../../src/data/day.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { InputError } from "../../src/errors.ts";
import { startPipeline } from "../../src/inspect/start.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import { readPipeline } from "../../src/spec/parse.ts";
import { styleOf } from "../../src/terminal/style.ts";
import { folder } from "../stations/memory-files.ts";

const SAMPLE = fileURLToPath(new URL("../../sample-data", import.meta.url));
const OPTIONS = { title: "A roost", data: "data", output: "out" };
const terminal = { style: styleOf(false), progress: silentProgress };
const day = (i: number) => isoDay(11_323 + i);

const startOf = (contents: Readonly<Record<string, string>>) =>
  startPipeline(folder(contents).files, OPTIONS, silentProgress);
const OCCASIONS =
  "visit,from,to\n2001,2001-07-20,2001-07-22\n2002,2002-07-20,2002-07-22\n2003,2003-07-20,2003-07-21\n";
const records = (column: string, station?: string) =>
  `${station === undefined ? "" : "site,"}day,${column}\n${Array.from({ length: 400 }, (_, i) => `${station === undefined ? "" : `${station},`}${day(i)},${((i * 7) % 23) / 10}\n`).join("")}`;

let base: string;
beforeEach(() => {
  base = mkdtempSync(join(tmpdir(), "covey-start-"));
});
afterEach(() => rmSync(base, { recursive: true, force: true }));

describe("the sample data", () => {
  test("become a pipeline that reads as it stands", async () => {
    const file = join(base, "first.yaml");
    const lines = await startCommand(SAMPLE, { to: file }, terminal);
    expect(lines[0]).toBe(`wrote ${file}`);
    expect(lines.at(-1)).toBe(`next: read it, then  covey check ${file}`);
    const loaded = loadPipeline(file);
    const { spec } = loaded;
    expect(loaded.dataFolder).toBe(SAMPLE.replace(/\/$/, ""));
    expect(spec.occasions).toMatchObject({ file: "occasions.csv", name: "visit", start: "from", end: "to" });
    expect(spec.captures).toMatchObject({
      layout: "dated",
      animal: "ring",
      strata: ["age_at_ringing"],
      lost: { values: ["died", "ring removed"] },
    });
    expect(Object.keys(spec.places)).toEqual(["roost", "winter range"]);
    expect(spec.stations).toMatchObject({ id: "id", longitude: "lon", latitude: "lat" });
    expect(spec.records.map((one) => one.files)).toEqual([
      ["stations/lowland_east.csv", "stations/lowland_west.csv"],
      ["stations/upland.csv"],
    ]);
    expect(spec.records[0].missing).toEqual(["-9999"]);
    expect(Object.entries(spec.layers).map(([name, one]) => [name, one.files])).toEqual([
      ["green", ["layers/green_*.tif"]],
      ["snow", ["layers/snow_*.tif"]],
    ]);
    expect(spec.covariates.map((one) => one.name)).toEqual([
      "rain",
      "tmin",
      "tmax",
      "green at roost",
      "snow at roost",
      "disturbance",
    ]);
  });

  test("an existing pipeline is never overwritten", async () => {
    const file = join(base, "mine.yaml");
    writeFileSync(file, "covey: 1 # mine\n");
    await expect(startCommand(SAMPLE, { to: file }, terminal)).rejects.toThrow(/found a file of that name/);
    expect(readFileSync(file, "utf8")).toBe("covey: 1 # mine\n");
  });
});

describe("other folders", () => {
  test("one file per station, many of them: a pattern whose part is the station", async () => {
    const names = ["Ash", "Beck", "Cray", "Dene", "Elm", "Fern", "Gorse"];
    const files = Object.fromEntries(names.map((name) => [`met/rain_${name}_daily.csv`, records("rain_mm")]));
    const { text } = await startOf({ ...files, "occasions.csv": OCCASIONS });
    const { spec } = readPipeline(text, "p.yaml");
    expect(spec.records).toHaveLength(1);
    expect(spec.records[0]).toMatchObject({
      files: ["met/rain_*_daily.csv"],
      station: { name: "rain_{id}_daily" },
    });
  });

  test("one file per year without a column of stations is one station", async () => {
    const files = Object.fromEntries([2001, 2002].map((year) => [`ash_${year}.csv`, records("tmax")]));
    const { text } = await startOf({ ...files, "occasions.csv": OCCASIONS });
    expect(readPipeline(text, "p.yaml").spec.records[0]).toMatchObject({
      files: ["ash_2001.csv", "ash_2002.csv"],
      station: { always: "ash" },
    });
  });

  test("tables of other columns stay apart; a second list of occasions is a comment", async () => {
    const { text, recognised } = await startOf({
      "a.csv": records("rain", "Ash"),
      "b.csv": records("snow", "Beck"),
      "occasions.csv": OCCASIONS,
      "occasions_old.csv": OCCASIONS,
    });
    expect(recognised.map((one) => one.as)).toEqual(["records", "records", "occasions", "occasions"]);
    expect(readPipeline(text, "p.yaml").spec.occasions?.file).toBe("occasions.csv");
    expect(text).toContain("# occasions_old.csv could stand here instead:\n#  file: occasions_old.csv\n");
  });

  test("what is missing or not recognised is said, in the file and at the end", async () => {
    const { text, left } = await startOf({
      "a.csv": records("rain", "Ash"),
      "notes.txt": "nothing here\nbut words\n",
      "plot.png": "x",
      "out/run-record.json": "{}",
      "out/tables/covariates.csv": "interval,rain\n2001 to 2002,3\n",
    });
    expect(left.map((one) => one.paths)).toEqual([["notes.txt"], ["plot.png"]]);
    expect(text).toMatch(/^# not recognised: plot\.png \(not a table/m);
    expect(text).toContain("# occasions: no file");
    expect(text).not.toContain("out/tables");
    expect(() => readPipeline(text, "p.yaml")).toThrow(/occasions, which windows are counted from/);
  });

  test("a folder with nothing to read is refused, and no file is written", async () => {
    writeFileSync(join(base, "photo.jpg"), "x");
    const to = join(base, "p.yaml");
    await expect(startCommand(base, { to }, terminal)).rejects.toThrow(InputError);
    await expect(startCommand(base, { to }, terminal)).rejects.toThrow(/found 1 file that does not;/);
    expect(existsSync(to)).toBe(false);
  });
});
