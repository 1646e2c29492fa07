/** −2 log L + 2k + 2k(k+1)/(n − k − 1) (Hurvich & Tsai 1989). NaN where n − k − 1 ≤ 0: there it is not defined. */
export function aicc(minus2LogL: number, k: number, n: number): number {
  return n - k - 1 <= 0 ? Number.NaN : minus2LogL + 2 * k + (2 * k * (k + 1)) / (n - k - 1);
}

/** −2 log L + k log n (Schwarz 1978). */
export function bic(minus2LogL: number, k: number, n: number): number {
  return minus2LogL + k * Math.log(n);
}

/** log C(n, k). */
function logChoose(n: number, k: number): number {
  let sum = 0;
  for (let i = 1; i <= k; i++) sum += Math.log((n - k + i) / i);
  return sum;
}

/** Of K candidates with k chosen: BIC + 2g log C(K, k), g = ½ (Chen & Chen 2008, Biometrika 95:759, eq. 1). */
export function extendedBic(
  minus2LogL: number,
  k: number,
  n: number,
  candidates: number,
  chosen: number,
): number {
  return bic(minus2LogL, k, n) + logChoose(candidates, chosen);
}

/** −2 log L/ĉ + (k + 1) log n, the variance inflation ĉ counted as a parameter. */
export function qbic(minus2LogL: number, k: number, n: number, inflation: number): number {
  return bic(minus2LogL / inflation, k + 1, n);
}

/** −2 log L/ĉ + 2k′ + 2k′(k′ + 1)/(n − k′ − 1), k′ = k + 1 (Burnham & Anderson 2002, section 2.5). */
export function qaicc(minus2LogL: number, k: number, n: number, inflation: number): number {
  return aicc(minus2LogL / inflation, k + 1, n);
}
