/** `a`, `a and b`, `a, b and c`; `nothing` for none. */
export function listWords(names: readonly string[]): string {
  if (names.length === 0) return "nothing";
  if (names.length === 1) return names[0];
  return `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
}

export function percentWords(share: number): string {
  return `${Math.round(100 * share)} %`;
}

/** p to two significant digits, without false precision. */
export function pWords(p: number): string {
  return p >= 0.1 ? p.toFixed(2) : String(Number(p.toPrecision(2)));
}
