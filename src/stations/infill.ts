import type { Day } from "../data/day.ts";
import type { RawFinding } from "../data/finding.ts";
import { periodText } from "../data/period.ts";
import type { Series } from "../data/series.ts";
import { countText } from "./block.ts";
import { matchPeriods, type Neighbour, rankNeighbours } from "./neighbours.ts";

export interface InfillOptions {
  /**
   * `regression`: ŷ = a + b·x on the best-correlated neighbour that has a value; `normal ratio`: the mean over up to three
   * neighbours of x·(mean of target / mean of neighbour), for totals (Paulhus & Kohler 1952).
   */
  readonly method: "regression" | "normal ratio";
  /** Gaps of more days than this stay open. */
  readonly longestGap: number;
  /** Fewest periods that both stations must have observed; 30 by default. */
  readonly overlap?: number;
  /** Weakest correlation of a neighbour; 0.7 by default. */
  readonly correlation?: number;
}

/** One filled period and the stations its value was made from. */
export interface FilledPeriod {
  readonly start: Day;
  readonly end: Day;
  readonly value: number;
  readonly from: readonly string[];
}

/** Leave-one-out error over the periods that were observed and could have been filled. */
export interface InfillError {
  readonly n: number;
  readonly rootMeanSquare: number;
  readonly meanAbsolute: number;
  /** Mean of estimated − observed. */
  readonly bias: number;
  /** Standard deviation (n − 1) of the observed values: what filling by their mean would err by. */
  readonly observedSd: number;
}

export interface Infilled {
  /** The station's series with the filled periods in it. */
  readonly series: Series;
  readonly filled: readonly FilledPeriod[];
  /** Gaps that stay open, being too long or without a neighbour's value. */
  readonly left: number;
  readonly error: InfillError;
}

const NEIGHBOURS = 3;

/**
 * Fills the short gaps of every station of one variable from the observed (never from filled) values of its neighbours.
 * A period can be filled if a neighbour observed the very same period. Totals are not filled below 0. Returned in the order
 * given; `infillFindings` says what was done.
 */
export function infill(all: readonly Series[], options: InfillOptions): readonly Infilled[] {
  return all.map((target) => {
    const others = all.filter(({ site }) => site !== target.site);
    const neighbours = rankNeighbours(target, others, options.overlap ?? 30, options.correlation ?? 0.7);
    return infillOne(target, neighbours, options);
  });
}

function infillOne(target: Series, neighbours: readonly Neighbour[], options: InfillOptions): Infilled {
  const filled: FilledPeriod[] = [];
  let left = 0;
  for (const gap of openGaps(target)) {
    const periods = gap.end - gap.start > options.longestGap ? [] : periodsIn(gap, neighbours);
    const made = periods.flatMap((period) => fill(period, target, neighbours, options));
    filled.push(...made);
    const days = made.reduce((sum, { start, end }) => sum + end - start, 0);
    if (days < gap.end - gap.start) left++;
  }
  return {
    series: withFilled(target, filled),
    filled,
    left,
    error: leaveOneOut(target, neighbours, options),
  };
}

/** Runs without a value between the first and last value. */
function openGaps({ starts, ends, values }: Series): { readonly start: Day; readonly end: Day }[] {
  const gaps: { start: Day; end: Day }[] = [];
  let last = -1;
  for (let i = 0; i < starts.length; i++) {
    if (Number.isNaN(values[i])) continue;
    if (last >= 0 && starts[i] > ends[last]) gaps.push({ start: ends[last], end: starts[i] });
    last = i;
  }
  return gaps;
}

/** The neighbours' periods within a gap, without repeats, in order. */
function periodsIn(gap: { readonly start: Day; readonly end: Day }, neighbours: readonly Neighbour[]) {
  const periods = new Map<Day, Day>();
  for (const { series } of neighbours)
    for (
      let i = firstFrom(series.starts, gap.start);
      i < series.starts.length && series.ends[i] <= gap.end;
      i++
    )
      if (!periods.has(series.starts[i])) periods.set(series.starts[i], series.ends[i]);
  return [...periods].sort((a, b) => a[0] - b[0]).map(([start, end]) => ({ start, end }));
}

function firstFrom(starts: Int32Array, day: Day): number {
  let [low, high] = [0, starts.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (starts[middle] < day) low = middle + 1;
    else high = middle;
  }
  return low;
}

function fill(
  period: { readonly start: Day; readonly end: Day },
  target: Series,
  neighbours: readonly Neighbour[],
  { method }: InfillOptions,
): FilledPeriod[] {
  const one = { starts: Int32Array.of(period.start), ends: Int32Array.of(period.end) };
  const having = neighbours
    .map((neighbour) => ({ neighbour, at: matchPeriods(one.starts, one.ends, neighbour.series)[0] }))
    .filter(({ at }) => at >= 0)
    .slice(0, method === "regression" ? 1 : NEIGHBOURS);
  if (having.length === 0) return [];
  const values = having.map(({ neighbour, at }) => neighbour.series.values[at]);
  const estimate =
    method === "regression"
      ? having[0].neighbour.intercept + having[0].neighbour.slope * values[0]
      : normalRatio(
          having.map(({ neighbour }) => neighbour.meanTarget),
          having.map(({ neighbour }) => neighbour.meanNeighbour),
          values,
        );
  if (!Number.isFinite(estimate)) return [];
  return [
    {
      ...period,
      value: bounded(estimate, target),
      from: having.map(({ neighbour }) => neighbour.series.site),
    },
  ];
}

/** (1/m) Σ (N_target,i / N_i) x_i, with normals N over the periods common to the target and neighbour i (Paulhus & Kohler 1952). */
export function normalRatio(
  targetNormals: readonly number[],
  normals: readonly number[],
  values: readonly number[],
): number {
  return values.reduce((sum, x, i) => sum + (targetNormals[i] / normals[i]) * x, 0) / values.length;
}

function bounded(value: number, { kind }: Series): number {
  return kind === "total" ? Math.max(0, value) : value;
}

function withFilled(target: Series, filled: readonly FilledPeriod[]): Series {
  if (filled.length === 0) return target;
  const rows = Array.from(target.starts, (start, i) => ({
    start,
    end: target.ends[i],
    value: target.values[i],
  }));
  const known = new Map(rows.map((row, i) => [row.start, i]));
  for (const { start, end, value } of filled) {
    const at = known.get(start);
    if (at === undefined) rows.push({ start, end, value });
    else rows[at] = { start, end, value };
  }
  rows.sort((a, b) => a.start - b.start);
  return {
    ...target,
    starts: Int32Array.from(rows, (row) => row.start),
    ends: Int32Array.from(rows, (row) => row.end),
    values: Float64Array.from(rows, (row) => row.value),
  };
}

/**
 * Every observed value estimated from its neighbours with that value left out of the fit. The order of the neighbours is
 * not made anew for each value. Regression: the deleted residual e_i/(1 − h_i), h_i = 1/n + (x_i − x̄)²/Σ(x − x̄)² (Allen 1974);
 * normal ratio: the means without the value.
 */
function leaveOneOut(
  target: Series,
  neighbours: readonly Neighbour[],
  { method }: InfillOptions,
): InfillError {
  const observed: number[] = [];
  const errors: number[] = [];
  for (let i = 0; i < target.values.length; i++) {
    const y = target.values[i];
    if (Number.isNaN(y)) continue;
    const having = neighbours
      .filter(({ match }) => match[i] >= 0)
      .slice(0, method === "regression" ? 1 : NEIGHBOURS);
    if (having.length === 0) continue;
    const xs = having.map(({ series, match }) => series.values[match[i]]);
    const estimate = method === "regression" ? deleted(having[0], xs[0], y) : ratioWithout(having, xs, y);
    if (!Number.isFinite(estimate)) continue;
    observed.push(y);
    errors.push(bounded(estimate, target) - y);
  }
  const n = errors.length;
  const mean = (of: readonly number[]) => of.reduce((sum, one) => sum + one, 0) / n;
  const centre = mean(observed);
  return {
    n,
    rootMeanSquare: Math.sqrt(mean(errors.map((e) => e * e))),
    meanAbsolute: mean(errors.map(Math.abs)),
    bias: mean(errors),
    observedSd: Math.sqrt(observed.reduce((sum, y) => sum + (y - centre) ** 2, 0) / (n - 1)),
  };
}

function deleted({ n, slope, intercept, meanNeighbour, spread }: Neighbour, x: number, y: number): number {
  const leverage = 1 / n + (x - meanNeighbour) ** 2 / spread;
  return y - (y - intercept - slope * x) / (1 - leverage);
}

function ratioWithout(having: readonly Neighbour[], xs: readonly number[], y: number): number {
  const without = (mean: number, value: number, n: number) => (mean * n - value) / (n - 1);
  return normalRatio(
    having.map(({ meanTarget, n }) => without(meanTarget, y, n)),
    having.map(({ meanNeighbour, n }, k) => without(meanNeighbour, xs[k], n)),
    xs,
  );
}

/** One finding per station that was filled: how much, where, from whom, and how far off such values are. */
export function infillFindings(results: readonly Infilled[], options: InfillOptions): readonly RawFinding[] {
  return results.flatMap(({ series, filled, left, error }) => {
    if (filled.length === 0) return [];
    const subject = `${series.variable} at ${series.site}`;
    const from = [...new Set(filled.flatMap((one) => one.from))].join(", ");
    const rms = error.rootMeanSquare.toPrecision(3);
    return [
      {
        kind: "infilled" as const,
        subject,
        message:
          `${subject}: ${countText(filled.length, "period")} filled by ${options.method} from ${from}; leave-one-out error ` +
          `${rms} ${series.unit} (root mean square over ${error.n} observed periods, their sd ${error.observedSd.toPrecision(3)}); ` +
          `${countText(left, "gap")} left open.`,
        value: runsText(filled),
        count: filled.length,
        remedy: "compare the error with the sd; leave the infilling out if they are near each other",
      },
    ];
  });
}

function runsText(filled: readonly FilledPeriod[]): string {
  const runs: { start: Day; end: Day }[] = [];
  for (const { start, end } of filled) {
    const last = runs.at(-1);
    if (last !== undefined && last.end === start) last.end = end;
    else runs.push({ start, end });
  }
  const shown = runs.slice(0, 12).map(periodText);
  return [...shown, ...(runs.length > 12 ? [`and ${runs.length - 12} more`] : [])].join("; ");
}
