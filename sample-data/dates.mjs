const MS = 86_400_000;

/** Days since 1970-01-01. */
export const dayOf = (year, month, day) => Date.UTC(year, month - 1, day) / MS;

export function civil(day) {
  const date = new Date(day * MS);
  return { year: date.getUTCFullYear(), month: date.getUTCMonth() + 1, day: date.getUTCDate() };
}

const two = (n) => String(n).padStart(2, "0");

/** yyyy-MM-dd */
export function iso(day) {
  const { year, month, day: dom } = civil(day);
  return `${year}-${two(month)}-${two(dom)}`;
}

/** dd.MM.yyyy */
export function dotted(day) {
  const { year, month, day: dom } = civil(day);
  return `${two(dom)}.${two(month)}.${year}`;
}
