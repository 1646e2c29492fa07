import type { ScreenProblem } from "../screen/problem.ts";
import { effectsDesign } from "../survival/effects-design.ts";
import type { Fit } from "../survival/fit.ts";
import { fitRandomInterval } from "../survival/random-interval.ts";
import { inside, newlyMarked, type StudyDesign } from "./study-design.ts";

const logit = (rate: number) => Math.log(rate / (1 - rate));

/**
 * The study as the random-interval model with the covariates `which` has it, effects of years at 0: logit s = Xβ̂,
 * logit p = Zα̂ at σ by REML. Years are then drawn around it.
 */
export function randomIntervalDesign(problem: ScreenProblem, which: readonly number[]): StudyDesign {
  const { design, survival } = effectsDesign(problem, which);
  const { coefficients } = fitRandomInterval(problem, which);
  const predictor = (columns: readonly Float64Array[], first: number, row: number) =>
    columns.reduce((sum, column, j) => sum + column[row] * coefficients[first + j].estimate, 0);
  const beta = design.survival.columns.slice(0, survival);
  const { recapture } = design;
  return designOf(
    problem,
    (row) => predictor(beta, 0, row),
    (row) =>
      "known" in recapture
        ? recapture.known
        : 1 / (1 + Math.exp(-predictor(recapture.columns, survival, row))),
  );
}

/** The study with every year's own survival and the recapture part as the model with one survival per interval has them. */
export function conditionalDesign(problem: ScreenProblem, interval: Fit): StudyDesign {
  return designOf(
    problem,
    (row) => logit(inside(interval.survival[row].value)),
    (row) => ("known" in problem.recapture ? problem.recapture.known : inside(interval.recapture[row].value)),
  );
}

function designOf(
  { data, frame, recapture, covariates }: ScreenProblem,
  baseline: (row: number) => number,
  seen: (row: number) => number,
): StudyDesign {
  const n = frame.intervals;
  return {
    frame,
    recapture,
    covariates,
    strata: data.map((one, g) => ({
      stratum: one.stratum,
      marked: newlyMarked(one),
      baseline: Float64Array.from({ length: n }, (_, t) => baseline(g * n + t)),
      recapture: Float64Array.from({ length: n }, (_, t) => seen(g * n + t)),
    })),
  };
}
