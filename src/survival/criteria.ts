/** −2 log L + 2k + 2k(k+1)/(n − k − 1) (Hurvich & Tsai 1989). NaN where n − k − 1 ≤ 0: there it is not defined. */
export function aicc(minus2LogL: number, k: number, n: number): number {
  return n - k - 1 <= 0 ? Number.NaN : minus2LogL + 2 * k + (2 * k * (k + 1)) / (n - k - 1);
}

/** −2 log L + k log n (Schwarz 1978). */
export function bic(minus2LogL: number, k: number, n: number): number {
  return minus2LogL + k * Math.log(n);
}
