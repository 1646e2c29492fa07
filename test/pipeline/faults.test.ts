import { execFileSync } from "node:child_process";
import { appendFileSync, cpSync, existsSync, mkdirSync, readdirSync, rmSync } from "node:fs";
import { join } from "node:path";
import { afterAll, describe, expect, test } from "vitest";
import { type Progress, silentProgress } from "../../src/effects/effects.ts";
import { MachineError } from "../../src/errors.ts";
import { machineError } from "../../src/pipeline/effects/machine.ts";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { type Executed, execute } from "../../src/pipeline/execute.ts";
import { loadPipeline } from "../../src/pipeline/load.ts";
import type { FileSet } from "../../src/publish/disk.ts";
import { openOutput } from "../../src/publish/folder.ts";
import { withRecord } from "../../src/publish/run-record.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { bytesBelow, ROOT, temporaryFolder } from "./covey.ts";

// What may go wrong with the machine while a run goes on: told by name with exit code 3, and the output stays the old one.

const home = temporaryFolder();
afterAll(home.remove);
let count = 0;

function study(): string {
  const folder = join(home.path, String(count++));
  cpSync(join(ROOT, "test/bad-input/good"), join(folder, "data"), { recursive: true });
  return folder;
}

/** Does something when a step of this name starts. */
function whenStarts(label: string, act: () => void): Progress {
  return {
    start: (name, total) => {
      if (name === label) act();
      return silentProgress.start(name, total);
    },
  };
}

function run(folder: string, progress: Progress = silentProgress): Promise<Executed> {
  const signal = new AbortController().signal;
  const options = { workers: 1, through: "aggregate", progress, signal } as const;
  const loaded = loadPipeline(join(folder, "data/pipeline.yaml"));
  return execute(loaded, { version: "0.0.0", nodeMajor: 20 }, options);
}

async function failure(work: Promise<unknown>): Promise<string> {
  return work.then(
    () => "no failure",
    (error: unknown) => {
      if (!(error instanceof MachineError)) throw error;
      return `${error.facts.name}, exit ${error.exitCode}`;
    },
  );
}

describe("inputs that do not stay as they are", () => {
  test.each([
    ["a file read already is written to", "layer green", "captures.csv", "files.changed, exit 3"],
    [
      "a file not read yet, but listed, vanishes",
      "reading station records",
      "weather_beck.csv",
      "machine.vanished, exit 3",
    ],
    ["a file read already vanishes", "layer green", "occasions.csv", "machine.vanished, exit 3"],
    ["an image vanishes", "layer green", "layers/green_2005_04.tif", "machine.vanished, exit 3"],
  ])("%s", async (_, step, file, said) => {
    const folder = study();
    await run(folder);
    const before = bytesBelow(join(folder, "out"));
    const path = join(folder, "data", file);
    const act = () => (said.startsWith("files") ? appendFileSync(path, "\n") : rmSync(path));
    expect(await failure(run(folder, whenStarts(step, act)))).toBe(said);
    expect(bytesBelow(join(folder, "out"))).toEqual(before);
    expect(readdirSync(folder).sort()).toEqual(["data", "out"]);
  });
});

test("two runs at once on one folder: one writes it, the other is refused", async () => {
  const folder = study();
  const [one, two] = await Promise.allSettled([run(folder), run(folder)]);
  expect([one.status, two.status].sort()).toEqual(["fulfilled", "rejected"]);
  const refused = one.status === "rejected" ? one.reason : two.status === "rejected" ? two.reason : undefined;
  expect(refused).toMatchObject({ exitCode: 2, facts: { name: "publish.locked" } });
  expect(verifyOutput(nodeDisk(), join(folder, "out")).ok).toBe(true);
});

function output(mark: string): FileSet {
  const outputs = new Map(
    ["a.csv", "tables/b.csv", "c.txt"].map((name) => [name, new TextEncoder().encode(`${mark} ${name}\n`)]),
  );
  return withRecord({ version: "1", nodeMajor: 20, seed: 1, pipeline: mark, inputs: [], outputs });
}

test("a disk that is full at any write leaves the old output and nothing beside it", () => {
  const out = join(home.path, "full", "out");
  const disk = nodeDisk();
  const first = openOutput(disk, out);
  first.publish(output("old"));
  first.close();
  const old = bytesBelow(out);
  let told = 0;
  for (let last = 0; ; last++) {
    let writes = 0;
    const full = Object.assign(new Error("ENOSPC: no space left on device, write"), { code: "ENOSPC" });
    const tight = {
      ...disk,
      write: (path: string, bytes: Uint8Array) => {
        if (writes++ >= last) throw machineError(full, "write", path);
        disk.write(path, bytes);
      },
    };
    const folder = openOutput(tight, out);
    try {
      folder.publish(output("new"));
      break;
    } catch (error) {
      expect(error).toMatchObject({ exitCode: 3, facts: { name: "machine.disk-full" } });
      told++;
      expect(bytesBelow(out)).toEqual(old);
    } finally {
      folder.close();
    }
    expect(readdirSync(join(home.path, "full"))).toEqual(["out"]);
  }
  // Three files, the record, and the journal's two states.
  expect(told).toBe(6);
  expect(bytesBelow(out).get("a.csv")?.toString()).toBe("new a.csv\n");
});

/** A small disk of its own in memory; undefined where this user may not mount one. */
function smallDisk(
  options: string,
): { readonly path: string; readonly remount: (how: string) => void } | undefined {
  const path = join(home.path, `disk-${count++}`);
  mkdirSync(path);
  const mount = (how: string) =>
    execFileSync("mount", ["-t", "tmpfs", "-o", how, "tmpfs", path], { stdio: "ignore" });
  try {
    mount(options);
  } catch {
    return undefined;
  }
  mounted.push(path);
  return { path, remount: (how) => mount(`remount,${how}`) };
}
const mounted: string[] = [];
afterAll(() => {
  for (const path of mounted) execFileSync("umount", [path], { stdio: "ignore" });
});

/** The good study with its output elsewhere. */
function into(out: string): string {
  const folder = study();
  const file = join(folder, "data/pipeline.yaml");
  const text = new TextDecoder().decode(bytesBelow(join(folder, "data")).get("pipeline.yaml"));
  rmSync(file);
  appendFileSync(file, text.replace("output: ../out", `output: ${out}`));
  return folder;
}

test("a disk that really is full: machine.disk-full, the old output stands, nothing is left", async (context) => {
  const disk = smallDisk("size=64k");
  if (disk === undefined) return context.skip("mounting a small disk takes root, which this user is not");
  const out = join(disk.path, "out");
  const folder = openOutput(nodeDisk(), out);
  folder.publish(output("old"));
  folder.close();
  const old = bytesBelow(out);
  expect(await failure(run(into(out)))).toBe("machine.disk-full, exit 3");
  expect(bytesBelow(out)).toEqual(old);
  expect(readdirSync(disk.path)).toEqual(["out"]);
});

test("a disk that can only be read: machine.read-only", async (context) => {
  const disk = smallDisk("size=64k");
  if (disk === undefined) return context.skip("mounting a small disk takes root, which this user is not");
  disk.remount("ro");
  expect(await failure(run(into(join(disk.path, "out"))))).toBe("machine.read-only, exit 3");
  expect(existsSync(join(disk.path, "out"))).toBe(false);
});
