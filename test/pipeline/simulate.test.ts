import { existsSync, readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { effectSizes, residualSd, simulateCommand } from "../../src/commands/simulate.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { styleOf } from "../../src/terminal/style.ts";
import { ensureBuilt } from "./built.ts";
import { bytesBelow, pipelineIn, readRows, temporaryFolder } from "./covey.ts";

// The dipper case: six intervals and one covariate, the flood, which is known to act.
const folder = temporaryFolder();
const pipeline = pipelineIn(folder.path, "test/cases/dipper/pipeline.yaml");
beforeAll(() => ensureBuilt("workers/entry.ts"));
afterAll(() => folder.remove());

const terminal = {
  style: styleOf(false),
  width: 80,
  progress: silentProgress,
  signal: new AbortController().signal,
  workers: 1,
  version: "0.0.0",
  nodeMajor: 20,
};
const asked = {
  covariates: ["flood"],
  effects: [0, 1.5],
  residual: undefined,
  replicates: 8,
  workers: 1,
  output: undefined,
  json: false,
  from: folder.path,
};
const output = join(folder.path, "out-simulated");

describe("simulate", () => {
  test("writes tables, figure, package and record whole, and says in short what was found", async () => {
    const lines = await simulateCommand(pipeline, asked, terminal);
    expect(lines.length).toBeLessThanOrEqual(24);
    const text = lines.join("\n");
    expect(text).toContain("16 studies drawn");
    expect(text).toContain("flood (lowers survival)");
    expect(text).toContain("With this design an effect of 1.5 per sd would be found in");
    expect(text).toContain("figure: out-simulated/figures/detection.svg");
    expect([...bytesBelow(output).keys()]).toEqual([
      "datapackage.json",
      "figures/detection.svg",
      "run-record.json",
      "simulation.json",
      "tables/detection.csv",
      "tables/detection.json",
      "tables/simulated-design.csv",
      "tables/simulated-design.json",
    ]);
    expect(verifyOutput(nodeDisk(), output).ok).toBe(true);
    const rows = readRows(join(output, "tables/detection.csv"));
    expect(rows.map((one) => `${one.effect} ${one.rule}`)).toEqual([
      "0 counting years",
      "0 counting animals",
      "1.5 counting years",
      "1.5 counting animals",
    ]);
    // a flood that moves survival by 1.5 per sd of a logit cannot be missed by either rule
    expect(Number(rows[2].exact)).toBeGreaterThanOrEqual(0.75);
    const drawn = readRows(join(output, "tables/simulated-design.csv"));
    // Lebreton et al. (1992), constant survival and recapture: 0.5602 and 0.9026; 22 dippers marked in 1981
    expect(Number(drawn[0].survival)).toBeCloseTo(0.560243, 5);
    expect(Number(drawn[0].recapture)).toBeCloseTo(0.902584, 5);
    expect(drawn[0].newly_marked).toBe("22");
    expect(JSON.parse(readFileSync(join(output, "simulation.json"), "utf8"))).toMatchObject({
      covariates: [{ name: "flood", direction: "lowers survival" }],
      effects: [0, 1.5],
      replicates: 8,
      recapture: "constant",
    });
  });

  test("the same bytes on one worker and on two", async () => {
    const once = { ...asked, output: "one" };
    await simulateCommand(pipeline, once, terminal);
    await simulateCommand(pipeline, { ...once, workers: 2, output: "two" }, terminal);
    expect(bytesBelow(join(folder.path, "two"))).toEqual(bytesBelow(join(folder.path, "one")));
  });

  test("JSON holds the rows and the sentences", async () => {
    const wanted = { ...asked, json: true, effects: [1.5], residual: 0.2, replicates: 2, output: "json" };
    const said: unknown = JSON.parse((await simulateCommand(pipeline, wanted, terminal)).join("\n"));
    expect(said).toMatchObject({ folder: "json", residual: 0.2, covariates: ["flood"], replicates: 2 });
    expect(said).toHaveProperty("rows.length", 2);
    expect(said).toHaveProperty("sentences.length", 2);
  });

  test("stopped on the way, it leaves nothing half-written and keeps what was there; exit code 130", async () => {
    const before = bytesBelow(output);
    const there = readdirSync(folder.path);
    for (const [workers, target] of [
      [1, undefined],
      [2, "not there yet"],
    ] as const) {
      const stop = new AbortController();
      const progress = { start: () => ({ tick: () => stop.abort(), done: () => {} }) };
      const run = simulateCommand(
        pipeline,
        { ...asked, replicates: 500, workers, output: target },
        { ...terminal, progress, signal: stop.signal },
      );
      await expect(run).rejects.toMatchObject({ exitCode: 130, facts: { name: "run.interrupted" } });
    }
    expect(readdirSync(folder.path)).toEqual(there);
    expect(bytesBelow(output)).toEqual(before);
  });

  test("a name that is nearly right is offered, one that is not gets the list; nothing is written", async () => {
    const facts = (remedy: string) => ({ facts: { name: "simulate.unknown-covariate", remedy } });
    const named = (name: string) =>
      simulateCommand(pipeline, { ...asked, covariates: ["flood", name], output: "none" }, terminal);
    await expect(named("Floods")).rejects.toMatchObject(facts('did you mean "flood"?'));
    await expect(named("moonlight")).rejects.toMatchObject(facts("name one of flood"));
    expect(existsSync(join(folder.path, "none"))).toBe(false);
  });

  test("the pipeline's own output is not replaced; a study without captures is told so", async () => {
    await expect(simulateCommand(pipeline, { ...asked, output: "out" }, terminal)).rejects.toMatchObject({
      facts: { name: "simulate.same-folder" },
    });
    const other = temporaryFolder();
    const bare = pipelineIn(other.path, "pipelines/covariates-only.yaml");
    await expect(simulateCommand(bare, asked, terminal)).rejects.toMatchObject({
      facts: { name: "simulate.no-captures" },
    });
    other.remove();
  });

  test.each([
    ["since-marking", "ice", 8],
    ["split-years", "storms", 10],
    ["own-covariates", "storms", 24],
  ])("studies are drawn in the design of %s too", async (name, covariate, rows) => {
    const other = temporaryFolder();
    const design = pipelineIn(other.path, `test/cases/${name}/pipeline.yaml`);
    const request = { ...asked, covariates: [covariate], residual: 0.2, replicates: 4 };
    await simulateCommand(design, { ...request, output: join(other.path, "drawn") }, terminal);
    expect(readRows(join(other.path, "drawn/tables/detection.csv")).length).toBe(4);
    // strata (twice as many with time since marking) times intervals, or years where one is split
    const drawn = readRows(join(other.path, "drawn/tables/simulated-design.csv"));
    expect(drawn.length).toBe(rows);
    expect(drawn.every((one) => Number(one.survival) > 0 && Number(one.survival) < 1)).toBe(true);
    other.remove();
  });

  test.each([
    ["split-years", "split"],
    ["own-covariates", "covariates by stratum"],
  ])("what the captures of %s do not tell between years is to be stated", async (name, key) => {
    const other = temporaryFolder();
    const design = pipelineIn(other.path, `test/cases/${name}/pipeline.yaml`);
    await expect(
      simulateCommand(design, { ...asked, covariates: ["storms"], residual: undefined }, terminal),
    ).rejects.toMatchObject({
      facts: { name: "simulate.residual-unknown", found: key, where: { line: expect.any(Number) } },
    });
    expect(readdirSync(other.path)).toEqual([expect.any(String)]);
    other.remove();
  });
});

describe("what is typed", () => {
  test("sizes of effects", () => {
    expect(effectSizes("0, 0.2,0.4")).toEqual([0, 0.2, 0.4]);
    for (const wrong of ["", "0.1,,0.2", "-0.3", "a lot", "Infinity", "11"])
      expect(() => effectSizes(wrong), wrong).toThrow(/sizes of the effect from 0 to 10/);
  });

  test("the residual sd", () => {
    expect(residualSd("0.3")).toBe(0.3);
    for (const wrong of ["", "-1", "x", "NaN"])
      expect(() => residualSd(wrong), wrong).toThrow(/from 0 to 10/);
  });
});
