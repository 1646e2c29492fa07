import { criteriaOf, criterionValue } from "../screen/criterion.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { ScreenProblem } from "../screen/problem.ts";
import type { ProcedureSetting } from "../screen/procedure.ts";
import type { Refits } from "../screen/refits.ts";
import { glsFit, rotateColumns } from "../survival/gls.ts";
import type { TwoStep } from "../survival/two-step.ts";

/** More subsets than this are not gone through. */
const MOST_SUBSETS = 20_000;
/** Of each size this many, the best by the approximation, are fitted exactly. */
const REFITTED = 8;

/**
 * The best subset of at most ⌊n/5⌋ covariates by the criterion that counts animals, in two steps: −2 log L of every
 * subset is approximated by that of the Gaussian whose top and curvature are those of the interval logits (`two`, no
 * variation between years), which costs microseconds; the best few of each size are then fitted exactly. Undefined
 * where there are more than 20,000 subsets. Full enumeration (`bestSmallSubset`) is the check.
 */
export function quickSubset(
  problem: ScreenProblem,
  two: TwoStep,
  refit: Refits,
  setting: ProcedureSetting,
  options: Pick<ScreenOptions, "chooseBy" | "betweenAnimals">,
): readonly number[] | undefined {
  const { frame, covariates } = problem;
  const K = covariates.length;
  const most = Math.min(K, Math.floor(setting.intervals / 5));
  const ones = new Float64Array(frame.intervals).fill(1);
  const shared = [ones, ...frame.forced.map((one) => one.values)];
  const rotated = rotateColumns(two, [...shared, ...covariates.map((one) => one.values)]);
  const always = shared.map((_, i) => i);
  const { sampleSize } = setting;
  const counted = { sampleSize, covariates: K, betweenAnimals: options.betweenAnimals ?? Number.NaN };
  const worth = (set: readonly number[]) => {
    const parameters = setting.constantParameters + set.length;
    const criteria = criteriaOf({ minus2LogL: refit(set), parameters, active: set.length }, counted);
    return criterionValue(options.chooseBy, criteria, parameters, sampleSize);
  };
  let best: { readonly set: readonly number[]; readonly value: number } = { set: [], value: worth([]) };
  let level: readonly (readonly number[])[] = [[]];
  let tried = 1;
  for (let size = 1; size <= most; size++) {
    const next: (readonly number[])[] = [];
    for (const set of level)
      for (let k = set.length === 0 ? 0 : set[set.length - 1] + 1; k < K; k++) {
        next.push([...set, k]);
        if (++tried > MOST_SUBSETS) return undefined;
      }
    const ranked = next
      .map((set) => ({
        set,
        left: glsFit(rotated, [...always, ...set.map((k) => shared.length + k)], 0).minus2LogL,
      }))
      .filter(({ left }) => Number.isFinite(left))
      .sort((a, b) => a.left - b.left);
    for (const { set } of ranked.slice(0, REFITTED)) {
      const value = worth(set);
      if (value < best.value - 1e-9) best = { set, value };
    }
    level = next;
  }
  return best.set;
}
