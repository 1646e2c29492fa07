import { Matrix as Dense, EigenvalueDecomposition } from "ml-matrix";
import type { Design } from "./design.ts";

/** A rate within this of 0 or 1 is at its bound. */
const BOUND = 1e-6;
/** A direction of unit length that moves a logit by less than this does not move it. */
export const STILL = 1e-3;
/** Share of the largest entry, or of the largest movement of a rate, from which a coefficient belongs to a direction. */
const MEMBER = 0.1;

/** Survival and recapture by row (strata × intervals); no recapture where it is known. */
export interface Rates {
  readonly survival: Float64Array;
  readonly recapture: Float64Array;
}

export interface FlatDirections {
  /** Coefficients that run away because rates are at 0 or 1, ascending. */
  readonly atBound: readonly number[];
  /** Disjoint sets of coefficients that the data cannot tell apart, each ascending. */
  readonly sets: readonly (readonly number[])[];
  /** Number of independent directions behind the sets: parameters that are not determined. */
  readonly undetermined: number;
}

/**
 * Sorts the flat directions of an information matrix (orthonormal, length d). Eigenvectors of equal eigenvalues come
 * in any mixture, so the space they span is split instead: its part that moves no rate inside (0, 1) but some rate at
 * a bound is a bound; all else (what moves rates inside, or nothing at all, as equal columns do) is not determined.
 */
export function sortFlatDirections(
  flat: readonly Float64Array[],
  design: Design,
  rates: Rates,
): FlatDirections {
  if (flat.length === 0) return { atBound: [], sets: [], undetermined: 0 };
  const rows = predictorRows(design, rates);
  const inside = rows.filter((row) => !row.bound);
  const [movesInside, stillInside] = split(flat, inside);
  const [bound, still] = split(
    stillInside,
    rows.filter((row) => row.bound),
  );
  const undetermined = echelon([...movesInside, ...still]);
  const atBound = new Set(echelon(bound).flatMap((vector) => membersOf(vector, [])));
  return {
    atBound: [...atBound].sort((a, b) => a - b),
    sets: merged(undetermined.map((vector) => membersOf(vector, rows))),
    undetermined: undetermined.length,
  };
}

interface PredictorRow {
  readonly bound: boolean;
  /** rate (1 − rate): how much the rate moves with its logit. */
  readonly slope: number;
  readonly columns: readonly Float64Array[];
  readonly from: number;
  readonly at: number;
}

function predictorRows(design: Design, rates: Rates): PredictorRow[] {
  const part = (columns: readonly Float64Array[], from: number, values: Float64Array) =>
    Array.from(values, (rate, at): PredictorRow => {
      const slope = rate * (1 - rate);
      return { bound: Math.min(rate, 1 - rate) <= BOUND, slope, columns, from, at };
    });
  const { survival, recapture } = design;
  return [
    ...part(survival.columns, 0, rates.survival),
    ...("known" in recapture ? [] : part(recapture.columns, survival.columns.length, rates.recapture)),
  ];
}

/** Movement of a row's logit along a direction. */
function shift(row: PredictorRow, vector: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < row.columns.length; k++) sum += row.columns[k][row.at] * vector[row.from + k];
  return sum;
}

/** An orthonormal basis of the same space in two parts: directions that move some of the rows, and those that do not. */
function split(
  basis: readonly Float64Array[],
  rows: readonly PredictorRow[],
): readonly [Float64Array[], Float64Array[]] {
  const m = basis.length;
  if (m === 0) return [[], []];
  const gram = Dense.zeros(m, m);
  for (const row of rows) {
    const shifts = basis.map((vector) => shift(row, vector));
    for (let i = 0; i < m; i++)
      for (let j = 0; j < m; j++) gram.set(i, j, gram.get(i, j) + shifts[i] * shifts[j]);
  }
  const eigen = new EigenvalueDecomposition(gram, { assumeSymmetric: true });
  const moving: Float64Array[] = [];
  const still: Float64Array[] = [];
  eigen.realEigenvalues.forEach((value, k) => {
    const weights = eigen.eigenvectorMatrix.getColumn(k);
    const vector = new Float64Array(basis[0].length);
    for (let i = 0; i < m; i++)
      for (let at = 0; at < vector.length; at++) vector[at] += weights[i] * basis[i][at];
    (value > STILL ** 2 ? moving : still).push(vector);
  });
  return [moving, still];
}

/** Gauss–Jordan elimination with full pivoting: a basis of the same space in which few entries are not 0. */
function echelon(basis: readonly Float64Array[]): Float64Array[] {
  const vectors = basis.map((vector) => Float64Array.from(vector));
  for (let done = 0; done < vectors.length; done++) {
    let [row, pivot, most] = [done, 0, 0];
    for (let i = done; i < vectors.length; i++)
      for (let k = 0; k < vectors[i].length; k++)
        if (Math.abs(vectors[i][k]) > most) [row, pivot, most] = [i, k, Math.abs(vectors[i][k])];
    [vectors[done], vectors[row]] = [vectors[row], vectors[done]];
    const own = vectors[done];
    const lead = own[pivot];
    for (let k = 0; k < own.length; k++) own[k] /= lead;
    vectors.forEach((other, i) => {
      if (i === done) return;
      const factor = other[pivot];
      for (let k = 0; k < other.length; k++) other[k] -= factor * own[k];
    });
  }
  return vectors;
}

/**
 * Coefficients of a direction: a large entry, or a large movement of a rate. (Along φ · p = constant with p near 1 the
 * logit of p runs far while that of φ hardly moves; in the rates both move alike. At a bound no rate moves, and the
 * entries alone tell.)
 */
function membersOf(vector: Float64Array, rows: readonly PredictorRow[]): number[] {
  const moves = new Float64Array(vector.length);
  for (const { columns, from, at, slope } of rows)
    for (let k = 0; k < columns.length; k++)
      moves[from + k] = Math.max(moves[from + k], Math.abs(columns[k][at] * vector[from + k]) * slope);
  const largestEntry = vector.reduce((most, entry) => Math.max(most, Math.abs(entry)), 0);
  const largestMove = moves.reduce((most, move) => Math.max(most, move), 0);
  return Array.from(vector, (_, k) => k).filter(
    (k) =>
      Math.abs(vector[k]) > MEMBER * largestEntry || (largestMove > 0 && moves[k] > MEMBER * largestMove),
  );
}

/** Joins sets that share a member. */
function merged(sets: readonly (readonly number[])[]): number[][] {
  let out: number[][] = [];
  for (const set of sets) {
    const touching = out.filter((other) => other.some((k) => set.includes(k)));
    const union = [...new Set([...set, ...touching.flat()])].sort((a, b) => a - b);
    out = [...out.filter((other) => !touching.includes(other)), union];
  }
  return out.sort((a, b) => a[0] - b[0]);
}
