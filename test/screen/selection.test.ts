import { describe, expect, test } from "vitest";
import { chooseOnPath } from "../../src/screen/choice.ts";
import { lassoPath, solveNull } from "../../src/screen/path.ts";
import { designWith, type ScreenProblem } from "../../src/screen/problem.ts";
import { correlationOf, runProcedure } from "../../src/screen/procedure.ts";
import { refitsOf } from "../../src/screen/refits.ts";
import { adaptiveWeights } from "../../src/screen/weights.ts";
import { chooseByYears } from "../../src/screen/years.ts";
import { constantRecapture, type Frame, intervalSurvival } from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf, reference } from "../support/reference.ts";

// J_selection.json: own likelihood and proximal Newton in R 4.2; worked examples to 1e-6 on coefficients, 1e-7 on
// −2 log L.
interface Example {
  readonly releases: number[];
  readonly m_array: number[][];
  readonly x1: number[];
  readonly x2: number[];
  readonly n: number;
  readonly minus2logL_null_x1_x2_both: number[];
  readonly minus2logL_phi_t: number;
  readonly coef_both: number[];
  readonly adaptive_weights: number[];
  readonly lambda_max: number;
  readonly lambda: number[];
  readonly path_coef: number[][];
  readonly path_minus2logL: number[];
  readonly path_BIC_n_releases: number[];
  readonly selected_code_by_rule: Record<string, number>;
}
interface Selection {
  readonly expected: { worked_examples_scenario_effect_minus_0: never } & Record<string, Example[]>;
}

const frame: Frame = {
  strata: ["all"],
  intervals: 17,
  lengths: new Float64Array(17).fill(1),
  forced: [],
  effort: undefined,
};
const examples =
  reference<Selection>("J_selection").expected["worked_examples_scenario_effect_minus_0.5_no_noise"];

const problemOf = (example: Example): ScreenProblem => ({
  data: [sufficientStatistics(countsOf(example.releases, example.m_array))],
  frame,
  recapture: constantRecapture(frame),
  covariates: [
    { name: "x1", values: Float64Array.from(example.x1) },
    { name: "x2", values: Float64Array.from(example.x2) },
  ],
});

describe("five worked selections", () => {
  test.each(examples.map((example, i) => [i + 1, example] as const))(
    "example %i: fits, weights, path, criterion, choice",
    (_, example) => {
      const problem = problemOf(example);
      const nothing = solveNull(problem, cjsLikelihood(problem.data, designWith(problem)));
      const refit = refitsOf(problem, nothing.x);
      [[], [0], [1], [0, 1]].forEach((set, i) =>
        expect(Math.abs(refit(set) - example.minus2logL_null_x1_x2_both[i])).toBeLessThan(1e-7),
      );
      const interval = fitModel(problem.data, designOf(frame, intervalSurvival(frame), problem.recapture));
      expect(Math.abs(interval.minus2LogL - example.minus2logL_phi_t)).toBeLessThan(1e-7);
      const weights = adaptiveWeights(problem, 1);
      example.adaptive_weights.forEach((w, k) =>
        expect(Math.abs(weights.weights[k] / w - 1)).toBeLessThan(1e-6),
      );
      const path = lassoPath(problem, weights.weights, { steps: 40, downTo: 0.001 });
      expect(Math.abs(path.lambdaMax / example.lambda_max - 1)).toBeLessThan(1e-6);
      const choice = chooseOnPath(path, 2, example.n, { chooseBy: "BIC", fit: "shrunken" }, refit);
      path.steps.forEach((step, i) => {
        expect(Math.abs(step.lambda / example.lambda[i] - 1)).toBeLessThan(1e-6);
        example.path_coef[i].forEach((value, k) =>
          expect(Math.abs(step.estimates[k] - value)).toBeLessThan(1e-6),
        );
        expect(Math.abs(step.minus2LogL - example.path_minus2logL[i])).toBeLessThan(1e-7);
        expect(Math.abs(choice.rows[i].bic - example.path_BIC_n_releases[i])).toBeLessThan(1e-7);
      });
      const code = (set: readonly number[]) => set.reduce((sum, k) => sum + 2 ** k, 0);
      expect(code(path.steps[choice.index].active)).toBe(example.selected_code_by_rule.lasso_BIC_releases);
      const setting = {
        intervals: 17,
        covariates: 2,
        interval: { minus2LogL: interval.minus2LogL, parameters: interval.parameters },
        constantParameters: 2,
        sampleSize: example.n,
      };
      const options = {
        steps: 40,
        downTo: 0.001,
        gamma: 1,
        chooseBy: "BIC",
        sampleSize: "releases",
        fit: "shrunken",
        permutations: 0,
      } as const;
      const found = runProcedure(problem, setting, options);
      const byDeviance = chooseByYears(found.candidates, found.refit, setting, correlationOf(problem));
      expect(code(byDeviance.chosen)).toBe(example.selected_code_by_rule["anodev_F_0.05"]);
    },
  );
});
