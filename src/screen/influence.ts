import { mean, sampleSd } from "../math/quantile.ts";
import { inGroup, type NamedColumn, survivalGroups } from "../survival/design.ts";
import type { ScreenOptions } from "./options.ts";
import type { ScreenProblem } from "./problem.ts";
import { type ProcedureSetting, runProcedure } from "./procedure.ts";

/** What the procedure chooses when one interval has nothing to say about covariates. */
export interface InfluenceRow {
  /** Index of the interval. */
  readonly interval: number;
  readonly byYears: readonly string[];
  readonly byAnimals: readonly string[];
  /** Gain of the choice by years without this interval. */
  readonly gain: number;
}

/**
 * Leaves out one interval at a time: it is given a survival of its own (an unpenalised indicator), so that its captures
 * still inform recapture and the other intervals but not the covariates; the columns are standardised anew over the
 * other intervals; then weights, paths and both choices are made again.
 */
export function leaveOneIntervalOut(
  problem: ScreenProblem,
  setting: ProcedureSetting,
  options: ScreenOptions,
): InfluenceRow[] {
  const names = problem.covariates.map((one) => one.name);
  const named = (set: readonly number[]) => set.map((k) => names[k]);
  return Array.from({ length: setting.intervals }, (_, t) => {
    const found = runProcedure(
      withoutInterval(problem, t),
      lessOne(setting, survivalGroups(problem.frame)),
      options,
    );
    return {
      interval: t,
      byYears: named(found.byYears.chosen),
      byAnimals: named(found.byAnimals),
      gain: found.byYears.gain,
    };
  });
}

/** One interval fewer speaks, and its own survivals are spent on it. */
function lessOne(setting: ProcedureSetting, spent: number): ProcedureSetting {
  return {
    ...setting,
    intervals: setting.intervals - 1,
    constantParameters: setting.constantParameters + spent,
  };
}

/** The problem with interval t on its own: an indicator forced in, the covariates 0 there and at sd 1 elsewhere. */
export function withoutInterval(problem: ScreenProblem, t: number): ScreenProblem {
  const { intervals: n, yearsOf } = problem.frame;
  const out = (row: number) => (yearsOf === undefined ? row % n : yearsOf[row % n]) === t;
  const indicator = Float64Array.from({ length: n }, (_, row) => (out(row) ? 1 : 0));
  const name = `interval ${t + 1} alone`;
  const { groups } = problem.frame;
  const alone =
    groups === undefined
      ? [{ name, values: indicator }]
      : Array.from({ length: survivalGroups(problem.frame) }, (_, group) => ({
          name: `${name}, ${problem.frame.strata[groups.indexOf(group)]}`,
          values: inGroup(problem.frame, group, indicator),
        }));
  return {
    ...problem,
    frame: {
      ...problem.frame,
      forced: [...problem.frame.forced, ...alone],
    },
    covariates: problem.covariates.map((one) => standardWithout(one, out)),
  };
}

function standardWithout({ name, values }: NamedColumn, out: (row: number) => boolean): NamedColumn {
  const others = values.filter((_, i) => !out(i));
  const [centre, sd] = [mean(others), sampleSd(others)];
  // a column that is constant without this interval has nothing left to say
  const scale = sd > 1e-12 ? 1 / sd : 0;
  return { name, values: values.map((value, i) => (out(i) ? 0 : (value - centre) * scale)) };
}
