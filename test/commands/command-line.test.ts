import { cpSync, existsSync, readdirSync, readFileSync, writeFileSync } from "node:fs";
import { join } from "node:path";
import { setTimeout as wait } from "node:timers/promises";
import { afterAll, describe, expect, test } from "vitest";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import {
  bytesBelow,
  covey,
  type Edit,
  type Ended,
  pipelineIn,
  ROOT,
  temporaryFolder,
} from "../pipeline/covey.ts";

// The command line as a person types it, in a process of its own whose output goes to pipes.
const folders: { readonly remove: () => void }[] = [];
afterAll(() => {
  for (const folder of folders) folder.remove();
});

const EACH = "test/cases/dipper-each-occasion/pipeline.yaml";

/** A folder of its own with the dipper case, the smallest study that is fitted. */
function study(edits: readonly Edit[] = [], source = "test/cases/dipper/pipeline.yaml") {
  const folder = temporaryFolder();
  folders.push(folder);
  const quick: Edit[] = source.includes("dipper") ? [[/permutations: \d+/, "permutations: 0"]] : [];
  return { path: folder.path, pipeline: pipelineIn(folder.path, source, [...quick, ...edits]) };
}

// Escapes, carriage returns, backspaces: all that a terminal acts on but line feed and tab.
const CONTROL = /[^\P{Cc}\n\t]/u;

/** Types a command and holds it to be quiet: a pipe gets no control characters, a mistake says nothing on stdout. */
async function type(...args: string[]): Promise<Ended> {
  const ended = await covey(args);
  expect([args, CONTROL.test(ended.stdout), CONTROL.test(ended.stderr)]).toEqual([args, false, false]);
  if (ended.code !== 0) expect([args, ended.stdout]).toEqual([args, ""]);
  return ended;
}

describe("help and version", () => {
  test("--version is the version of package.json", async () => {
    const { version } = JSON.parse(readFileSync(join(ROOT, "package.json"), "utf8")) as { version: string };
    expect(await type("--version")).toEqual({ code: 0, stdout: `${version}\n`, stderr: "" });
  });

  test("--help lists the commands, and each has a help with an example", async () => {
    const { code, stdout } = await type("--help");
    expect(code).toBe(0);
    const commands = [...(stdout.split("Commands:\n")[1] ?? "").matchAll(/^ {2}([a-z]+) .*?\[options\]/gm)];
    const names = commands.map(([, name]) => name);
    expect(names).toEqual(expect.arrayContaining(["run", "check", "look"]));
    for (const name of names) {
      const help = await type(name, "--help");
      expect([name, help.code, help.stderr]).toEqual([name, 0, ""]);
      expect(help.stdout).toContain(`Usage: covey ${name} `);
      expect(help.stdout).toContain(`Example:\n  covey ${name} `);
    }
  });
});

describe("mistakes on the command line end with 2", () => {
  test.each([
    [["rum", "x.yaml"], "unknown command 'rum'", "Did you mean run?"],
    [["run", "x.yaml", "--wrokers", "2"], "unknown option '--wrokers'", "Did you mean --workers?"],
    [["run"], "missing required argument 'pipeline'", "covey --help"],
    [["check", "a.yaml", "b.yaml"], "too many arguments", "covey --help"],
    [["run", "x.yaml", "--workers", "none"], "'none' is invalid", "a whole number from 1 up"],
    [["run", "x.yaml", "--through", "scren"], '"scren"', 'did you mean "screen"?'],
  ])("%j", async (args, found, remedy) => {
    const { code, stderr } = await type(...args);
    expect(code).toBe(2);
    expect(stderr).toContain(found);
    expect(stderr).toContain(remedy);
    expect(stderr).not.toContain("    at ");
  });

  test("no pipeline file, or a folder in its place", async () => {
    for (const command of ["run", "check"])
      for (const [file, found] of [
        ["nowhere/pipeline.yaml", "nothing there"],
        ["sample-data", "a folder"],
      ]) {
        const { code, stderr } = await type(command, file);
        expect([command, file, code]).toEqual([command, file, 2]);
        expect(stderr).toMatch(/^input {2}pipeline\.not-found\n/);
        expect(stderr).toContain(`where       ${file}\n`);
        expect(stderr).toContain(`found       ${found}\n`);
      }
  });

  test("no data file to look at", async () => {
    const { code, stderr } = await type("look", "sample-data/capture.csv");
    expect([code, stderr.split("\n")[0]]).toEqual([2, "input  look.not-found"]);
  });
});

describe("mistakes in a pipeline end with 2, and say where", () => {
  test("a wrong word, with file, line and column", async () => {
    const { pipeline, path } = study([[/^recapture: constant/m, "recapture: konstant"]]);
    const lines = readFileSync(pipeline, "utf8").split("\n");
    const line = lines.findIndex((one) => one.startsWith("recapture:"));
    const column = lines[line].indexOf("konstant");
    const { code, stderr } = await type("run", pipeline);
    expect(code).toBe(2);
    expect(stderr).toContain(`pipeline.yaml:${line + 1}:${column + 1}`);
    expect(stderr).toContain('did you mean "constant"?');
    expect(readdirSync(path)).toEqual(["pipeline.yaml"]);
  });

  test.each([
    ["check", "Becksmuth", "Becksmouth"],
    ["run", "Becc", "Beck"],
  ])("%s with a station written %s: did you mean %s?", async (command, wrong, right) => {
    const edits: Edit[] = [[/stations: \[Ash, Beck\]/, `stations: [Ash, ${wrong}]`]];
    const { pipeline, path } = study(edits, "pipelines/stations-only.yaml");
    const { code, stderr } = await type(command, pipeline);
    expect(code).toBe(2);
    expect(stderr).toMatch(/^input {2}stations\.unknown\n/);
    expect(stderr).toContain(`"${wrong}"`);
    expect(stderr.replace(/\s+/g, " ")).toContain(`did you mean "${right}"?`);
    expect(stderr).toMatch(/pipeline\.yaml:\d+:\d+/);
    expect(readdirSync(path)).toEqual(["pipeline.yaml"]);
  });

  test("a finding that stops: nothing is written, and the way out is named", async () => {
    const { pipeline, path } = study(
      [[/^recapture: /m, "findings: { not-separable: stop }\nrecapture: "]],
      EACH,
    );
    const { code, stderr } = await type("run", pipeline);
    expect([code, stderr.split("\n")[0]]).toEqual([2, "input  findings.stop"]);
    expect(stderr).toContain("not-separable: warn");
    expect(readdirSync(path)).toEqual(["pipeline.yaml"]);
  });
});
describe("the machine's failures end with 3", () => {
  test("a file where the output's parent folder should be", async () => {
    const { pipeline, path } = study([[/^output: out/m, "output: taken/out"]]);
    writeFileSync(join(path, "taken"), "a file");
    const { code, stderr } = await type("run", pipeline);
    expect([code, stderr.split("\n")[0]]).toEqual([3, "machine  machine.not-a-folder"]);
    expect(stderr).toContain(join("taken", "out"));
    expect(readdirSync(path).sort()).toEqual(["pipeline.yaml", "taken"]);
  });
});

describe("run", () => {
  test("writes the output, says where the page is; --json; other people's files are safe", async () => {
    const { pipeline, path } = study();
    const first = await type("run", pipeline);
    expect([first.code, first.stderr]).toEqual([0, ""]);
    expect(first.stdout).toContain("Dippers and a flood");
    expect(first.stdout).toContain(`page: ${join(path, "out", "report.html")}`);
    expect(first.stdout.trimEnd().split("\n").length).toBeLessThanOrEqual(24);
    expect(readdirSync(path).sort()).toEqual(["out", "pipeline.yaml"]);
    expect(verifyOutput(nodeDisk(), join(path, "out")).departures).toEqual([]);
    const before = bytesBelow(join(path, "out"));

    const json = await type("run", pipeline, "--json");
    const said = JSON.parse(json.stdout) as {
      covariates: string[];
      chosenByAnimals: string[];
      intervals: number;
    };
    expect([said.covariates, said.chosenByAnimals, said.intervals]).toEqual([["flood"], ["flood"], 6]);
    expect([...bytesBelow(join(path, "out"))]).toEqual([...before]);

    writeFileSync(join(path, "out", "notes.txt"), "mine");
    const refused = await type("run", pipeline);
    expect([refused.code, refused.stderr.split("\n")[0]]).toEqual([2, "input  publish.folder-has-others"]);
    expect(readFileSync(join(path, "out", "notes.txt"), "utf8")).toBe("mine");
  });

  test("--quiet says nothing; a run that is interrupted ends with 130, and leaves what was there as it was", async () => {
    const { pipeline, path } = study();
    expect(await type("run", pipeline, "--quiet")).toEqual({ code: 0, stdout: "", stderr: "" });
    const before = [...bytesBelow(join(path, "out"))];
    // Far too many permutations to end by itself within the test.
    writeFileSync(
      pipeline,
      readFileSync(pipeline, "utf8").replace("permutations: 0", "permutations: 100000"),
    );
    for (const [signal, workers, delay] of [
      ["SIGINT", "1", 1000],
      ["SIGINT", "2", 1000],
      ["SIGTERM", "2", 0],
    ] as const) {
      const started = async (pid: number) => {
        while (!existsSync(join(path, "out.lock"))) await wait(5);
        await wait(delay);
        process.kill(pid, signal);
      };
      const ended = await covey(["run", pipeline, "--workers", workers], {
        started: (pid) => void started(pid),
      });
      expect([signal, workers, ended.code, ended.stdout]).toEqual([signal, workers, 130, ""]);
      expect(ended.stderr).toMatch(/^stopped {2}run\.interrupted\n/);
      expect(readdirSync(path).sort()).toEqual(["out", "pipeline.yaml"]);
      expect([...bytesBelow(join(path, "out"))]).toEqual(before);
    }
  });
});

describe("check", () => {
  const shipped = readdirSync(join(ROOT, "pipelines")).filter((file) => file.endsWith(".yaml"));
  test.each(shipped)("pipelines/%s, writing nothing", async (file) => {
    const { pipeline, path } = study([], `pipelines/${file}`);
    const said = await type("check", pipeline);
    expect([said.code, said.stderr]).toEqual([0, ""]);
    expect(said.stdout).toContain("21 occasions, 20 intervals");
    expect(said.stdout).not.toContain("that stop the run");
    for (const line of said.stdout.split("\n")) expect(line.length).toBeLessThanOrEqual(140);
    const names = readFileSync(pipeline, "utf8").matchAll(/^ {2}- \{ name: ([^,]+), theme: .*window: /gm);
    for (const [, covariate] of names) expect(said.stdout).toContain(covariate);
    expect(readdirSync(path)).toEqual(["pipeline.yaml"]);
  });
});

test("check --json: a window for each covariate and interval, and the findings", async () => {
  const json = await type("check", "pipelines/roost.yaml", "--json");
  expect([json.code, json.stderr]).toEqual([0, ""]);
  const plan = JSON.parse(json.stdout) as {
    windows: { covariate: string }[];
    findings: { severity: string }[];
  };
  // 13 covariates with a window, 20 intervals
  expect(new Set(plan.windows.map((one) => one.covariate)).size).toBe(13);
  expect(plan.windows.length).toBe(13 * 20);
  expect(plan.findings.filter((one) => one.severity === "stop")).toEqual([]);
});

describe("look", () => {
  test.each([
    ["layers/green_2009_05.tif", ["24 × 20 pixels", "EPSG:32632", "-3000", "layers:", "green_{yyyy}_{MM}"]],
    [
      "stations/upland.csv",
      ["8025 rows", "dd.MM.yyyy", "2000-01-01 to 2021-12-31", "records:", "column: RR"],
    ],
    ["captures.csv", ["881 rows", "captures", "animal: ring", "strata: [age_at_ringing]"]],
  ])("sample-data/%s", async (file, words) => {
    const path = join("sample-data", file);
    const [said, json] = await Promise.all([type("look", path), type("look", path, "--json")]);
    expect([said.code, said.stderr, json.code]).toEqual([0, "", 0]);
    for (const word of words) expect(said.stdout).toContain(word);
    expect(JSON.parse(json.stdout)).toHaveProperty("stanza");
  });

  test("a reader that closes the pipe early is no failure", async () => {
    const { code, stderr } = await covey(["check", "pipelines/roost.yaml", "--windows", "--json"], {
      deaf: true,
    });
    expect([code, stderr]).toEqual([0, ""]);
  });
});

test("control characters in a file do not reach the terminal", async () => {
  const { path } = study();
  cpSync(join(ROOT, "test/cases/dipper/counts.csv"), join(path, "plain.csv"));
  writeFileSync(
    join(path, "odd.csv"),
    "station,day,rain \u001b[31m\nA\u0007,2001-01-01,1\nB\u001b]0;x,2001-01-02,2\n",
  );
  expect((await type("look", join(path, "odd.csv"))).code).toBe(0);
  expect((await type("look", join(path, "plain.csv"))).code).toBe(0);
});
