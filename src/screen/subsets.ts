import { criteriaOf, criterionValue } from "./criterion.ts";
import type { ScreenOptions } from "./options.ts";
import type { ProcedureSetting } from "./procedure.ts";
import type { Refits } from "./refits.ts";

/** More subsets than this are not gone through: the check is for small studies. */
const MOST_SUBSETS = 20_000;

export interface BestSubset {
  readonly set: readonly number[];
  readonly criterion: number;
  /** How many subsets were fitted. */
  readonly tried: number;
}

/**
 * All subsets of at most ⌊n/5⌋ of the K covariates (n intervals), by the criterion that counts animals, ties to the
 * smaller one: a check on what the path may have missed. Undefined where there are more than 20,000.
 */
export function bestSmallSubset(
  refit: Refits,
  setting: ProcedureSetting,
  options: Pick<ScreenOptions, "chooseBy" | "betweenAnimals">,
): BestSubset | undefined {
  const most = Math.floor(setting.intervals / 5);
  if (countSubsets(setting.covariates, most) > MOST_SUBSETS) return undefined;
  let best: BestSubset = { set: [], criterion: Number.POSITIVE_INFINITY, tried: 0 };
  let tried = 0;
  for (const set of subsets(setting.covariates, most)) {
    tried++;
    const parameters = setting.constantParameters + set.length;
    const model = { minus2LogL: refit(set), parameters, active: set.length };
    const criteria = criteriaOf(model, {
      sampleSize: setting.sampleSize,
      covariates: setting.covariates,
      betweenAnimals: options.betweenAnimals ?? Number.NaN,
    });
    const value = criterionValue(options.chooseBy, criteria, parameters, setting.sampleSize);
    if (value < best.criterion - 1e-9) best = { set, criterion: value, tried };
  }
  return { ...best, tried };
}

/** Σ_{j ≤ most} C(k, j). */
function countSubsets(k: number, most: number): number {
  let total = 1;
  let binomial = 1;
  for (let j = 1; j <= Math.min(k, most); j++) {
    binomial = (binomial * (k - j + 1)) / j;
    total += binomial;
  }
  return total;
}

/** Subsets of 0 … k − 1 with at most `most` members, smaller ones first, each ascending. */
function* subsets(k: number, most: number): Generator<readonly number[]> {
  let level: readonly (readonly number[])[] = [[]];
  yield [];
  for (let size = 1; size <= Math.min(k, most); size++) {
    const next: (readonly number[])[] = [];
    for (const set of level)
      for (let j = set.length === 0 ? 0 : set[set.length - 1] + 1; j < k; j++) next.push([...set, j]);
    yield* next;
    level = next;
  }
}
