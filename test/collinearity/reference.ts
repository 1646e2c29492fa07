import { readFileSync } from "node:fs";
import { fromRows, type Matrix } from "../../src/data/matrix.ts";

/** Reference numbers; each file states its source, data and tolerances. */
// biome-ignore lint/suspicious/noExplicitAny: the files are plain JSON with a shape of their own each
export function reference(name: string): any {
  return JSON.parse(readFileSync(new URL(`../reference/${name}.json`, import.meta.url), "utf8"));
}

export function fromRecords(records: readonly Record<string, number>[], names: readonly string[]): Matrix {
  return fromRows(records.map((one) => names.map((name) => one[name])));
}

/** Largest |a − b| over all, or |a/b − 1| if relative. */
export function worst(found: ArrayLike<number>, expected: ArrayLike<number>, relative = false): number {
  if (found.length !== expected.length) return Number.POSITIVE_INFINITY;
  let most = 0;
  for (let i = 0; i < found.length; i++) {
    const gap = relative ? Math.abs(found[i] / expected[i] - 1) : Math.abs(found[i] - expected[i]);
    // A NaN gap must not slip through the maximum.
    if (Number.isNaN(gap)) return Number.POSITIVE_INFINITY;
    most = Math.max(most, gap);
  }
  return most;
}
