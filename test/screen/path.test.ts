import { describe, expect, test } from "vitest";
import { lassoPath, solveNull } from "../../src/screen/path.ts";
import { designWith, type ScreenProblem } from "../../src/screen/problem.ts";
import { adaptiveWeights } from "../../src/screen/weights.ts";
import { constantRecapture, type Frame } from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf, reference } from "../support/reference.ts";

interface Path {
  readonly weights_raw: number[];
  readonly lambda_total_nll_scale: number[];
  readonly lambda_max_total: number;
  readonly coef_polished: number[][];
}
interface P1 {
  readonly data: { releases: number[]; recaptured_next_occasion: number[]; covariates_14x6: number[][] };
  readonly expected: {
    null: { intercept: number; nll: number; gradient_total_nll_wrt_beta: number[] };
    mle: { coef: number[]; se: number[]; nll: number };
    ridge: { coef: number[] };
    plain_lasso: Path;
    adaptive_lasso_weights_1_over_abs_mle: Path;
    adaptive_lasso_weights_1_over_abs_ridge: Path;
  };
}
interface CjsPath {
  readonly weights: number[];
  readonly lambda_max: number;
  readonly lambda: number[];
  readonly coef: number[][];
  readonly p: number[];
  readonly nll: number[];
}
interface Cjs {
  readonly data: { releases: number[]; m_array: number[][]; covariates_14x6: number[][] };
  readonly expected: {
    full_mle: { coef: number[]; se: number[]; minus2logL: number };
    plain_lasso: CjsPath;
    adaptive_lasso_weights_1_over_abs_mle: CjsPath;
  };
}

const frame: Frame = {
  strata: ["all"],
  intervals: 14,
  lengths: new Float64Array(14).fill(1),
  forced: [],
  effort: undefined,
};
const named = (rows: readonly (readonly number[])[]) =>
  rows[0].map((_, k) => ({ name: `x${k + 1}`, values: Float64Array.from(rows, (row) => row[k]) }));

let worstResidual = 0;
let worstCoefficient = 0;

describe("with recapture known to be 1 the screen is a weighted binomial lasso", () => {
  // C_p1_lasso.json: a sparse-GLM package of R, polished by Newton steps and KKT-checked; tolerance 1e-8 on coefficients.
  const file = reference<P1>("C_p1_lasso");
  const n = file.data.releases.length;
  const seen = file.data.recaptured_next_occasion.map((m, i) =>
    Array.from({ length: n }, (_, j) => (i === j ? m : 0)),
  );
  const problem: ScreenProblem = {
    data: [sufficientStatistics(countsOf(file.data.releases, seen))],
    frame,
    recapture: { known: 1 },
    covariates: named(file.data.covariates_14x6),
  };

  test("null model, maximum likelihood and ridge", () => {
    const smooth = cjsLikelihood(problem.data, designWith(problem));
    const nothing = solveNull(problem, smooth);
    expect(nothing.x[0]).toBeCloseTo(file.expected.null.intercept, 9);
    expect(nothing.smooth).toBeCloseTo(file.expected.null.nll, 9);
    file.expected.null.gradient_total_nll_wrt_beta.forEach((g, k) =>
      expect(nothing.gradient[k + 1]).toBeCloseTo(g, 6),
    );
    const fit = fitModel(problem.data, designWith(problem));
    file.expected.mle.coef.forEach((value, k) => expect(fit.estimates[k]).toBeCloseTo(value, 8));
    file.expected.mle.se.forEach((value, k) => expect(fit.se[k]).toBeCloseTo(value, 8));
  });

  test.each([
    "plain_lasso",
    "adaptive_lasso_weights_1_over_abs_mle",
    "adaptive_lasso_weights_1_over_abs_ridge",
  ] as const)("%s: λ_max and every coefficient", (which) => {
    const expected = file.expected[which];
    const path = lassoPath(problem, Float64Array.from(expected.weights_raw), {
      steps: 30,
      downTo: 0.001,
      lambdas: expected.lambda_total_nll_scale,
    });
    expect(Math.abs(path.lambdaMax / expected.lambda_max_total - 1)).toBeLessThan(1e-9);
    path.steps.forEach((step, i) => {
      worstResidual = Math.max(worstResidual, step.residual);
      expected.coef_polished[i].forEach((value, k) => {
        const away = Math.abs(step.estimates[k] - value);
        worstCoefficient = Math.max(worstCoefficient, away);
        expect(away).toBeLessThan(1e-6);
      });
    });
  });

  test("weights by maximum likelihood equal the reference's", () => {
    const weights = adaptiveWeights(problem, 1);
    expect(weights.by).toBe("maximum likelihood");
    file.expected.adaptive_lasso_weights_1_over_abs_mle.weights_raw.forEach((w, k) =>
      expect(Math.abs(weights.weights[k] / w - 1)).toBeLessThan(1e-6),
    );
  });

  test("two equal columns make the information singular, so ridge gives the weights", () => {
    const twice = {
      ...problem,
      covariates: [...problem.covariates, { ...problem.covariates[0], name: "again" }],
    };
    const weights = adaptiveWeights(twice, 1);
    expect(weights.by).toBe("ridge");
    expect(weights.first[0]).toBeCloseTo(weights.first[6], 8);
    // glmnet's λ 0.01 halved is the same ridge: nll/N + (0.01/2) Σβ²
    const single = adaptiveWeights({ ...problem, covariates: problem.covariates }, 1);
    expect(single.by).toBe("maximum likelihood");
  });
});

describe("with recapture estimated", () => {
  // D_cjs_lasso.json: own likelihood in R with L-BFGS-B on split coordinates, polished and KKT-checked to 1e-9;
  // tolerance 1e-6 on coefficients, 1e-8 relative on λ_max, 1e-8 on −log L.
  const file = reference<Cjs>("D_cjs_lasso");
  const problem: ScreenProblem = {
    data: [sufficientStatistics(countsOf(file.data.releases, file.data.m_array))],
    frame,
    recapture: constantRecapture(frame),
    covariates: named(file.data.covariates_14x6),
  };

  test("the unpenalised fit", () => {
    const fit = fitModel(problem.data, designWith(problem));
    expect(fit.minus2LogL).toBeCloseTo(file.expected.full_mle.minus2logL, 8);
    file.expected.full_mle.coef.forEach((value, k) => expect(fit.estimates[k]).toBeCloseTo(value, 7));
    file.expected.full_mle.se.forEach((value, k) =>
      expect(Math.abs(fit.se[k] / value - 1)).toBeLessThan(1e-5),
    );
  });

  test.each(["plain_lasso", "adaptive_lasso_weights_1_over_abs_mle"] as const)(
    "%s: every coefficient",
    (which) => {
      const expected = file.expected[which];
      const path = lassoPath(problem, Float64Array.from(expected.weights), {
        steps: 12,
        downTo: 0.001,
        lambdas: expected.lambda,
      });
      expect(Math.abs(path.lambdaMax / expected.lambda_max - 1)).toBeLessThan(1e-8);
      path.steps.forEach((step, i) => {
        worstResidual = Math.max(worstResidual, step.residual);
        expect(step.residual).toBeLessThanOrEqual(1e-8);
        expect(Math.abs(step.minus2LogL / 2 - expected.nll[i])).toBeLessThan(1e-6);
        // the reference lists intercept and covariates, recapture (as a rate) apart
        for (let k = 0; k < 7; k++) {
          const away = Math.abs(step.estimates[k] - expected.coef[i][k]);
          worstCoefficient = Math.max(worstCoefficient, away);
          expect(away).toBeLessThan(1e-6);
        }
        expect(Math.abs(1 / (1 + Math.exp(-step.estimates[7])) - expected.p[i])).toBeLessThan(1e-6);
      });
    },
  );

  test("the largest residual and distance over all paths of both files", () => {
    console.log(
      `largest KKT residual / λ_max ${worstResidual.toExponential(2)}, largest distance ${worstCoefficient.toExponential(2)}`,
    );
    expect(worstResidual).toBeLessThanOrEqual(1e-8);
    expect(worstCoefficient).toBeLessThan(1e-6);
  });
});
