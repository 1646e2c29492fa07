import { unitColumns } from "../collinearity/decomposition.ts";
import type { CollinearityOptions } from "../collinearity/options.ts";
import { prune } from "../collinearity/pruning.ts";
import { scoreRows } from "../components/components.ts";
import type { KeepRule } from "../components/options.ts";
import { plainComponents } from "../components/reduce.ts";
import { column, fromColumns } from "../data/matrix.ts";
import { mean, sampleSd } from "../math/quantile.ts";
import { randomStream } from "../math/random.ts";
import { withoutInterval } from "../screen/influence.ts";
import type { ScreenOptions } from "../screen/options.ts";
import { solveNull } from "../screen/path.ts";
import { designWith, type ScreenProblem } from "../screen/problem.ts";
import { type ProcedureSetting, runProcedure } from "../screen/procedure.ts";
import { refitsOf } from "../screen/refits.ts";
import { ridgePath } from "../screen/ridge-path.ts";
import { fixedSurvivalColumns, type NamedColumn } from "../survival/design.ts";
import { fitModel } from "../survival/fit.ts";
import { cjsLikelihood } from "../survival/likelihood.ts";
import type { TwoStep } from "../survival/two-step.ts";
import type { CandidateKey } from "./candidates.ts";
import { quickSubset } from "./quick-subset.ts";
import { ridgeChoice } from "./ridge.ts";

/** What is fixed before any fold: how columns are pruned and how components are made. */
export interface FoldRules {
  readonly collinearity: CollinearityOptions;
  /** Undefined where the study has no components. `groups`: one per candidate, or undefined. */
  readonly components:
    | { readonly keep: KeepRule; readonly groups: readonly string[] | undefined }
    | undefined;
  readonly seed: number;
}

/** Some folds of the prediction, small enough to send to a worker. */
export interface FoldChunk {
  readonly problem: ScreenProblem;
  readonly setting: ProcedureSetting;
  readonly options: ScreenOptions;
  readonly rules: FoldRules;
  readonly two: TwoStep;
  readonly intervals: readonly number[];
}

/** What one way of modelling survival says of an interval that it has not seen. */
export interface FoldPrediction {
  readonly key: CandidateKey;
  /** Logit of annual survival by interval in the first stratum, n; the one left out as predicted. */
  readonly logits: Float64Array;
  /** Survival coefficients that say something about intervals, effective ones for ridge; the common one counted in. */
  readonly spent: number;
  /** Names of the terms, for selections. */
  readonly terms: readonly string[];
}

export interface Fold {
  readonly interval: number;
  readonly predictions: readonly FoldPrediction[];
}

/**
 * Leaves out one interval at a time and does everything again without it: standardising, pruning, components, weights,
 * paths, criteria, choices, refits (methods §10). The interval keeps a survival of its own, so that its captures still
 * inform recapture and the survival of the others, but not the covariates.
 */
export function predictLeftOut({ intervals, ...study }: FoldChunk): Fold[] {
  return intervals.map((t) => ({ interval: t, predictions: foldPredictions(study, t) }));
}

type Study = Omit<FoldChunk, "intervals">;

/** A set of columns to be modelled in a fold, with its row for the interval left out. */
interface Columns {
  readonly problem: ScreenProblem;
  readonly row: Float64Array;
}

function foldPredictions({ problem, setting, options, rules, two }: Study, t: number): FoldPrediction[] {
  const held = withoutInterval(problem, t);
  const own: Columns = { problem: held, row: rowOf(problem.covariates, t) };
  const less: ProcedureSetting = {
    ...setting,
    intervals: setting.intervals - 1,
    constantParameters: setting.constantParameters + 1,
  };
  const room = less.interval.parameters - less.constantParameters - 2;
  const K = held.covariates.length;
  const all = held.covariates.map((_, k) => k);
  const out: FoldPrediction[] = [];
  const add = (key: CandidateKey, columns: Columns, set: readonly number[]) =>
    out.push(setPrediction(key, columns, set, t));
  add("constant", own, []);
  if (K <= room) add("all covariates", own, all);
  const kept = prunedWithout(problem, t, rules.collinearity);
  if (kept.length <= room && kept.length < K) add("pruned covariates", own, kept);
  const found = runProcedure(held, less, options);
  add("chosen by animals", own, found.byAnimals);
  add("chosen by years", own, found.byYears.chosen);
  const nothing = solveNull(held, cjsLikelihood(held.data, designWith(held)));
  const subset = quickSubset(held, two, refitsOf(held, nothing.x), less, options);
  if (subset !== undefined) add("best small subset", own, subset);
  if (K >= 2 && room >= 2) out.push(ridgePrediction(own, less, options, t));
  if (rules.components === undefined) return out;

  const { scores, components } = componentsWithout(own, rules.components, rules.seed, t);
  const number = Math.min(components, room);
  if (scores.row.length > 0) add("first component", scores, [0]);
  if (components > 0 && components <= room)
    add(
      "components kept",
      scores,
      Array.from({ length: number }, (_, j) => j),
    );
  if (scores.row.length > 0) {
    const screened = runProcedure(scores.problem, { ...less, covariates: scores.row.length }, options);
    add("components screened", scores, screened.byAnimals);
  }
  return out;
}

/** The covariates of interval t, standardised by the mean and sd of all others. */
function rowOf(covariates: readonly NamedColumn[], t: number): Float64Array {
  return Float64Array.from(covariates, ({ values }) => {
    const others = values.filter((_, i) => i !== t);
    const sd = sampleSd(others);
    return sd > 1e-12 ? (values[t] - mean(others)) / sd : 0;
  });
}

/** Positions of the candidates that pruning leaves on the other intervals; forced covariates stand beside them. */
function prunedWithout(problem: ScreenProblem, t: number, rules: CollinearityOptions): readonly number[] {
  const columns = [...problem.covariates, ...problem.frame.forced];
  const rows = problem.frame.intervals - 1;
  const matrix = fromColumns(
    columns.map((one) => one.values.filter((_, i) => i !== t)),
    rows,
  );
  const { unit, length } = unitColumns(matrix);
  const protect = rules.decisions.flatMap(({ keep }) => (keep === undefined ? [] : [keep]));
  const names = columns.map((one) => one.name);
  const from = names.map((_, k) => k).filter((k) => length[k] > 0);
  const { kept } = prune(unit, names, from, {
    limit: rules.warn.inflation,
    protect,
    ...(rules.priority === undefined ? {} : { priority: rules.priority }),
  });
  return kept.filter((k) => k < problem.covariates.length);
}

/** Components of the other intervals at sd 1, 0 in the one left out, with its own scores as the row. */
function componentsWithout(
  own: Columns,
  { keep, groups }: NonNullable<FoldRules["components"]>,
  seed: number,
  t: number,
): { readonly scores: Columns; readonly components: number } {
  const { covariates, frame } = own.problem;
  const standard = fromColumns(
    covariates.map((one) => one.values.filter((_, i) => i !== t)),
    frame.intervals - 1,
  );
  const made = plainComponents(
    standard,
    covariates.map((one) => one.name),
    groups,
    { keep },
    randomStream(seed, "components without an interval", t),
  );
  const row = scoreRows(made, { rows: 1, columns: own.row.length, data: own.row }).data;
  const sds = made.labels.map((_, j) => sampleSd(column(made.scores, j)));
  const values = made.labels.map((name, j) => {
    const scores = column(made.scores, j);
    const out = new Float64Array(frame.intervals);
    for (let i = 0; i < frame.intervals; i++) if (i !== t) out[i] = scores[i < t ? i : i - 1] / sds[j];
    return { name, values: out };
  });
  return {
    scores: { problem: { ...own.problem, covariates: values }, row: row.map((value, j) => value / sds[j]) },
    components: made.kept,
  };
}

function setPrediction(
  key: CandidateKey,
  columns: Columns,
  set: readonly number[],
  t: number,
): FoldPrediction {
  const { problem, row } = columns;
  const { estimates } = fitModel(problem.data, designWith(problem, set));
  const fixed = fixedSurvivalColumns(problem.frame);
  const beta = new Float64Array(row.length);
  set.forEach((k, i) => {
    beta[k] = estimates[fixed + i];
  });
  return {
    key,
    logits: logitsOf(columns, estimates, beta, t),
    spent: spentBeforeCovariates(problem) + set.length,
    terms: set.map((k) => problem.covariates[k].name),
  };
}

function ridgePrediction(
  columns: Columns,
  setting: ProcedureSetting,
  options: ScreenOptions,
  t: number,
): FoldPrediction {
  const { problem } = columns;
  const step = ridgeChoice(ridgePath(problem, setting.sampleSize), options, setting.sampleSize);
  return {
    key: "ridge",
    logits: logitsOf(columns, step.estimates, step.coefficients, t),
    spent: spentBeforeCovariates(problem) + step.effective - setting.constantParameters,
    terms: [],
  };
}

/** The common survival and the user's forced covariates; contrasts of strata and the indicator say nothing of the others. */
function spentBeforeCovariates({ frame }: ScreenProblem): number {
  return frame.forced.length;
}

/** β0 + forced covariates + covariates, interval by interval; the indicator of interval t, forced in last, left aside. */
function logitsOf(
  { problem, row }: Columns,
  estimates: ArrayLike<number>,
  beta: Float64Array,
  t: number,
): Float64Array {
  const { frame, covariates } = problem;
  const forced = frame.forced.slice(0, -1);
  const first = fixedSurvivalColumns(frame) - frame.forced.length;
  return Float64Array.from({ length: frame.intervals }, (_, u) => {
    let eta = estimates[0];
    forced.forEach((one, f) => {
      eta += estimates[first + f] * one.values[u];
    });
    for (let k = 0; k < beta.length; k++) eta += beta[k] * (u === t ? row[k] : covariates[k].values[u]);
    return eta;
  });
}
