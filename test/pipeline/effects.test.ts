import { spawnSync } from "node:child_process";
import { createHash } from "node:crypto";
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { hostname, tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, expect, test, vi } from "vitest";
import { silentProgress } from "../../src/effects/effects.ts";
import { InputError } from "../../src/errors.ts";
import { requireReuseFolder, reuseIn } from "../../src/pipeline/effects/reuse.ts";
import { nodeEffects, surroundings } from "../../src/pipeline/effects.ts";

const folder = mkdtempSync(join(tmpdir(), "covey-test-"));
afterAll(() => rmSync(folder, { recursive: true }));
const bytes = (text: string) => new TextEncoder().encode(text);

test("earlier results come back by key; other keys, torn and damaged files do not", async () => {
  const kept = join(folder, "kept");
  const reuse = reuseIn(kept);
  expect(await reuse.get("a")).toBeUndefined();
  await reuse.put("a", bytes("one"));
  await reuse.put("../a", bytes("two"));
  await reuse.put("a", bytes("three"));
  await reuse.put("empty", bytes(""));
  expect(await reuse.get("a")).toEqual(bytes("three"));
  expect(await reuse.get("../a")).toEqual(bytes("two"));
  expect(await reuse.get("empty")).toEqual(bytes(""));
  const names = readdirSync(kept);
  expect(names).toHaveLength(3);
  for (const name of names) {
    expect(name).toMatch(/^[0-9a-f]{64}$/);
    const held = readFileSync(join(kept, name));
    writeFileSync(join(kept, name), held.length > 32 ? held.subarray(0, -1) : "torn");
  }
  for (const key of ["a", "../a", "empty"]) expect(await reuse.get(key)).toBeUndefined();
  const again = Buffer.from((await reuse.put("a", bytes("four")).then(() => reuse.get("a"))) ?? []);
  expect(again.toString()).toBe("four");
});

test("halves that a dead run of this machine left are removed; those of living runs and other machines stay", async () => {
  const kept = join(folder, "halves");
  await reuseIn(kept).put("a", bytes("one"));
  const [name] = readdirSync(kept);
  const gone = spawnSync(process.execPath, ["--version"]).pid;
  const here = createHash("sha256").update(hostname()).digest("hex").slice(0, 8);
  const stay = [`${name}.00000000-${gone}-1.part`, `${name}.${here}-${process.pid}-1.part`, "notes.part"];
  for (const half of [`${name}.${here}-${gone}-1.part`, ...stay]) writeFileSync(join(kept, half), "ha");
  const reuse = reuseIn(kept);
  await reuse.get("a");
  expect(readdirSync(kept)).toHaveLength(5);
  await reuse.put("a", bytes("two"));
  expect(readdirSync(kept).sort()).toEqual([name, ...stay].sort());
});

test("kept results go into a folder of their own", async () => {
  const base = join(folder, "own");
  const refused = (kept: string) => {
    try {
      requireReuseFolder(kept, join(base, "out"));
      return "taken";
    } catch (error) {
      if (error instanceof InputError) return `${error.facts.name}: ${error.facts.found}`;
      throw error;
    }
  };
  await reuseIn(join(base, "kept")).put("a", bytes("one"));
  writeFileSync(join(base, "kept", ".DS_Store"), "");
  for (const good of ["kept", "absent", "absent/below", "out-kept", "..kept"])
    expect(refused(join(base, good)), good).toBe("taken");
  for (const within of ["out", "out/kept", "kept/../out/..kept"])
    expect(refused(join(base, within)), within).toBe("run.reuse-folder: the output folder or one within it");
  expect(refused("")).toBe("run.reuse-folder: no name");
  for (const name of ["a.csv", "b", "c", "d"]) writeFileSync(join(base, "kept", name), "");
  expect(refused(join(base, "kept"))).toBe("run.reuse-folder: 4 other (a.csv, b, c, …)");
  expect(refused(base)).toBe("run.reuse-folder: 1 other (kept)");
});

test("a place where nothing can be kept is the machine's error", async () => {
  const file = join(folder, "file");
  writeFileSync(file, "");
  await expect(reuseIn(join(file, "x")).put("a", bytes("b"))).rejects.toMatchObject({ exitCode: 3 });
});

test("effects: interruption, clock, progress handed through, nothing reused without a folder", async () => {
  const stop = new AbortController();
  const effects = nodeEffects({
    dataFolder: folder,
    workers: 1,
    progress: silentProgress,
    signal: stop.signal,
  });
  expect(effects.checkInterrupted()).toBeUndefined();
  stop.abort();
  expect(effects.checkInterrupted).toThrow(expect.objectContaining({ exitCode: 130 }));
  const before = effects.clock.now();
  expect(effects.clock.now()).toBeGreaterThanOrEqual(before);
  expect(effects.progress).toBe(silentProgress);
  await effects.reuse.put("a", bytes("b"));
  expect(await effects.reuse.get("a")).toBeUndefined();
});

test("surroundings: CI, NO_COLOR and dumb terminals", () => {
  const read = (env: Record<string, string>) => {
    for (const name of ["CI", "NO_COLOR", "TERM"]) vi.stubEnv(name, env[name] ?? undefined);
    const { ci, colour } = surroundings();
    vi.unstubAllEnvs();
    return [ci, colour];
  };
  expect(read({ TERM: "xterm" })).toEqual([false, true]);
  expect(read({ CI: "true" })).toEqual([true, true]);
  expect(read({ CI: "false", NO_COLOR: "1" })).toEqual([false, false]);
  expect(read({ NO_COLOR: "", TERM: "dumb" })).toEqual([false, false]);
  expect(surroundings().nodeMajor).toBeGreaterThanOrEqual(20);
});
