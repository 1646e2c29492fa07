import type { CovariateMatrix } from "../covariates/result.ts";
import { column } from "../data/matrix.ts";
import { InputError } from "../errors.ts";
import { mean, sampleSd } from "../math/quantile.ts";
import type { ScreenProblem } from "../screen/problem.ts";
import type { Spec } from "../spec/spec.ts";
import type { Frame, NamedColumn } from "../survival/design.ts";
import { compareRecapture, type RecaptureComparison, recapturePart } from "../survival/recapture-choice.ts";
import { sufficientStatistics } from "../survival/statistics.ts";
import type { Ingested } from "./ingest.ts";

export interface Posed {
  readonly problem: ScreenProblem;
  readonly recapture: RecaptureComparison;
}

/** The columns that may be chosen: those the user did not drop and does not force in. */
export function candidateColumns(spec: Spec, matrix: CovariateMatrix): readonly number[] {
  const dropped = new Set(spec.collinearity.decisions.map((one) => one.drop));
  return matrix.names.flatMap((name, k) =>
    dropped.has(name) || spec.survival.forced.includes(name) ? [] : [k],
  );
}

/** Counts, strata, forced covariates, the recapture part compared first, and the candidates: the screen as posed. */
export function poseScreen(spec: Spec, found: Ingested, matrix: CovariateMatrix): Posed | undefined {
  if (found.captures === undefined) return undefined;
  const data = found.captures.counts.map(sufficientStatistics);
  const named = (k: number): NamedColumn => ({ name: matrix.names[k], values: column(matrix.standard, k) });
  const effort = standardEffort(found);
  const frame: Frame = {
    strata: data.map((one) => one.stratum),
    intervals: found.intervals.length,
    lengths: Float64Array.from(found.intervals, (one) => one.length),
    forced: spec.survival.forced.map((name) => {
      const k = matrix.names.indexOf(name);
      if (k < 0) throw forcedLeftOut(name);
      return named(k);
    }),
    effort,
  };
  const recapture = compareRecapture(data, frame, spec.recapture);
  return {
    problem: {
      data,
      frame,
      recapture: recapturePart(frame, recapture.chosen),
      covariates: candidateColumns(spec, matrix).map(named),
    },
    recapture,
  };
}

/** Effort of the recapture occasions, standardised; undefined where it is missing or always the same. */
function standardEffort(found: Ingested): Float64Array | undefined {
  const effort = Float64Array.from(found.occasions.slice(1), (one) => one.effort);
  if (effort.length < 2 || effort.some(Number.isNaN)) return undefined;
  const sd = sampleSd(effort);
  const centre = mean(effort);
  return sd > 1e-12 * Math.abs(centre) ? effort.map((value) => (value - centre) / sd) : undefined;
}

function forcedLeftOut(name: string): InputError {
  return new InputError({
    name: "survival.forced-left-out",
    expected: "every forced covariate in the matrix",
    found: `${name}, which was left out for missing values`,
    where: { cell: "survival > forced" },
    remedy: "choose another window or rule of completeness, or prepare: { incomplete: mean }",
  });
}
