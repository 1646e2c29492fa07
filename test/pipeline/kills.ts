import {
  cpSync,
  existsSync,
  mkdirSync,
  readdirSync,
  readFileSync,
  rmSync,
  watch,
  writeFileSync,
} from "node:fs";
import { join } from "node:path";
import { setTimeout as wait } from "node:timers/promises";
import { expect } from "vitest";
import { type Random, randomStream } from "../../src/math/random.ts";
import { bytesBelow, covey, type Edit, pipelineIn } from "./covey.ts";

/** A pipeline to be killed: what of it is made cheaper first, and the one thing in which the other run differs. */
export interface Victim {
  readonly pipeline: string;
  readonly edits: readonly Edit[];
  readonly other: Edit;
  /** Further arguments of `run`. */
  readonly args: readonly string[];
  /** Keep results between runs, and every so many kills begin with none kept. */
  readonly reuse?: { readonly coldEvery: number };
  /** After every so many kills the killed command is given once more and its output compared. */
  readonly againEvery: number;
}

/** The dipper study without permutations: whole runs, but short ones. */
export const DIPPER: Victim = {
  pipeline: "test/cases/dipper/pipeline.yaml",
  edits: [[/permutations: \d+/, "permutations: 0"]],
  other: [/title: ("[^"]*"|[^,}\n]*)/, 'title: "The other one"'],
  args: ["--workers", "1"],
  againEvery: 5,
};
/** The demo as it is shipped, in turns with one whose winter begins a month earlier: nearly every table differs. */
export const DEMO: Victim = {
  pipeline: "pipelines/roost.yaml",
  edits: [],
  other: [/(name: winter rain, .*?season:) Nov to Feb \}, statistic: sum/, "$1 Oct to Feb }, statistic: sum"],
  args: [],
  reuse: { coldEvery: 16 },
  againEvery: 1,
};

/** Where a kill hit, told by what stood on the disk right after it. */
type Moment = "before writing" | "writing the output" | "swapping" | "after the swap";

/** What killing a run again and again came to. */
export interface Killed {
  kills: number;
  /** Runs that had ended before the signal came. */
  missed: number;
  /** Kills of a run that had nothing kept to begin with. */
  cold: number;
  /** Where the kills hit. */
  readonly at: Record<Moment, number>;
  /** Kills that left a half-written kept result. */
  keptHalf: number;
  /** What stood after the next command: the output of the run before, or the killed run's. */
  old: number;
  fresh: number;
  /** `verify` green as the next command; the killed command given again, with the right bytes and nothing beside them. */
  verified: number;
  right: number;
}

const NAMES = ["one", "other"] as const;
const DONE = { code: 0, stderr: "" };

/**
 * Runs the victim in two forms, then kills runs of one over the output of the other with SIGKILL: half of them at a moment
 * drawn from the whole length of a run, a quarter while the output is being written, a quarter while a result is being kept
 * (without reuse these go for the output too). After each kill `verify` must find one of the two outputs whole, byte for
 * byte, with nothing half-written beside it; then the same run must make its output. Work goes on in `folder` where an
 * earlier call ended.
 */
export async function killRuns(times: number, seed: number, victim: Victim, folder: string): Promise<Killed> {
  const out = join(folder, "out");
  const pipelines = NAMES.map((name, i) =>
    pipelineIn(
      folder,
      victim.pipeline,
      i === 0 ? victim.edits : [...victim.edits, victim.other],
      `${name}.yaml`,
    ),
  );
  const warm = join(folder, "kept");
  const runs = (which: number, kept: string) => {
    const reuse = victim.reuse === undefined ? [] : ["--reuse", kept];
    return ["run", pipelines[which], ...reuse, ...victim.args];
  };
  const random = randomStream(seed, "kills", 0);
  const noted = join(folder, "lengths.json");
  const references = NAMES.map((name) => join(folder, `reference-${name}`));
  if (!existsSync(noted)) {
    const lengths = { cold: 0, writing: 0 };
    const watched = async (pid: number) => {
      lengths.writing = await writingTime(out, pid);
    };
    for (const [which, reference] of references.entries()) {
      lengths.cold = await timed(async () =>
        expect(await covey(runs(which, warm), { started: (pid) => void watched(pid) })).toMatchObject(DONE),
      );
      cpSync(out, reference, { recursive: true });
    }
    writeFileSync(noted, JSON.stringify(lengths));
  }
  const whole = references.map(bytesBelow);
  const { cold: coldLength, writing } = JSON.parse(readFileSync(noted, "utf8")) as Record<string, number>;
  let warmLength = coldLength;
  const which = () => whole.findIndex((files) => sameFiles(files, bytesBelow(out)));
  // What an earlier call was stopped in the middle of is brought to an end first.
  await covey(["verify", out]);
  let held = which();
  const tally: Killed = {
    kills: 0,
    missed: 0,
    cold: 0,
    at: { "before writing": 0, "writing the output": 0, swapping: 0, "after the swap": 0 },
    keptHalf: 0,
    old: 0,
    fresh: 0,
    verified: 0,
    right: 0,
  };
  for (let i = 0; tally.kills < times && i < 3 * times; i++) {
    const next = 1 - held;
    const cold = victim.reuse !== undefined && i % victim.reuse.coldEvery === victim.reuse.coldEvery - 1;
    const kept = cold ? join(folder, "kept-cold") : warm;
    if (cold) rmSync(kept, { recursive: true, force: true });
    mkdirSync(kept, { recursive: true });
    if (!cold) dropSome(kept, random);
    const length = cold ? coldLength : warmLength;
    const aim =
      i % 4 === 1 ? "output" : i % 4 === 3 ? (victim.reuse === undefined ? "output" : "kept") : "anywhere";
    const moments = {
      anywhere: () => wait(random.uniform() * length),
      output: async (pid: number) => {
        while (!existsSync(`${out}.journal`) && running(pid)) await wait(1);
        await wait(random.uniform() * writing);
      },
      kept: (pid: number) => keptWrite(kept, 1 + random.below(8), pid),
    };
    const kill = async (pid: number) => {
      await moments[aim](pid);
      if (running(pid)) process.kill(pid, "SIGKILL");
    };
    const ended = await covey(runs(next, kept), { started: (pid) => void kill(pid) });
    const hit = ended.code === 137;
    if (!hit) expect(ended).toMatchObject(DONE);
    const step = journal(out);
    const half = halves(kept).length > 0;
    const verified = await covey(["verify", out]);
    expect(verified, JSON.stringify({ step, i })).toMatchObject(DONE);
    // The dead run's lock may stay until the next run takes it; it says nothing of the output.
    expect(beside(folder).filter((name) => name !== "out.lock")).toEqual(["out"]);
    const stands = which();
    expect(stands, "the old output or the new one, whole").not.toBe(-1);
    if (hit) {
      tally.kills++;
      tally.verified++;
      if (cold) tally.cold++;
      if (half) tally.keptHalf++;
      tally[stands === held ? "old" : "fresh"]++;
      tally.at[step ?? (stands === held ? "before writing" : "after the swap")]++;
    } else tally.missed++;
    held = stands;
    if (i % victim.againEvery === 0) {
      const took = await timed(async () => expect(await covey(runs(next, kept))).toMatchObject(DONE));
      if (!cold) warmLength = took;
      expect(beside(folder)).toEqual(["out"]);
      expect(halves(kept)).toEqual([]);
      expect(which(), "the killed run's own output").toBe(next);
      held = next;
      if (hit) tally.right++;
    }
    if (cold) rmSync(kept, { recursive: true });
  }
  return tally;
}

async function timed(work: () => Promise<void>): Promise<number> {
  const begun = performance.now();
  await work();
  return performance.now() - begun;
}

/** How long the output's journal stands: the time in which a run writes. */
async function writingTime(out: string, pid: number): Promise<number> {
  while (!existsSync(`${out}.journal`) && running(pid)) await wait(1);
  return timed(async () => {
    while (existsSync(`${out}.journal`) && running(pid)) await wait(1);
  });
}

/** Waits for the nth result that is begun to be written, or for the end of the process. */
async function keptWrite(kept: string, nth: number, pid: number): Promise<void> {
  let seen = 0;
  const watcher = watch(kept, (_, name) => {
    // Told twice at least: when the file is made and when it is renamed. The signal goes out right here.
    if (name?.endsWith(".part") && ++seen === nth && running(pid)) process.kill(pid, "SIGKILL");
  });
  while (seen < nth && running(pid)) await wait(5);
  watcher.close();
}

/** Takes away a few kept results, so that their steps are done and kept again. */
function dropSome(kept: string, random: Random): void {
  const files = readdirSync(kept).sort();
  for (let n = 0; n < Math.min(4, files.length); n++)
    rmSync(join(kept, files[random.below(files.length)]), { force: true });
}

function halves(kept: string): readonly string[] {
  return existsSync(kept) ? readdirSync(kept).filter((name) => name.endsWith(".part")) : [];
}

/** The output and what stands beside it under names of its own. */
function beside(folder: string): readonly string[] {
  return readdirSync(folder)
    .filter((name) => name.startsWith("out"))
    .sort();
}

function journal(out: string): Moment | undefined {
  if (existsSync(`${out}.journal`))
    return readFileSync(`${out}.journal`, "utf8").startsWith("swapping") ? "swapping" : "writing the output";
  return existsSync(`${out}.journal.part`) ? "writing the output" : undefined;
}

function running(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch {
    return false;
  }
}

function sameFiles(a: ReadonlyMap<string, Buffer>, b: ReadonlyMap<string, Buffer>): boolean {
  return a.size === b.size && [...a].every(([path, bytes]) => b.get(path)?.equals(bytes) === true);
}
