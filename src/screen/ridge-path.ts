import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { Smooth } from "../solve/smooth.ts";
import { aicc } from "../survival/criteria.ts";
import { gradientTolerance, inverseLogit, totalReleases } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import { refuseSolution, solveNull } from "./path.ts";
import { covariatePositions, designWith, type ScreenProblem } from "./problem.ts";
import { inRowSpace } from "./row-space.ts";
import { withRidge } from "./weights.ts";

/** One ridge solution: −log L + κ Σ β² at its least. */
export interface RidgeStep {
  /** κ, on the total scale (no division by n). */
  readonly strength: number;
  /** All d coefficients: intercept, strata, forced, covariates, recapture. */
  readonly estimates: Float64Array;
  /** The K covariate coefficients, logit per sd. */
  readonly coefficients: Float64Array;
  readonly minus2LogL: number;
  /** Effective parameters, tr[(H + 2κD)⁻¹ H], unpenalised ones counted in. */
  readonly effective: number;
  /** With the effective parameters; NaN where n − k − 1 ≤ 0. */
  readonly aicc: number;
  readonly largestGradient: number;
}

export interface RidgePath {
  /** From the strongest penalty to the weakest. */
  readonly steps: readonly RidgeStep[];
  /** Index of the least AICc; ties go to the stronger penalty. */
  readonly index: number;
  /** Apparent annual survival of the chosen one by row (strata × intervals). */
  readonly survival: Float64Array;
}

/** Strengths in units of the releases: from next to no covariate left to next to no penalty. */
const STRONGEST = 10;
const WEAKEST = 1e-5;
const STEPS = 40;

/**
 * Ridge estimates (Hoerl & Kennard 1970) of all covariates at once, beside the lasso: −log L + κ Σ_k β_k² with κ from
 * 10 to 10⁻⁵ times the number of releases in 40 log-equal steps, κ by AICc with the effective parameters
 * tr[(H + 2κD)⁻¹ H], H the information at the solution and D marking the penalised coefficients (Gray 1992, JASA 87:942;
 * Hastie, Tibshirani & Friedman 2009, eq. 3.50 for the linear case). Nothing is selected: every effect stays in,
 * shrunken, and correlated covariates share what they explain. With more covariates than rows it is solved in their row space
 * (`inRowSpace`), where the trace is the same: each direction left out has H = 0 and counts nothing. Throws `screen.no-optimum` where a fit does not converge.
 */
export function ridgePath(problem: ScreenProblem, sampleSize: number): RidgePath {
  const space = inRowSpace(problem);
  const smooth = cjsLikelihood(problem.data, designWith(space.problem));
  const positions = covariatePositions(space.problem);
  const releases = totalReleases(problem.data);
  const tolerance = gradientTolerance(problem.data);
  let x = solveNull(space.problem, smooth).x;
  const steps = Array.from({ length: STEPS }, (_, i): RidgeStep => {
    const strength = releases * STRONGEST * (WEAKEST / STRONGEST) ** (i / (STEPS - 1));
    const solution = proximalNewton(withRidge(smooth, positions, strength), noPenalty, x, {
      tolerance,
      iterations: 200,
    });
    // with a rate at its bound the last digits may be out of reach; a gradient this small moves nothing that is shown
    if (solution.violation > 1e3 * tolerance) refuseSolution(`ridge strength ${strength}`, solution);
    x = solution.x;
    const minus2LogL = 2 * smooth.evaluate(x, new Float64Array(smooth.dimension));
    const effective = effectiveParameters(smooth, positions, strength);
    const estimates = space.lengthen(x);
    return {
      strength,
      estimates,
      coefficients: Float64Array.from(covariatePositions(problem), (k) => estimates[k]),
      minus2LogL,
      effective,
      aicc: aicc(minus2LogL, effective, sampleSize),
      largestGradient: solution.violation,
    };
  });
  const index = steps.reduce((best, step, i) => (step.aicc < steps[best].aicc - 1e-9 ? i : best), 0);
  const columns = designWith(problem).survival.columns;
  const rows = problem.frame.strata.length * problem.frame.intervals;
  return { steps, index, survival: inverseLogit(columns, steps[index].estimates, rows) };
}

/** tr[(H + 2κD)⁻¹ H] = d − 2κ Σ_k [(H + 2κD)⁻¹]_kk over the penalised k, at the point last evaluated. */
function effectiveParameters(smooth: Smooth, positions: Int32Array, strength: number): number {
  const d = smooth.dimension;
  const h = new Float64Array(d * d);
  smooth.curvature(
    Int32Array.from({ length: d }, (_, k) => k),
    h,
  );
  for (const k of positions) h[k * d + k] += 2 * strength;
  if (!choleskyInPlace(h, d)) return Number.NaN;
  let effective = d;
  const column = new Float64Array(d);
  for (const k of positions) {
    column.fill(0);
    column[k] = 1;
    choleskySolve(h, d, column);
    effective -= 2 * strength * column[k];
  }
  return effective;
}
