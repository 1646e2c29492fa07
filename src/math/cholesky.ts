/**
 * Cholesky factor of the symmetric positive definite n × n matrix in the first n² places of `a` (row-major), in
 * place: the lower triangle becomes L with A = L Lᵀ. False if a pivot is not above `floor` times its diagonal.
 */
export function choleskyInPlace(a: Float64Array, n: number, floor = 1e-14): boolean {
  for (let j = 0; j < n; j++) {
    const row = j * n;
    const diagonal = a[row + j];
    let pivot = diagonal;
    for (let k = 0; k < j; k++) pivot -= a[row + k] * a[row + k];
    if (!(pivot > floor * Math.abs(diagonal))) return false;
    const root = Math.sqrt(pivot);
    a[row + j] = root;
    for (let i = j + 1; i < n; i++) {
      let sum = a[i * n + j];
      for (let k = 0; k < j; k++) sum -= a[i * n + k] * a[row + k];
      a[i * n + j] = sum / root;
    }
  }
  return true;
}

/** Solves L Lᵀ x = b in place, with L from `choleskyInPlace`. */
export function choleskySolve(l: Float64Array, n: number, b: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let sum = b[i];
    for (let k = 0; k < i; k++) sum -= l[i * n + k] * b[k];
    b[i] = sum / l[i * n + i];
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = b[i];
    for (let k = i + 1; k < n; k++) sum -= l[k * n + i] * b[k];
    b[i] = sum / l[i * n + i];
  }
}
