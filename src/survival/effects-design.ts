import {
  closedYears,
  covariateSurvival,
  type Design,
  type Frame,
  fixedSurvivalColumns,
  type NamedColumn,
  type Part,
  survivalContrasts,
} from "./design.ts";
import type { SufficientStatistics } from "./statistics.ts";

/** What a random-interval model is fitted to; a screen's problem is one. */
export interface RandomIntervalProblem {
  readonly data: readonly SufficientStatistics[];
  readonly frame: Frame;
  readonly recapture: Part | { readonly known: number };
  readonly covariates: readonly NamedColumn[];
}

/**
 * A design with an effect ε_t for every interval, shared by the strata, after the survival coefficients: the
 * coefficient vector is (β: b, ε: n, α: a).
 */
export interface EffectsDesign {
  readonly design: Design;
  /** Survival coefficients b. */
  readonly survival: number;
  readonly intervals: number;
  /** Recapture coefficients a. */
  readonly recapture: number;
  /** Names of (β, α). */
  readonly names: readonly string[];
  /** Survival coefficients that say something about intervals: all but the contrasts between strata. */
  readonly spent: number;
  /** Where (β, α), b + a of them, stand in the coefficient vector. */
  readonly fixed: Int32Array;
}

/** The design with the covariates at the positions `which` and an indicator column for every interval. */
export function effectsDesign(problem: RandomIntervalProblem, which: readonly number[]): EffectsDesign {
  const { frame, recapture } = problem;
  const n = frame.intervals;
  const closed = closedYears(frame);
  const part = covariateSurvival(
    frame,
    which.map((k) => problem.covariates[k]),
  );
  const indicators = indicatorsOf(frame);
  const b = part.columns.length;
  const recaptureNames = "known" in recapture ? [] : recapture.names;
  const a = recaptureNames.length;
  return {
    design: {
      strata: frame.strata.length,
      intervals: n,
      lengths: frame.lengths,
      survival: {
        words: part.words,
        names: [...part.names, ...indicators.map((_, t) => `effect of interval ${t + 1}`)],
        columns: [...part.columns, ...indicators],
      },
      recapture,
      ...(closed === undefined ? {} : { closed }),
    },
    survival: b,
    intervals: n,
    recapture: a,
    names: [...part.names, ...recaptureNames],
    spent: fixedSurvivalColumns(frame) - survivalContrasts(frame) + which.length,
    fixed: Int32Array.from({ length: b + a }, (_, k) => (k < b ? k : k + n)),
  };
}

const KNOWN = new WeakMap<Frame, readonly Float64Array[]>();

/** 1 in the rows of an interval, one column each; made once for all models of a study. */
function indicatorsOf(frame: Frame): readonly Float64Array[] {
  const known = KNOWN.get(frame);
  if (known !== undefined) return known;
  const n = frame.intervals;
  const indicators = Array.from({ length: n }, (_, t) => {
    const column = new Float64Array(frame.strata.length * n);
    for (let g = 0; g < frame.strata.length; g++) column[g * n + t] = 1;
    return column;
  });
  KNOWN.set(frame, indicators);
  return indicators;
}
