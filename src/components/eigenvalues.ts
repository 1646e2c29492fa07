/** Rotations per eigenvalue before the iteration is given up; two or three are the rule. */
const MOST = 60;

/**
 * Eigenvalues, largest first, of a symmetric n × n matrix (row-major), without vectors: Householder's reduction to
 * tridiagonal form, then implicit QL steps with Wilkinson's shift (Golub & Van Loan 2013, §8.3). Several times faster
 * than a full decomposition, which is what parallel analysis needs over and over.
 */
export function symmetricEigenvalues(matrix: Float64Array, n: number): number[] {
  const { diagonal, beside } = tridiagonal(Float64Array.from(matrix), n);
  for (let low = 0; low < n; low++)
    for (let step = 0; ; step++) {
      // The first negligible element beside the diagonal ends the block that begins at `low`.
      let high = low;
      while (high < n - 1 && !negligible(diagonal, beside, high)) high++;
      if (high === low) break;
      if (step === MOST) throw new Error("eigenvalues of a symmetric matrix did not converge");
      implicitStep(diagonal, beside, low, high);
    }
  return Array.from(diagonal).sort((a, b) => b - a);
}

function negligible(diagonal: Float64Array, beside: Float64Array, at: number): boolean {
  const scale = Math.abs(diagonal[at]) + Math.abs(diagonal[at + 1]);
  return Math.abs(beside[at]) <= Number.EPSILON * scale || beside[at] === 0;
}

/** Householder reflections from the first column on; `work` is overwritten. beside[i] stands between i and i + 1. */
function tridiagonal(work: Float64Array, n: number): { diagonal: Float64Array; beside: Float64Array } {
  const diagonal = new Float64Array(n);
  const beside = new Float64Array(n);
  const v = new Float64Array(n);
  const w = new Float64Array(n);
  for (let k = 0; k < n; k++) {
    diagonal[k] = work[k * n + k];
    if (k >= n - 1) break;
    let squares = 0;
    for (let i = k + 1; i < n; i++) squares += work[i * n + k] ** 2;
    const first = work[(k + 1) * n + k];
    // The sign that does not cancel.
    const alpha = first > 0 ? -Math.sqrt(squares) : Math.sqrt(squares);
    beside[k] = alpha;
    const half = squares - alpha * first;
    // Nothing below the first element: no reflection is needed.
    if (squares - first * first <= 0 || half === 0) {
      beside[k] = first;
      continue;
    }
    for (let i = k + 1; i < n; i++) v[i] = work[i * n + k];
    v[k + 1] -= alpha;
    // w = A v/h − v·(v'A v)/(2h²), h = v'v/2; then A − v w' − w v' is the reflected matrix.
    let dot = 0;
    for (let i = k + 1; i < n; i++) {
      let sum = 0;
      for (let j = k + 1; j < n; j++) sum += work[i * n + j] * v[j];
      w[i] = sum / half;
      dot += v[i] * w[i];
    }
    const share = dot / (2 * half);
    for (let i = k + 1; i < n; i++) w[i] -= share * v[i];
    for (let i = k + 1; i < n; i++)
      for (let j = k + 1; j < n; j++) work[i * n + j] -= v[i] * w[j] + w[i] * v[j];
  }
  return { diagonal, beside };
}

/** One QL step on the block low … high: a bulge is chased from its end to its beginning by plane rotations. */
function implicitStep(d: Float64Array, e: Float64Array, low: number, high: number): void {
  const delta = (d[low + 1] - d[low]) / (2 * e[low]);
  const root = Math.hypot(delta, 1);
  const shift = d[low] - e[low] / (delta + (delta >= 0 ? root : -root));
  let g = d[high] - shift;
  let [sin, cos, moved] = [1, 1, 0];
  for (let i = high - 1; i >= low; i--) {
    const f = sin * e[i];
    const b = cos * e[i];
    const r = Math.hypot(f, g);
    e[i + 1] = r;
    if (r === 0) {
      // The matrix has fallen apart here: the rest of the step is not needed.
      d[i + 1] -= moved;
      e[high] = 0;
      return;
    }
    sin = f / r;
    cos = g / r;
    g = d[i + 1] - moved;
    const turned = (d[i] - g) * sin + 2 * cos * b;
    moved = sin * turned;
    d[i + 1] = g + moved;
    g = cos * turned - b;
  }
  d[low] -= moved;
  e[low] = g;
  e[high] = 0;
}
