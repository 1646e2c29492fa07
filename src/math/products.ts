/** Σ a_i b_i over the length of a. */
export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}

/**
 * XᵀDX of the m columns `which` of n values each, D the diagonal of `weights`: the function writes m × m, row-major, into the
 * first m² places of `out`. Two rows and two columns at a time, since loading the values costs as much as multiplying them.
 */
export function weightedProducts(
  columns: readonly Float64Array[],
  n: number,
): (which: Int32Array, weights: Float64Array, out: Float64Array) => void {
  // kept between calls: to make them anew costs as much as to fill them
  let [plain, weighted] = [new Float64Array(0), new Float64Array(0)];
  return (which, weights, out) => {
    const m = which.length;
    if (plain.length < m * n) [plain, weighted] = [new Float64Array(2 * m * n), new Float64Array(2 * m * n)];
    for (let i = 0; i < m; i++) {
      const column = columns[which[i]];
      for (let r = 0; r < n; r++) {
        plain[i * n + r] = column[r];
        weighted[i * n + r] = weights[r] * column[r];
      }
    }
    for (let i = 0; i < m; i += 2)
      for (let j = i; j < m; j += 2) fourProducts(weighted, plain, n, m, i, j, out);
  };
}

function fourProducts(
  weighted: Float64Array,
  plain: Float64Array,
  n: number,
  m: number,
  i: number,
  j: number,
  out: Float64Array,
): void {
  // of an odd m the last one is done twice
  const i1 = Math.min(i + 1, m - 1);
  const j1 = Math.min(j + 1, m - 1);
  let ac = 0;
  let ad = 0;
  let bc = 0;
  let bd = 0;
  for (let r = 0; r < n; r++) {
    const a = weighted[i * n + r];
    const b = weighted[i1 * n + r];
    const c = plain[j * n + r];
    const d = plain[j1 * n + r];
    ac += a * c;
    ad += a * d;
    bc += b * c;
    bd += b * d;
  }
  out[i * m + j] = out[j * m + i] = ac;
  out[i * m + j1] = out[j1 * m + i] = ad;
  out[i1 * m + j] = out[j * m + i1] = bc;
  out[i1 * m + j1] = out[j1 * m + i1] = bd;
}

/** Arrays of zeros cut from one piece of memory, since asking for it costs more than filling it. */
export function arraysOf(count: number, length: number): Float64Array[] {
  const all = new Float64Array(count * length);
  const out: Float64Array[] = [];
  for (let i = 0; i < count; i++) out.push(all.subarray(i * length, (i + 1) * length));
  return out;
}
