/** `a`, `a and b`, `a, b and c`; `nothing` for none. */
export function listWords(names: readonly string[]): string {
  if (names.length === 0) return "nothing";
  if (names.length === 1) return names[0];
  return `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
}

/** `1 day`, `3 days`. */
export function countText(n: number, noun: string): string {
  return `${n} ${noun}${n === 1 ? "" : "s"}`;
}

/** Above this an inflation or condition number says only that nothing is left to tell apart. */
const MILLION = 1e6;

/** A number of 4 significant digits; `more than a million` and `infinite` where digits would mean nothing. */
export function largeWords(value: number): string {
  if (value === Number.POSITIVE_INFINITY) return "infinite";
  return value > MILLION ? "more than a million" : String(Number(value.toPrecision(4)));
}
