import { Matrix as Dense, SVD } from "ml-matrix";
import { type Matrix, zeros } from "../data/matrix.ts";

/**
 * A column counts as reproduced exactly where what is left of it, after the others are taken out, is shorter than
 * this share of its centred length (so a variance inflation of 1e14 and more is infinite). Standardised sums and
 * copies leave about 1e-15; least-squares programs commonly alias columns at 1e-7 (common practice, no source).
 */
export const EXACT = 1e-7;

/** Columns centred and divided by their length; unit'unit is the correlation matrix. */
export interface UnitColumns {
  /** n × K. A constant column stays zero. */
  readonly unit: Matrix;
  readonly centre: Float64Array;
  /** Length of the centred columns, sd·√(n−1); 0 for a constant column. */
  readonly length: Float64Array;
}

/** Centres (two passes: the mean of what is left is taken off again) and scales to unit length. */
export function unitColumns(matrix: Matrix): UnitColumns {
  const { rows, columns, data } = matrix;
  const unit = zeros(rows, columns);
  const centre = new Float64Array(columns);
  const length = new Float64Array(columns);
  for (let j = 0; j < columns; j++) {
    let sum = 0;
    let largest = 0;
    for (let i = 0; i < rows; i++) {
      sum += data[i * columns + j];
      largest = Math.max(largest, Math.abs(data[i * columns + j]));
    }
    let mean = sum / rows;
    let rest = 0;
    for (let i = 0; i < rows; i++) rest += data[i * columns + j] - mean;
    mean += rest / rows;
    let squares = 0;
    for (let i = 0; i < rows; i++) squares += (data[i * columns + j] - mean) ** 2;
    const long = Math.sqrt(squares);
    centre[j] = mean;
    // Rounding of the mean alone leaves about eps·|x|; shorter than that there is no variation.
    if (long <= 4 * Number.EPSILON * largest * Math.sqrt(rows)) continue;
    length[j] = long;
    for (let i = 0; i < rows; i++) unit.data[i * columns + j] = (data[i * columns + j] - mean) / long;
  }
  return { unit, centre, length };
}

/** Singular values and all right singular vectors of an n × K matrix. */
export interface Decomposition {
  /** K values, falling; those at or below the tolerance are 0. */
  readonly values: Float64Array;
  /** K × K, one vector per column, in the order of `values`. */
  readonly vectors: Matrix;
  readonly rank: number;
}

/**
 * Singular value decomposition; values at or below `tolerance`·(the largest) count as 0. Rows of zeros are added
 * where K > n, so that the vectors of the null space are there too.
 */
export function decompose(matrix: Matrix, tolerance: number): Decomposition {
  const { rows, columns } = matrix;
  const values = new Float64Array(columns);
  const vectors = zeros(columns, columns);
  if (columns === 0) return { values, vectors, rank: 0 };
  const dense = Dense.zeros(Math.max(rows, columns), columns);
  for (let i = 0; i < rows; i++)
    for (let j = 0; j < columns; j++) dense.set(i, j, matrix.data[i * columns + j]);
  const svd = new SVD(dense, { computeLeftSingularVectors: false, computeRightSingularVectors: true });
  const right = svd.rightSingularVectors;
  const largest = svd.diagonal[0];
  let rank = 0;
  for (let j = 0; j < columns; j++) {
    if (svd.diagonal[j] > tolerance * largest) {
      values[j] = svd.diagonal[j];
      rank++;
    }
    for (let k = 0; k < columns; k++) vectors.data[k * columns + j] = right.get(k, j);
  }
  return { values, vectors, rank };
}
