/** `a`, `a and b`, `a, b and c`; `nothing` for none. */
export function listWords(names: readonly string[]): string {
  if (names.length === 0) return "nothing";
  if (names.length === 1) return names[0];
  return `${names.slice(0, -1).join(", ")} and ${names[names.length - 1]}`;
}
