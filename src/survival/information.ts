import { Matrix as Dense, EigenvalueDecomposition } from "ml-matrix";
import type { Matrix } from "../data/matrix.ts";
import type { Design } from "./design.ts";

/** A rate within this of 0 or 1 is at its bound. */
const BOUND = 1e-6;
/**
 * Eigenvalues of the information below this share of the largest, or of the quarter per release that one yes-or-no
 * answer at one half is worth, carry no information. (The second measure is needed where all of them are tiny.)
 */
const FLAT = 1e-8;

export interface InformationReport {
  /** (Pseudo-)inverse of the observed information; NaN in rows and columns of coefficients it says nothing about. */
  readonly covariance: Matrix;
  /**
   * Parameters that the data determine: the rank of the information, plus one for every direction that is flat only
   * because a rate sits at its bound (there the parameter is estimated, it has only no curvature).
   */
  readonly rank: number;
  /** Ratio of the largest to the smallest eigenvalue. */
  readonly condition: number;
  /** Coefficients that run away because rates are at 0 or 1. */
  readonly atBound: readonly string[];
  /** Sets of coefficients that the data cannot tell apart. */
  readonly notSeparable: readonly (readonly string[])[];
}

/**
 * Reads rank, flat directions and covariance from the eigenvalues of the observed information (d × d, row-major).
 * A flat direction that moves only rates at their bound is a bound; any other one names what cannot be separated.
 */
export function readInformation(
  information: Float64Array,
  design: Design,
  names: readonly string[],
  rates: { readonly survival: Float64Array; readonly recapture: Float64Array },
  releases: number,
): InformationReport {
  const d = names.length;
  const eigen = new EigenvalueDecomposition(Dense.from1DArray(d, d, information), { assumeSymmetric: true });
  const values = eigen.realEigenvalues;
  const largest = Math.max(...values.map(Math.abs));
  const smallest = Math.min(...values);
  const flat = values.flatMap((value, k) => (value <= FLAT * Math.max(largest, releases / 4) ? [k] : []));
  const data = new Float64Array(d * d);
  const lost = new Set<number>();
  const bound = new Set<number>();
  const sets: string[][] = [];
  for (const k of flat) {
    const vector = eigen.eigenvectorMatrix.getColumn(k);
    const members = vector.flatMap((entry, i) => (Math.abs(entry) > 0.1 ? [i] : []));
    for (const i of members) lost.add(i);
    if (onlyMovesBounds(vector, design, rates)) for (const i of members) bound.add(i);
    else sets.push(members.map((i) => names[i]));
  }
  for (let k = 0; k < d; k++) {
    if (flat.includes(k)) continue;
    const vector = eigen.eigenvectorMatrix.getColumn(k);
    for (let i = 0; i < d; i++)
      for (let j = 0; j < d; j++) data[i * d + j] += (vector[i] * vector[j]) / values[k];
  }
  for (const i of lost)
    for (let j = 0; j < d; j++) {
      data[i * d + j] = Number.NaN;
      data[j * d + i] = Number.NaN;
    }
  return {
    covariance: { rows: d, columns: d, data },
    rank: d - sets.length,
    condition: smallest <= 0 ? Number.POSITIVE_INFINITY : largest / smallest,
    atBound: [...bound].sort((a, b) => a - b).map((i) => names[i]),
    notSeparable: sets,
  };
}

function onlyMovesBounds(
  vector: readonly number[],
  design: Design,
  rates: { readonly survival: Float64Array; readonly recapture: Float64Array },
): boolean {
  const parts = [
    { columns: design.survival.columns, from: 0, rate: rates.survival },
    {
      columns: "known" in design.recapture ? [] : design.recapture.columns,
      from: design.survival.columns.length,
      rate: rates.recapture,
    },
  ];
  let moves = false;
  for (const { columns, from, rate } of parts)
    for (let r = 0; r < rate.length; r++) {
      let shift = 0;
      for (let k = 0; k < columns.length; k++) shift += columns[k][r] * vector[from + k];
      if (Math.abs(shift) < 1e-3) continue;
      if (Math.min(rate[r], 1 - rate[r]) > BOUND) return false;
      moves = true;
    }
  return moves;
}
