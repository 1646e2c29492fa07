import { zeros } from "../data/matrix.ts";
import type { Occasion } from "../data/occasion.ts";
import type { Counts } from "./counts.ts";

/** When an animal (or `number` animals that share a history) was caught: occasion indices, ascending, not empty. */
export interface History {
  readonly stratum: string;
  readonly seen: readonly number[];
  /** Lost at the last of its captures: died, or its mark was taken off. */
  readonly lost: boolean;
  readonly number: number;
}

/** What happened at one occasion; NaN where a counts table does not tell. */
export interface OccasionTally {
  readonly occasion: string;
  readonly newlyMarked: number;
  readonly seenAgain: number;
  readonly lost: number;
}

/**
 * Release–recapture counts per stratum, strata in order of code unit (Burnham et al. 1987, the reduced array): each
 * capture but a loss is a release, counted under the occasion of the next capture.
 */
export function countsFrom(histories: readonly History[], occasions: number): readonly Counts[] {
  const strata = [...new Set(histories.map((one) => one.stratum))].sort((a, b) => (a < b ? -1 : 1));
  return strata.map((stratum) => {
    const own = histories.filter((one) => one.stratum === stratum);
    const released = new Float64Array(occasions - 1);
    const seen = zeros(occasions - 1, occasions - 1);
    for (const { seen: caught, lost, number } of own)
      caught.forEach((at, i) => {
        const next = caught[i + 1];
        // What is released at the last occasion, or lost, can never be seen again and enters no count.
        if (at >= occasions - 1 || (next === undefined && lost)) return;
        released[at] += number;
        if (next !== undefined) seen.data[at * seen.columns + next - 1] += number;
      });
    const animals = own.reduce((sum, one) => sum + one.number, 0);
    return { stratum, occasions, released, seen, animals };
  });
}

export function tallyFrom(
  histories: readonly History[],
  occasions: readonly Occasion[],
): readonly OccasionTally[] {
  const tally = occasions.map(() => ({ newlyMarked: 0, seenAgain: 0, lost: 0 }));
  for (const { seen, lost, number } of histories)
    seen.forEach((at, i) => {
      if (i === 0) tally[at].newlyMarked += number;
      else tally[at].seenAgain += number;
      if (lost && i === seen.length - 1) tally[at].lost += number;
    });
  return occasions.map(({ name }, t) => ({ occasion: name, ...tally[t] }));
}

/** e.g. `age at ringing: adult, site: north`; `all animals` without strata. */
export function stratumLabel(columns: readonly string[], values: readonly string[]): string {
  if (columns.length === 0) return "all animals";
  return columns.map((column, i) => `${column.replaceAll("_", " ")}: ${values[i]}`).join(", ");
}

/** The value of each column in a label of `stratumLabel`; none for `all animals`. */
export function stratumValues(columns: readonly string[], label: string): readonly string[] {
  let rest = label;
  return columns.map((column, i) => {
    rest = rest.slice(column.length + ": ".length);
    const next = columns[i + 1];
    const end = next === undefined ? -1 : rest.indexOf(`, ${next.replaceAll("_", " ")}: `);
    const value = end < 0 ? rest : rest.slice(0, end);
    rest = end < 0 ? "" : rest.slice(end + ", ".length);
    return value;
  });
}

/**
 * Of `countsFrom`, the part that the newly marked make up: each animal's first release and its next capture. An animal
 * lost when it was first caught is not released and is in none.
 */
export function firstReleases(histories: readonly History[], occasions: number): readonly Counts[] {
  const strata = [...new Set(histories.map((one) => one.stratum))].sort((a, b) => (a < b ? -1 : 1));
  return strata.map((stratum) => {
    const released = new Float64Array(occasions - 1);
    const seen = zeros(occasions - 1, occasions - 1);
    let animals = 0;
    for (const { stratum: own, seen: caught, lost, number } of histories) {
      const [at, next] = caught;
      // a loss at a later capture does not undo the first release
      if (own !== stratum || at >= occasions - 1 || (lost && caught.length === 1)) continue;
      released[at] += number;
      animals += number;
      if (next !== undefined) seen.data[at * seen.columns + next - 1] += number;
    }
    return { stratum, occasions, released, seen, animals };
  });
}
