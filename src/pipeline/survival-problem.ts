import type { CovariateMatrix, StratumColumn } from "../covariates/result.ts";
import { yearIndex } from "../covariates/time.ts";
import { column } from "../data/matrix.ts";
import { InputError } from "../errors.ts";
import { mean, sampleSd } from "../math/quantile.ts";
import type { ScreenProblem } from "../screen/problem.ts";
import { largestSet } from "../screen/years.ts";
import type { Spec } from "../spec/spec.ts";
import { firstReleases } from "../study/histories.ts";
import type { Frame, NamedColumn } from "../survival/design.ts";
import { markingFrame, onLaterIntervals, overMarking } from "../survival/marking-frame.ts";
import { compareRecapture, type RecaptureComparison, recapturePart } from "../survival/recapture-choice.ts";
import { sinceMarking } from "../survival/since-marking.ts";
import { splitStatistics } from "../survival/split-statistics.ts";
import { type SufficientStatistics, sufficientStatistics } from "../survival/statistics.ts";
import type { Ingested } from "./ingest.ts";
import { survivalStrata } from "./strata.ts";

export interface Posed {
  readonly problem: ScreenProblem;
  readonly recapture: RecaptureComparison;
}

/** The columns that may be chosen: those the user did not drop and does not force in. */
export function candidateColumns(spec: Spec, matrix: CovariateMatrix): readonly number[] {
  const dropped = new Set([
    ...spec.collinearity.decisions.map((one) => one.drop),
    // what a covariate by stratum is made of has no part of its own
    ...(matrix.byStratum ?? []).flatMap((one) => one.parts),
  ]);
  return matrix.names.flatMap((name, k) =>
    dropped.has(name) || spec.survival.forced.includes(name) ? [] : [k],
  );
}

/** Counts, strata, forced covariates, the recapture part compared first, and the candidates: the screen as posed. */
export function poseScreen(spec: Spec, found: Ingested, matrix: CovariateMatrix): Posed | undefined {
  if (found.captures === undefined) return undefined;
  const marking = spec.survival.sinceMarking === "first interval apart";
  const strata = found.captures.counts.map((one) => one.stratum);
  const bare: Frame = {
    strata,
    intervals: found.intervals.length,
    ...survivalStrata(spec, strata, found.intervals.length),
    lengths: Float64Array.from(found.intervals, (one) => one.length),
    forced: [],
    effort: standardEffort(found),
    ...(found.yearsOf === undefined ? {} : { yearsOf: found.yearsOf }),
  };
  const whole = marking ? markingFrame(bare) : bare;
  const data = statisticsOf(found, marking).map((one, g) => ({ ...one, stratum: whole.strata[g] }));
  const rows = ({ name, values }: NamedColumn): NamedColumn => ({
    name,
    values: marking ? overMarking(bare, values) : values,
  });
  const byStratum = matrix.byStratum ?? [];
  // beside a covariate by stratum every covariate has a value per row
  const shape = (one: Float64Array) =>
    byStratum.length === 0 ? one : Float64Array.from(strata.flatMap(() => Array.from(one)));
  const named = (k: number) => rows({ name: matrix.names[k], values: shape(column(matrix.standard, k)) });
  const own = ({ recipe, values }: StratumColumn) => rows({ name: recipe.name, values });
  const needed = (where: string) => (name: string) => {
    const apart = byStratum.find((one) => one.recipe.name === name);
    if (apart !== undefined) return own(apart);
    const k = matrix.names.indexOf(name);
    if (k < 0) throw leftOut(name, where);
    return named(k);
  };
  const acting = (one: NamedColumn) =>
    spec.survival.covariatesActOn === "later intervals" ? onLaterIntervals(whole, one) : one;
  const candidates = [
    ...candidateColumns(spec, matrix).map(named),
    ...byStratum.filter((one) => !spec.survival.forced.includes(one.recipe.name)).map(own),
  ];
  const frame: Frame = {
    ...whole,
    forced: [
      ...(spec.survival.yearTrend === true ? [yearTrend(found)] : []),
      ...spec.survival.forced.map(needed("survival > forced")),
    ],
    recaptureCovariates:
      spec.recaptureCovariates?.map(needed("recapture > covariates")) ??
      // more of them would be next to one recapture per occasion, which is compared anyway
      (candidates.length <= largestSet(found.intervals.length) ? candidates : []),
  };
  const recapture = compareRecapture(data, frame, spec.recapture);
  return {
    problem: {
      data,
      frame,
      recapture: recapturePart(frame, recapture.chosen),
      covariates: candidates.map(acting),
    },
    recapture,
  };
}

/** Sufficient statistics by stratum; with time since marking, later intervals and first ones in turn. */
function statisticsOf({ captures, yearsOf }: Ingested, marking: boolean): readonly SufficientStatistics[] {
  const { counts, histories, occasions } = captures ?? { counts: [], histories: [], occasions: [] };
  const first = marking && histories !== undefined ? firstReleases(histories, occasions.length) : undefined;
  const whole =
    first === undefined
      ? counts.map(sufficientStatistics)
      : counts.flatMap((one, g) => {
          const parts = sinceMarking(one, first[g], 2 * g);
          return [parts.later, parts.first];
        });
  return yearsOf === undefined ? whole : whole.map((one) => splitStatistics(one, yearsOf));
}

/** Mid-years of the intervals at mean 0 and sd 1: a trend that no covariate is to pass for. */
function yearTrend(found: Ingested): NamedColumn {
  const years = yearIndex(found.intervals);
  const [centre, sd] = [mean(years), sampleSd(years)];
  return { name: "year trend", values: years.map((year) => (year - centre) / sd) };
}

/** Effort of the recapture occasions, standardised; undefined where it is missing or always the same. */
function standardEffort(found: Ingested): Float64Array | undefined {
  const effort = Float64Array.from(found.occasions.slice(1), (one) => one.effort);
  if (effort.length < 2 || effort.some(Number.isNaN)) return undefined;
  const sd = sampleSd(effort);
  const centre = mean(effort);
  if (!(sd > 1e-12 * Math.abs(centre))) return undefined;
  const standard = effort.map((value) => (value - centre) / sd);
  return found.yearsOf === undefined ? standard : Float64Array.from(found.yearsOf, (t) => standard[t]);
}

function leftOut(name: string, where: string): InputError {
  return new InputError({
    name: "survival.forced-left-out",
    expected: "every covariate that is always in the model in the matrix",
    found: `${name}, which was left out for missing values`,
    where: { cell: where },
    remedy: "choose another window or rule of completeness, or prepare: { incomplete: mean }",
  });
}
