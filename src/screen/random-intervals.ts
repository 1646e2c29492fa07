import { fitRandomInterval, type RandomIntervalCoefficient } from "../survival/random-interval.ts";
import { twoStep } from "../survival/two-step.ts";
import type { ScreenProblem } from "./problem.ts";

/** What the model with a random effect of each interval says of the covariates chosen by years. */
export interface RandomIntervalEvidence {
  /** σ of the interval effects by REML, without covariates and with those chosen by years; on the logit scale. */
  readonly sigmaWithout: number;
  readonly sigma: number;
  /**
   * 1 − σ²/σ²_without: the share of the variance between years that they account for; below 0 where a covariate that
   * explains little costs more than it gives, NaN where there is no variance to explain (σ_without at 0).
   */
  readonly explained: number;
  /** Effects of the covariates chosen by years, per sd, with t intervals that allow for variation between years. */
  readonly effects: readonly RandomIntervalCoefficient[];
  /** Modes of the interval effects beside those covariates, n: what each year had that no covariate tells. */
  readonly modes: Float64Array;
  /** Indices of intervals whose own survival runs to 0 or 1; here they are drawn back to the others, not lost. */
  readonly atBound: readonly number[];
  /** False if a fit did not reach its optimum: then none of this is to be relied on. */
  readonly settled: boolean;
}

/** The random-interval model without covariates and with those at the positions `chosen`. */
export function randomIntervalEvidence(
  problem: ScreenProblem,
  chosen: readonly number[],
): RandomIntervalEvidence {
  const without = fitRandomInterval(problem, []);
  const withChosen = chosen.length === 0 ? without : fitRandomInterval(problem, chosen);
  const names = chosen.map((k) => problem.covariates[k].name);
  const variance = without.sigmaReml ** 2;
  return {
    sigmaWithout: without.sigmaReml,
    sigma: withChosen.sigmaReml,
    explained: variance > 0 ? 1 - withChosen.sigmaReml ** 2 / variance : Number.NaN,
    effects: withChosen.coefficients.filter((one) => names.includes(one.name)),
    modes: withChosen.modes,
    atBound: twoStep(problem).atBound,
    settled: without.stopped === "optimum" && withChosen.stopped === "optimum",
  };
}
