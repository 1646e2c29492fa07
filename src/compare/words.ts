export function percentWords(share: number): string {
  return `${Math.round(100 * share)} %`;
}

/** p to two significant digits, without false precision. */
export function pWords(p: number): string {
  return p >= 0.1 ? p.toFixed(2) : String(Number(p.toPrecision(2)));
}
