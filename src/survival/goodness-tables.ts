import type { Counts } from "../study/counts.ts";
import type { History } from "../study/histories.ts";

/** The four components of the fit of the general model, in plain words. */
export const COMPONENTS = [
  "newly marked or seen before: met again at all",
  "newly marked or seen before: when met again",
  "met or passed over: met at the next occasion",
  "met or passed over: when met after that",
] as const;

export type GoodnessComponent = (typeof COMPONENTS)[number];

/** A table of two rows at one occasion; columns are in order of time. */
export interface OccasionTable {
  readonly component: GoodnessComponent;
  /** Index of the occasion, 0 for the first. */
  readonly occasion: number;
  readonly first: Float64Array;
  readonly second: Float64Array;
}

/**
 * The tables that need to know who was newly marked (T occasions, indices 0 … T − 1; animals lost on capture are not
 * released and so do not count). Among the animals released at occasion i, newly marked against seen before:
 * - met again at all: met later, or never again; i = 1 … T − 2;
 * - when met again: those met again, by the occasion of the next meeting, i + 1 … T − 1; i = 1 … T − 3.
 * (Burnham et al. 1987, the test that compares cohorts; the first part is the test of transience in Pradel, Hines,
 * Lebreton & Nichols 1997, Biometrics 53:60.)
 */
export function markedTables(histories: readonly History[], occasions: number): OccasionTable[] {
  const again = tablesOf(COMPONENTS[0], occasions - 2, () => 2);
  const when = tablesOf(COMPONENTS[1], occasions - 3, (i) => occasions - 1 - i);
  for (const { seen, lost, number } of histories)
    seen.forEach((at, i) => {
      const next: number | undefined = seen[i + 1];
      if (next === undefined && lost) return;
      const row = i === 0 ? "first" : "second";
      add(again, at, row, next === undefined ? 1 : 0, number);
      if (next !== undefined) add(when, at, row, next - at - 1, number);
    });
  return [...again, ...when];
}

/**
 * The tables that release–recapture counts give as well. Among the animals released at or before occasion i and met
 * again after it, met at i against passed over at i:
 * - met at the next occasion: at i + 1, or later; i = 1 … T − 3;
 * - when met after that: those not met at i + 1, by the occasion of the next meeting, i + 2 … T − 1; i = 1 … T − 4.
 * (Burnham et al. 1987, the test within the reduced array; the first part is the test of trap dependence in Pradel
 * 1993, in Lebreton & North, Marked Individuals in the Study of Bird Population.)
 */
export function metTables(counts: Counts): OccasionTable[] {
  const { occasions, seen } = counts;
  const nextTime = tablesOf(COMPONENTS[2], occasions - 3, () => 2);
  const after = tablesOf(COMPONENTS[3], occasions - 4, (i) => occasions - 2 - i);
  for (let from = 0; from < occasions - 1; from++)
    for (let to = from + 1; to < occasions; to++) {
      const number = seen.data[from * seen.columns + to - 1];
      if (number === 0) continue;
      for (let i = from; i < to; i++) {
        const row = i === from ? "first" : "second";
        add(nextTime, i, row, to === i + 1 ? 0 : 1, number);
        if (to > i + 1) add(after, i, row, to - i - 2, number);
      }
    }
  return [...nextTime, ...after];
}

/** Empty tables for occasions 1 … `last`. */
function tablesOf(
  component: GoodnessComponent,
  last: number,
  columns: (occasion: number) => number,
): OccasionTable[] {
  return Array.from({ length: Math.max(0, last) }, (_, k) => ({
    component,
    occasion: k + 1,
    first: new Float64Array(columns(k + 1)),
    second: new Float64Array(columns(k + 1)),
  }));
}

/** Adds to the table of an occasion, if there is one: the first and the last occasions have none. */
function add(
  tables: readonly OccasionTable[],
  occasion: number,
  row: "first" | "second",
  column: number,
  number: number,
): void {
  if (occasion < 1 || occasion > tables.length) return;
  tables[occasion - 1][row][column] += number;
}
