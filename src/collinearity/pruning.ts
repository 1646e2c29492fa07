import { type Matrix, pickColumns, zeros } from "../data/matrix.ts";
import { decompose, EXACT } from "./decomposition.ts";
import { inflationFactors } from "./inflation.ts";
import type { PruneStep } from "./result.ts";

export interface Pruning {
  readonly steps: readonly PruneStep[];
  /** Column indices that are left. */
  readonly kept: readonly number[];
}

export interface PruneRule {
  /** Columns go until no inflation is above this. */
  readonly limit: number;
  /** Names, most important first; see CollinearityOptions. */
  readonly priority?: readonly string[];
  /** Columns the user asked to keep: they go only when nothing else is too inflated. */
  readonly protect: readonly string[];
}

/** Above this inflation a deleted column's downdate loses digits that matter: decompose afresh. */
const DOWNDATE_LIMIT = 1e4;

/**
 * Stepwise pruning: while a column's variance inflation is above the limit, one goes. By default the one with the
 * largest inflation; among infinite ones the one with the largest mean |r| to those left (it adds least), then the
 * last by name. With an order of priority it is the least important of those above the limit.
 *
 * `unit`: n × K centred columns of unit length; `from`: the columns to begin with.
 */
export function prune(
  unit: Matrix,
  names: readonly string[],
  from: readonly number[],
  rule: PruneRule,
): Pruning {
  const steps: PruneStep[] = [];
  const correlations = crossProducts(unit);
  let kept = [...from];
  let state = begin(unit, kept);
  while (kept.length > 1) {
    const factors = state.factors;
    const above = kept.map((_, at) => at).filter((at) => factors[at] > rule.limit);
    if (above.length === 0) break;
    const free = above.filter((at) => !rule.protect.includes(names[kept[at]]));
    const choice = free.length > 0 ? free : above;
    const at = rule.priority === undefined ? largest(choice) : leastImportant(choice, rule.priority);
    const name = names[kept[at]];
    const left = kept.filter((_, k) => k !== at);
    const partner = closest(kept[at], left);
    steps.push({ dropped: name, inflation: factors[at], ...why(at, above.length, partner) });
    const next = without(state, at);
    kept = left;
    state = next ?? begin(unit, kept);
  }
  return { steps, kept };

  function meanR(at: number): number {
    let sum = 0;
    for (const k of kept) if (k !== kept[at]) sum += Math.abs(correlations.data[kept[at] * unit.columns + k]);
    return sum / (kept.length - 1);
  }

  function largest(choice: readonly number[]): number {
    const top = choice.reduce((max, at) => Math.max(max, state.factors[at]), 0);
    const tied = choice.filter((at) => state.factors[at] >= top * (1 - 1e-9));
    if (tied.length === 1) return tied[0];
    const means = new Map(tied.map((at) => [at, meanR(at)]));
    return tied.reduce((best, at) => {
      const gap = (means.get(at) as number) - (means.get(best) as number);
      if (Math.abs(gap) > 1e-10) return gap > 0 ? at : best;
      return names[kept[at]] > names[kept[best]] ? at : best;
    });
  }

  function leastImportant(choice: readonly number[], priority: readonly string[]): number {
    const unlisted = choice.filter((at) => !priority.includes(names[kept[at]]));
    if (unlisted.length > 0) return largest(unlisted);
    const place = (at: number) => priority.indexOf(names[kept[at]]);
    return choice.reduce((last, at) => (place(at) > place(last) ? at : last));
  }

  function closest(k: number, left: readonly number[]): { name: string; r: number } {
    const r = (other: number) => correlations.data[k * unit.columns + other];
    const best = left.reduce((a, b) => (Math.abs(r(b)) > Math.abs(r(a)) ? b : a));
    return { name: names[best], r: r(best) };
  }

  function why(at: number, above: number, partner: { name: string; r: number }) {
    const factor = state.factors[at];
    const size = Number.isFinite(factor)
      ? `variance inflation ${Number(factor.toPrecision(4))}, above ${rule.limit}`
      : "the columns still in reproduce it exactly (infinite variance inflation)";
    const ranked =
      rule.priority === undefined
        ? Number.isFinite(factor)
          ? `the largest of ${above} above the limit`
          : "the one of these closest to the rest"
        : "the least important of those above the limit";
    const by = rule.priority === undefined ? ("inflation" as const) : ("priority" as const);
    return {
      reason: `${size}; ${above === 1 ? "the only one above the limit" : ranked}; closest to ${partner.name} (r = ${partner.r.toFixed(2)})`,
      by,
    };
  }
}

/** Either the null space's projector (while columns depend on each other) or the inverse correlation matrix. */
interface State {
  readonly singular: boolean;
  readonly square: Matrix;
  readonly factors: Float64Array;
}

function begin(unit: Matrix, kept: readonly number[]): State {
  const svd = decompose(pickColumns(unit, kept), EXACT);
  const K = kept.length;
  const singular = svd.rank < K;
  const square = zeros(K, K);
  for (let j = singular ? svd.rank : 0; j < K; j++) {
    const weight = singular ? 1 : 1 / svd.values[j] ** 2;
    for (let a = 0; a < K; a++) {
      const scaled = svd.vectors.data[a * K + j] * weight;
      for (let b = 0; b < K; b++) square.data[a * K + b] += scaled * svd.vectors.data[b * K + j];
    }
  }
  return { singular, square, factors: inflationFactors(svd) };
}

/**
 * The state after column `at` has gone, by a rank-one downdate M − m m'/m_kk of the projector or the inverse; undefined
 * where the inflations need a fresh decomposition: at the end of the singular phase, or for the sake of accuracy.
 */
function without(state: State, at: number): State | undefined {
  const K = state.square.rows;
  const pivot = state.square.data[at * K + at];
  if (state.singular ? pivot < 1e-4 : pivot > DOWNDATE_LIMIT) return undefined;
  const left = Array.from({ length: K }, (_, k) => k).filter((k) => k !== at);
  const square = zeros(K - 1, K - 1);
  left.forEach((a, row) => {
    const share = state.square.data[a * K + at] / pivot;
    left.forEach((b, col) => {
      square.data[row * (K - 1) + col] = state.square.data[a * K + b] - share * state.square.data[at * K + b];
    });
  });
  const diagonal = Float64Array.from(left, (_, k) => square.data[k * (K - 1) + k]);
  if (!state.singular)
    return { singular: false, square, factors: diagonal.map((value) => Math.max(1, value)) };
  // The projector only tells which columns are in a dependency; once one is out of all, its inflation is wanted.
  if (diagonal.some((value) => value < 1e-6)) return undefined;
  return { singular: true, square, factors: diagonal.map(() => Number.POSITIVE_INFINITY) };
}

function crossProducts(unit: Matrix): Matrix {
  const K = unit.columns;
  const out = zeros(K, K);
  for (let i = 0; i < unit.rows; i++)
    for (let a = 0; a < K; a++) {
      const x = unit.data[i * K + a];
      for (let b = 0; b < K; b++) out.data[a * K + b] += x * unit.data[i * K + b];
    }
  return out;
}
