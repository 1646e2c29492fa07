import { dayOf } from "../../src/data/day.ts";
import type { Occasion } from "../../src/data/occasion.ts";
import type { Files } from "../../src/effects/effects.ts";
import { CoveyError } from "../../src/errors.ts";

/** Files that exist in memory only. */
export function inMemory(texts: Readonly<Record<string, string>>): Files {
  const absent = () => {
    throw new Error("only readText is there");
  };
  return {
    list: async (patterns) => patterns,
    readText: async (path) => {
      if (path in texts) return texts[path];
      throw new Error(`no file ${path}`);
    },
    readBytes: absent,
    open: absent,
    absolute: absent,
    identity: absent,
  };
}

/** Rows as they stand in a file. */
export const lines = (...rows: readonly string[]) => `${rows.join("\n")}\n`;

/** One occasion a year from 2001, 20 to 24 July. */
export function yearly(count: number): readonly Occasion[] {
  return Array.from({ length: count }, (_, index) => ({
    index,
    name: String(2001 + index),
    first: dayOf(2001 + index, 7, 20),
    last: dayOf(2001 + index, 7, 24),
    effort: Number.NaN,
  }));
}

/** Name and whole text of the error that a promise ends with. */
export async function errorOf(promise: Promise<unknown>): Promise<{ name: string; message: string }> {
  try {
    await promise;
  } catch (error) {
    if (error instanceof CoveyError) return { name: error.facts.name, message: error.message };
    throw error;
  }
  throw new Error("no error was thrown");
}
