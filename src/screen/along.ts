import type { PathStep } from "./path.ts";
import { designWith, type ScreenProblem } from "./problem.ts";

/**
 * Apparent annual survival at every step of a path, logit⁻¹(Xβ) with the shrunken coefficients: G·n rows, stratum after
 * stratum, as in `Fit.survival`.
 */
export function survivalAlong(problem: ScreenProblem, steps: readonly PathStep[]): readonly Float64Array[] {
  const { columns } = designWith(problem).survival;
  const rows = problem.frame.strata.length * problem.frame.intervals;
  return steps.map(({ estimates }) =>
    Float64Array.from({ length: rows }, (_, row) => {
      const eta = columns.reduce((sum, column, k) => sum + estimates[k] * column[row], 0);
      return 1 / (1 + Math.exp(-eta));
    }),
  );
}
