import { spawn } from "node:child_process";
import {
  chmodSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  symlinkSync,
  writeFileSync,
} from "node:fs";
import { hostname, tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { afterAll, describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { openOutput, recoverOutput } from "../../src/publish/folder.ts";
import { withRecord } from "../../src/publish/run-record.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { builtFile, ensureBuilt } from "./built.ts";

const top = mkdtempSync(join(tmpdir(), "covey-test-"));
afterAll(() => rmSync(top, { recursive: true, force: true }));
const bytes = (text: string) => new TextEncoder().encode(text);

function publish(path: string, mark: string) {
  const outputs = new Map(["a.csv", "tables/b.csv"].map((name) => [name, bytes(`${mark} ${name}`)]));
  const folder = openOutput(nodeDisk(), path);
  try {
    folder.publish(withRecord({ version: "1", nodeMajor: 20, seed: 1, pipeline: "", inputs: [], outputs }));
  } finally {
    folder.close();
  }
}

describe("the disk of this machine", () => {
  test("an output is made, replaced, verified, and nothing stays beside it", () => {
    const out = join(top, "new/folders/out");
    publish(out, "one");
    publish(out, "two");
    expect(readFileSync(join(out, "tables/b.csv"), "utf8")).toBe("two tables/b.csv");
    expect(readdirSync(join(top, "new/folders"))).toEqual(["out"]);
    expect(verifyOutput(nodeDisk(), out)).toMatchObject({ ok: true, recorded: 2 });
    writeFileSync(join(out, "a.csv"), "two a.csX");
    expect(verifyOutput(nodeDisk(), out).departures).toMatchObject([{ path: "a.csv", what: "changed" }]);
  });

  test("an output folder that is a link is replaced where it really is", () => {
    const real = join(top, "real");
    mkdirSync(real);
    symlinkSync(real, join(top, "link"));
    publish(join(top, "link"), "one");
    publish(join(top, "link"), "two");
    expect(readFileSync(join(real, "a.csv"), "utf8")).toBe("two a.csv");
    expect(readFileSync(join(top, "link/a.csv"), "utf8")).toBe("two a.csv");
  });

  test("this process is alive; one that ended, and one that got an old number, are not", async () => {
    const disk = nodeDisk();
    expect(disk.alive(disk.self())).toBe(true);
    const child = spawn(process.execPath, ["-e", "0"]);
    await new Promise((done) => child.on("exit", done));
    const pid = child.pid ?? -1;
    expect(disk.alive({ host: hostname(), pid, started: "" })).toBe(false);
    expect(disk.alive({ host: "another machine", pid, started: "" })).toBe(true);
    if (disk.self().started !== "")
      expect(disk.alive({ ...disk.self(), started: `${disk.self().started}0` })).toBe(false);
  });

  test("failures are the machine's: a file in the way, a name too long, a vanished file", () => {
    const disk = nodeDisk();
    writeFileSync(join(top, "file"), "");
    const name = (value: string) =>
      expect.objectContaining({ exitCode: 3, facts: expect.objectContaining({ name: value }) });
    expect(() => disk.write(join(top, "file/x"), bytes(""))).toThrow(name("machine.not-a-folder"));
    expect(() => disk.write(join(top, "n".repeat(300)), bytes(""))).toThrow(name("machine.name-too-long"));
    expect(() => disk.read(join(top, "gone"))).toThrow(name("machine.vanished"));
    expect(() => disk.create(join(top, "no/such"), bytes(""))).toThrow(name("machine.vanished"));
  });

  // Root may write everywhere, so this says something for other users only.
  test.skipIf(process.getuid?.() === 0)("a folder that may not be written", () => {
    const closed = join(top, "closed");
    mkdirSync(closed);
    chmodSync(closed, 0o500);
    expect(() => publish(join(closed, "out"), "x")).toThrow(
      expect.objectContaining({ facts: expect.objectContaining({ name: "machine.permission" }) }),
    );
  });

  test.skipIf(!existsSync("/dev/full"))("a full disk is machine.disk-full", () => {
    expect(() => nodeDisk().write("/dev/full", bytes("x"))).toThrow(
      expect.objectContaining({ exitCode: 3, facts: expect.objectContaining({ name: "machine.disk-full" }) }),
    );
  });

  test("a scratch folder is gone afterwards, after a failure too", async () => {
    let seen = "";
    const act = nodeDisk().scratch(async (folder) => {
      seen = folder;
      writeFileSync(join(folder, "x"), "");
      throw new Error("no");
    });
    await expect(act).rejects.toThrow("no");
    expect(existsSync(seen)).toBe(false);
  });
});

/** Publishes generation after generation until it is killed; every file of a generation says its number. */
const WRITER = `
const [folder, disk, record, out] = process.argv.slice(1);
const { openOutput } = await import(folder);
const { nodeDisk } = await import(disk);
const { withRecord } = await import(record);
for (let generation = 1; ; generation++) {
  const text = Buffer.from(String(generation).padStart(20000));
  const outputs = new Map(Array.from({ length: 6 }, (_, i) => ["t/" + i + ".csv", text]));
  const held = openOutput(nodeDisk(), out);
  held.publish(withRecord({ version: "1", nodeMajor: 20, seed: 1, pipeline: String(generation), inputs: [], outputs }));
  held.close();
  if (generation === 1) process.stdout.write("ready");
}`;

test("killed (SIGKILL) at random moments: always one whole generation, and the next run is right", async () => {
  const sources = ["publish/folder.ts", "pipeline/effects/disk.ts", "publish/run-record.ts"];
  ensureBuilt(...sources);
  // The pause before the kill is drawn from a seed; where it strikes is up to the machine.
  const random = randomStream(1, "kill", 0);
  const found = new Map<string, number>();
  for (let round = 0; round < 8; round++) {
    const out = join(top, "killed", "out");
    const args = [...sources.map((one) => pathToFileURL(builtFile(one)).href), out];
    const child = spawn(process.execPath, ["--input-type=module", "-e", WRITER, "--", ...args], {
      stdio: ["ignore", "pipe", "pipe"],
    });
    let errors = "";
    child.stderr.on("data", (text) => {
      errors += text;
    });
    const ended = new Promise((done) => child.on("exit", done));
    await Promise.race([new Promise((done) => child.stdout.once("data", done)), ended]);
    await new Promise((done) => setTimeout(done, 40 * random.uniform()));
    child.kill("SIGKILL");
    await ended;
    expect(errors).toBe("");
    const beside = readdirSync(join(out, "..")).sort().join(" ");
    found.set(beside, (found.get(beside) ?? 0) + 1);
    recoverOutput(nodeDisk(), out);
    expect(verifyOutput(nodeDisk(), out), `round ${round}, found ${beside}`).toMatchObject({ ok: true });
    const { pipeline } = JSON.parse(readFileSync(join(out, "run-record.json"), "utf8"));
    for (const name of readdirSync(join(out, "t")))
      expect(readFileSync(join(out, "t", name), "utf8").trim()).toBe(pipeline);
    publish(out, "after");
    expect(readdirSync(join(out, ".."))).toEqual(["out"]);
    rmSync(join(out, ".."), { recursive: true });
  }
  // Most kills strike in the midst of writing; if none did, nothing was shown.
  expect([...found.keys()].some((beside) => beside !== "out")).toBe(true);
});
