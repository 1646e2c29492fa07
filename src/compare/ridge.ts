import { criteriaOf, criterionValue } from "../screen/criterion.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { RidgePath, RidgeStep } from "../screen/ridge-path.ts";
import type { Fit } from "../survival/fit.ts";

/**
 * The ridge solution that the criterion of the whole comparison chooses, counting effective parameters, so that ridge
 * stands on the same terms as the lasso. Ties go to the stronger penalty, which comes first.
 */
export function ridgeChoice(
  { steps }: Pick<RidgePath, "steps">,
  options: Pick<ScreenOptions, "chooseBy" | "betweenAnimals">,
  sampleSize: number,
): RidgeStep {
  const value = ({ minus2LogL, effective: parameters, coefficients: { length: K } }: RidgeStep) => {
    // all covariates are in, so there is no choice among sets that an extended criterion would charge for
    const criteria = criteriaOf(
      { minus2LogL, parameters, active: K },
      { sampleSize, covariates: K, betweenAnimals: options.betweenAnimals ?? Number.NaN },
    );
    return criterionValue(options.chooseBy, criteria, parameters, sampleSize);
  };
  return steps.reduce((best, step) => (value(step) < value(best) - 1e-9 ? step : best));
}

/** The ridge solution as a fit beside the others: no standard errors, since shrinking biases every effect. */
export function ridgeFit(step: RidgeStep, survival: Float64Array, like: Fit, names: readonly string[]): Fit {
  const d = step.estimates.length;
  return {
    survivalWords: "all covariates, shrunken",
    recaptureWords: like.recaptureWords,
    names,
    estimates: step.estimates,
    se: new Float64Array(d).fill(Number.NaN),
    covariance: { rows: d, columns: d, data: new Float64Array(d * d).fill(Number.NaN) },
    minus2LogL: step.minus2LogL,
    parameters: step.effective,
    condition: Number.NaN,
    atBound: [],
    notSeparable: [],
    survival: like.survival.map((one, r) => ({
      ...one,
      value: survival[r],
      se: Number.NaN,
      low: Number.NaN,
      high: Number.NaN,
    })),
    recapture: [],
    largestGradient: step.largestGradient,
    stopped: "optimum",
  };
}
