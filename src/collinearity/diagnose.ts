import type { RawFinding } from "../data/finding.ts";
import { type Matrix, zeros } from "../data/matrix.ts";
import { InputError } from "../errors.ts";
import { clusterTree, cutTree } from "./clusters.ts";
import { conditionTable, correlationCondition } from "./condition.ts";
import { correlationTable, differences, partialTable } from "./correlation.ts";
import { applyDecisions } from "./decisions.ts";
import { decompose, EXACT, unitColumns } from "./decomposition.ts";
import { exactDependencies } from "./dependencies.ts";
import { collinearityFindings } from "./findings.ts";
import { inflationFactors } from "./inflation.ts";
import type { CollinearityOptions } from "./options.ts";
import { prune } from "./pruning.ts";
import type { Diagnosis, PruneStep } from "./result.ts";

/** What a diagnosis can know beside the matrix. */
export interface DiagnoseContext {
  /** The year (or mid-date) of each row, for partial correlations; the row's number if not given. */
  readonly time?: ArrayLike<number>;
  /**
   * The same columns before they were centred and scaled, n × K: Belsley's indices measure the intercept only on
   * these, and exact relations are told in their units. The matrix itself if not given.
   */
  readonly uncentred?: Matrix;
}

/**
 * Which covariates tell the same story: `matrix` is n intervals × K covariates (missing cells NaN), all of them, the
 * ones the user decided to drop included. Correlation, inflation, clusters and pruning do not change with the scale or
 * the order of the columns. Correlations use the rows that each pair has; all else the rows without a missing cell.
 *
 * Throws `collinearity.too-few-rows` (fewer than 3 complete rows), `collinearity.constant-column`,
 * `collinearity.unknown-covariate` and `collinearity.decision-contradicts`.
 */
export function diagnose(
  matrix: Matrix,
  names: readonly string[],
  options: CollinearityOptions,
  context: DiagnoseContext = {},
): { diagnosis: Diagnosis; findings: readonly RawFinding[] } {
  const start = applyDecisions(names, options);
  const rows = completeRows(matrix);
  if (rows.length < 3 && names.length > 0) throw tooFewRows(rows.length, matrix.rows);
  const whole = pickRows(matrix, rows);
  const uncentred = context.uncentred === undefined ? whole : pickRows(context.uncentred, rows);
  const { unit, length } = unitColumns(whole);
  const constant = length.indexOf(0);
  if (constant >= 0) throw constantColumn(names[constant], rows.length);

  const svd = decompose(unit, EXACT);
  const factors = inflationFactors(svd);
  const infinite = names.map((_, k) => k).filter((k) => factors[k] === Number.POSITIVE_INFINITY);
  const pearson = correlationTable(matrix, names, "Pearson");
  const time = context.time ?? Float64Array.from({ length: matrix.rows }, (_, i) => i);
  const tree = clusterTree(pearson.r, names);
  const limits = { limit: options.warn.inflation, protect: keeps(options) };
  const rule = options.priority === undefined ? limits : { ...limits, priority: options.priority };
  const pruned = prune(unit, names, start, rule);
  const diagnosis: Diagnosis = {
    pearson,
    spearman: correlationTable(matrix, names, "Spearman"),
    partial: partialTable(matrix, names, time, "Pearson"),
    partialSpearman: partialTable(matrix, names, time, "Spearman"),
    changes: { ...correlationTable(differences(matrix), names, "Pearson"), of: "changes" },
    completeRows: rows.length,
    inflation: names.map((name, k) => ({ name, inflation: factors[k], tolerance: 1 / factors[k] })),
    condition: conditionTable(uncentred, names),
    correlationCondition: names.length === 0 ? 1 : correlationCondition(svd),
    dependencies: exactDependencies(unit, names, infinite, uncentred),
    allDepend: names.length > 0 && infinite.length === names.length,
    merges: tree.merges,
    order: tree.order,
    clusters: cutTree(tree, pearson.r, names, options.cluster),
    pruning: [...decided(names, factors, options), ...pruned.steps],
    kept: pruned.kept.map((k) => names[k]),
  };
  return { diagnosis, findings: collinearityFindings(diagnosis, matrix, names, options) };
}

function keeps({ decisions }: CollinearityOptions): string[] {
  return decisions.flatMap(({ keep }) => (keep === undefined ? [] : [keep]));
}

function decided(names: readonly string[], factors: Float64Array, options: CollinearityOptions): PruneStep[] {
  return options.decisions.map(({ drop, keep, note }) => ({
    dropped: drop,
    inflation: factors[names.indexOf(drop)],
    reason: `dropped by decision${keep === undefined ? "" : `, ${keep} kept in its place`}: ${note}`,
    by: "decision",
  }));
}

function completeRows(matrix: Matrix): number[] {
  const { rows, columns, data } = matrix;
  return Array.from({ length: rows }, (_, i) => i).filter((i) =>
    data.subarray(i * columns, (i + 1) * columns).every(Number.isFinite),
  );
}

function pickRows(matrix: Matrix, rows: readonly number[]): Matrix {
  if (rows.length === matrix.rows) return matrix;
  const { columns } = matrix;
  const out = zeros(rows.length, columns);
  rows.forEach((from, to) => {
    out.data.set(matrix.data.subarray(from * columns, (from + 1) * columns), to * columns);
  });
  return out;
}

function tooFewRows(complete: number, rows: number): InputError {
  return new InputError({
    name: "collinearity.too-few-rows",
    expected: "at least 3 intervals in which every covariate has a value",
    found: `${complete} of ${rows}`,
    where: { cell: "collinearity" },
    remedy: "leave out the covariates with missing cells, or lengthen the study",
  });
}

function constantColumn(name: string, rows: number): InputError {
  return new InputError({
    name: "collinearity.constant-column",
    expected: "covariates that vary between intervals",
    found: `one value in all ${rows} complete intervals`,
    where: { cell: name },
    remedy: "drop the covariate, or define it so that it varies",
  });
}
