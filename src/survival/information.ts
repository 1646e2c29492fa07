import { Matrix as Dense, EigenvalueDecomposition } from "ml-matrix";
import type { Matrix } from "../data/matrix.ts";
import type { Design } from "./design.ts";
import { type Rates, sortFlatDirections } from "./flat-directions.ts";

/**
 * Eigenvalues of the information below this share of the largest, or of the quarter per release that one yes-or-no
 * answer at one half is worth, carry no information. (The second measure is needed where all of them are tiny.)
 */
const FLAT = 1e-8;

export interface InformationReport {
  /** (Pseudo-)inverse of the observed information; NaN in rows and columns of coefficients it says nothing about. */
  readonly covariance: Matrix;
  /** The same with every number kept: the variance of combinations that no flat direction moves is right in it. */
  readonly pseudoInverse: Float64Array;
  readonly flat: readonly Float64Array[];
  /**
   * Parameters that the data determine: the rank of the information, plus one for every direction that is flat only
   * because a rate sits at its bound (there the parameter is estimated, it has only no curvature).
   */
  readonly rank: number;
  /** Ratio of the largest to the smallest eigenvalue. */
  readonly condition: number;
  /** Coefficients that run away because rates are at 0 or 1. */
  readonly atBound: readonly string[];
  /** Sets of coefficients that the data cannot tell apart; a set of one is a coefficient they say nothing of. */
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
  rates: Rates,
  releases: number,
): InformationReport {
  const d = names.length;
  const eigen = new EigenvalueDecomposition(Dense.from1DArray(d, d, information), { assumeSymmetric: true });
  const values = eigen.realEigenvalues;
  const largest = Math.max(...values.map(Math.abs));
  const smallest = Math.min(...values);
  const isFlat = values.map((value) => value <= FLAT * Math.max(largest, releases / 4));
  const flat = values.flatMap((_, k) =>
    isFlat[k] ? [Float64Array.from(eigen.eigenvectorMatrix.getColumn(k))] : [],
  );
  const pseudoInverse = new Float64Array(d * d);
  for (let k = 0; k < d; k++) {
    if (isFlat[k]) continue;
    const vector = eigen.eigenvectorMatrix.getColumn(k);
    for (let i = 0; i < d; i++)
      for (let j = 0; j < d; j++) pseudoInverse[i * d + j] += (vector[i] * vector[j]) / values[k];
  }
  const sorted = sortFlatDirections(flat, design, rates);
  const data = Float64Array.from(pseudoInverse);
  for (const i of [...sorted.atBound, ...sorted.sets.flat()])
    for (let j = 0; j < d; j++) {
      data[i * d + j] = Number.NaN;
      data[j * d + i] = Number.NaN;
    }
  return {
    covariance: { rows: d, columns: d, data },
    pseudoInverse,
    flat,
    rank: d - sorted.undetermined,
    condition: smallest <= 0 ? Number.POSITIVE_INFINITY : largest / smallest,
    atBound: sorted.atBound.map((i) => names[i]),
    notSeparable: sorted.sets.map((set) => set.map((i) => names[i])),
  };
}
