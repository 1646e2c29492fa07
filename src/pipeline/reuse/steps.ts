import { deserialize, serialize } from "node:v8";
import { listWords } from "../../data/words.ts";
import type { Reuse } from "../../effects/effects.ts";
import { contentDigest } from "./digest.ts";

/** What became of one step of a run, and why. */
export interface StepNote {
  /** e.g. `covariate winter rain`. */
  readonly step: string;
  readonly outcome: "ran" | "reused";
  /** e.g. `the series of rain changed`. */
  readonly why: string;
}

/** Everything a step's result depends on, each part under the name a person knows it by. */
export type Ingredients = Readonly<Record<string, unknown>>;

/** The steps of a run whose results may stand from an earlier one. */
export interface Steps {
  /** False where nothing is kept, so that nothing need be prepared for it. */
  readonly keeps: boolean;
  /** The kept result of the same step with the same ingredients; else `work` is done and its result kept. */
  once<Result>(
    step: string,
    from: () => Ingredients | Promise<Ingredients>,
    work: () => Result | Promise<Result>,
  ): Promise<Result>;
  /** Notes what became of a step that is seen to elsewhere. */
  note(note: StepNote): void;
  readonly notes: readonly StepNote[];
}

/** Every step is done, and none of the results is kept. */
export function withoutReuse(): Steps {
  const notes: StepNote[] = [];
  return {
    keeps: false,
    notes,
    note: (one) => void notes.push(one),
    once: async (step, _from, work) => {
      notes.push({ step, outcome: "ran", why: "no results are kept without --reuse" });
      return work();
    },
  };
}

/**
 * Steps whose results are kept by content: the key of a result is the digest of the program, the step and its
 * ingredients, so a result is reused only where nothing that could change it has changed. For the question why a step ran,
 * the digests of the ingredients of its last run are kept too, by `scope` (which pipeline's). Ask no other question of
 * those: what is reused never depends on them. Results pass through V8's own serialisation, which keeps NaN, −0, Maps and
 * typed arrays; a kept result that is damaged counts as absent.
 */
export function stepsIn(reuse: Reuse, program: string, scope: string): Steps {
  const notes: StepNote[] = [];
  return {
    keeps: true,
    notes,
    note: (one) => void notes.push(one),
    once: async <Result>(
      step: string,
      from: () => Ingredients | Promise<Ingredients>,
      work: () => Result | Promise<Result>,
    ) => {
      const parts = digests({ "covey itself": program, ...(await from()) });
      const key = `step ${step} ${contentDigest(parts)}`;
      const lastKey = `last ${scope} ${step}`;
      const held = await readKept(reuse, key);
      const last = await readLast(reuse, lastKey);
      const why = held === undefined ? changeText(last, parts) : "nothing it depends on changed";
      if (held === undefined || !sameParts(last, parts)) await writeLast(reuse, lastKey, parts);
      notes.push({ step, outcome: held === undefined ? "ran" : "reused", why });
      // The key holds the step's name, and a step always makes results of one type.
      if (held !== undefined) return held.value as Result;
      const made = await work();
      await reuse.put(key, serialize(made));
      return made;
    },
  };
}

type Parts = Readonly<Record<string, string>>;

function digests(from: Ingredients): Parts {
  return Object.fromEntries(Object.entries(from).map(([name, value]) => [name, contentDigest(value)]));
}

async function readKept(reuse: Reuse, key: string): Promise<{ readonly value: unknown } | undefined> {
  const bytes = await reuse.get(key);
  if (bytes === undefined) return undefined;
  try {
    return { value: deserialize(bytes) };
  } catch {
    // Written by a Node that packs values otherwise: made again.
    return undefined;
  }
}

async function readLast(reuse: Reuse, key: string): Promise<Parts | undefined> {
  const bytes = await reuse.get(key);
  if (bytes === undefined) return undefined;
  const value: unknown = JSON.parse(new TextDecoder().decode(bytes));
  return typeof value === "object" && value !== null ? (value as Parts) : undefined;
}

function writeLast(reuse: Reuse, key: string, parts: Parts): Promise<void> {
  return reuse.put(key, new TextEncoder().encode(JSON.stringify(parts)));
}

function sameParts(last: Parts | undefined, now: Parts): boolean {
  return last !== undefined && contentDigest(last) === contentDigest(now);
}

/** What differs between the ingredients of the last run and these, in words. */
export function changeText(last: Parts | undefined, now: Parts): string {
  if (last === undefined) return "first run with these kept results";
  const names = (kind: (name: string) => boolean, of: Parts) => Object.keys(of).filter(kind);
  const has = (of: Parts, name: string) => Object.hasOwn(of, name);
  const said = [
    [names((name) => has(last, name) && last[name] !== now[name], now), "changed"],
    [names((name) => !has(last, name), now), "is new"],
    [names((name) => !has(now, name), last), "is gone"],
  ] as const;
  const parts = said.flatMap(([which, what]) =>
    which.length === 0
      ? []
      : [`${listWords(which)} ${which.length > 1 ? what.replace("is ", "are ") : what}`],
  );
  return parts.length === 0 ? "its kept result is gone or damaged" : parts.join("; ");
}
