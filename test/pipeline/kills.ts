import { existsSync, readdirSync } from "node:fs";
import { join } from "node:path";
import { setTimeout as wait } from "node:timers/promises";
import { expect } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { openOutput, recoverOutput } from "../../src/publish/folder.ts";
import { verifyOutput } from "../../src/publish/verify.ts";
import { bytesBelow, covey, type Edit, pipelineIn, temporaryFolder } from "./covey.ts";

/** A pipeline to be killed, and what of it is made cheaper first. */
export interface Victim {
  readonly pipeline: string;
  readonly edits: readonly Edit[];
}

/** The dipper study without permutations: whole runs, but short ones. */
export const DIPPER: Victim = {
  pipeline: "test/cases/dipper/pipeline.yaml",
  edits: [[/permutations: \d+/, "permutations: 0"]],
};
/** The demo as it is shipped. */
export const DEMO: Victim = { pipeline: "pipelines/roost.yaml", edits: [] };

/** What killing a run again and again came to. */
export interface Killed {
  /** Kills that hit a running process; the others came after it had ended. */
  readonly hit: number;
  /** After how many hits the old output stood, and after how many the new one. */
  readonly old: number;
  readonly fresh: number;
  /** Hits at which something of the run (lock, journal, a half-written folder) was left beside the output. */
  readonly leftovers: number;
}

/**
 * Runs the victim once with each of two titles, then kills runs of one over the output of the other with SIGKILL,
 * at a moment drawn from the time a whole run takes or, every other time, from the last part of it, in which files are
 * written. After each kill the next command's recovery must leave exactly one of the two outputs, in agreement with its
 * record and with nothing beside it.
 */
export async function killRuns(times: number, seed: number, victim: Victim): Promise<Killed> {
  const folder = temporaryFolder();
  const out = join(folder.path, "out");
  const texts = ["before", "after"].map((title) => {
    const titled: Edit = [/title: ("[^"]*"|[^,}\n]*)/, `title: "The one ${title}"`];
    return pipelineIn(folder.path, victim.pipeline, [...victim.edits, titled], `${title}.yaml`);
  });
  const random = randomStream(seed, "kills", 0);
  const tally = { hit: 0, old: 0, fresh: 0, leftovers: 0 };
  try {
    const whole: ReadonlyMap<string, Buffer>[] = [];
    let [took, locked] = [0, 0];
    for (const pipeline of texts) {
      const begun = performance.now();
      const noteLock = async () => {
        while (!existsSync(`${out}.lock`)) await wait(2);
        locked = performance.now() - begun;
      };
      const ended = await covey(["run", pipeline, "--workers", "1"], { started: () => void noteLock() });
      expect(ended.code).toBe(0);
      took = performance.now() - begun;
      whole.push(bytesBelow(out));
    }
    let held = 1;
    for (let i = 0; i < times; i++) {
      const next = 1 - held;
      const until = random.uniform() * (took - locked);
      const late = i % 2 === 1;
      const kill = async (pid: number) => {
        // Late kills begin where the first sign of writing shows, so that they fall between the steps of the swap.
        while (!existsSync(late ? `${out}.journal` : `${out}.lock`)) {
          if (!running(pid)) return;
          await wait(late ? 0 : 2);
        }
        await wait(late ? random.uniform() * 60 : until);
        if (running(pid)) process.kill(pid, "SIGKILL");
      };
      const ended = await covey(["run", texts[next], "--workers", "1"], { started: (pid) => void kill(pid) });
      if (ended.code === 137) {
        tally.hit++;
        if (readdirSync(folder.path).length > 3) tally.leftovers++;
      } else expect(ended).toMatchObject({ code: 0, stderr: "" });
      // What every command does first: the lock of a dead run is taken over, a half swap brought to an end.
      openOutput(nodeDisk(), out).close();
      expect(recoverOutput(nodeDisk(), out)).toBe("nothing");
      expect(readdirSync(folder.path).sort()).toEqual(["after.yaml", "before.yaml", "out"]);
      expect(verifyOutput(nodeDisk(), out).departures).toEqual([]);
      const found = bytesBelow(out);
      const which = whole.findIndex((files) => sameFiles(files, found));
      expect(which, "the old output or the new one, whole").not.toBe(-1);
      if (ended.code === 137) tally[which === held ? "old" : "fresh"]++;
      held = which;
    }
    return tally;
  } finally {
    folder.remove();
  }
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
