/** A dense row-major matrix: element (i, j) is data[i * columns + j]. */
export interface Matrix {
  readonly rows: number;
  readonly columns: number;
  readonly data: Float64Array;
}

export function zeros(rows: number, columns: number): Matrix {
  return { rows, columns, data: new Float64Array(rows * columns) };
}

export function fromRows(rows: readonly (readonly number[])[]): Matrix {
  const columns = rows.length === 0 ? 0 : rows[0].length;
  const data = new Float64Array(rows.length * columns);
  for (let i = 0; i < rows.length; i++) data.set(rows[i], i * columns);
  return { rows: rows.length, columns, data };
}

export function toRows(matrix: Matrix): number[][] {
  return Array.from({ length: matrix.rows }, (_, i) =>
    Array.from(matrix.data.subarray(i * matrix.columns, (i + 1) * matrix.columns)),
  );
}

export function column(matrix: Matrix, j: number): Float64Array {
  const out = new Float64Array(matrix.rows);
  for (let i = 0; i < matrix.rows; i++) out[i] = matrix.data[i * matrix.columns + j];
  return out;
}

/** The named columns, in the order asked for. */
export function pickColumns(matrix: Matrix, which: readonly number[]): Matrix {
  const out = zeros(matrix.rows, which.length);
  for (let i = 0; i < matrix.rows; i++)
    for (let j = 0; j < which.length; j++)
      out.data[i * which.length + j] = matrix.data[i * matrix.columns + which[j]];
  return out;
}

export function fromColumns(columns: readonly ArrayLike<number>[], rows: number): Matrix {
  const out = zeros(rows, columns.length);
  for (let j = 0; j < columns.length; j++)
    for (let i = 0; i < rows; i++) out.data[i * columns.length + j] = columns[j][i];
  return out;
}
