/** L⁻¹ of the lower triangle, row-major; into `out` where it is handed in, whose upper triangle must be 0. */
export function inverseLower(
  l: Float64Array,
  n: number,
  out: Float64Array = new Float64Array(n * n),
): Float64Array {
  for (let j = 0; j < n; j++) {
    out[j * n + j] = 1 / l[j * n + j];
    for (let i = j + 1; i < n; i++) {
      let sum = 0;
      for (let k = j; k < i; k++) sum -= l[i * n + k] * out[k * n + j];
      out[i * n + j] = sum / l[i * n + i];
    }
  }
  return out;
}
