/** Keys and 0-based list positions from the top of the pipeline file. */
export type KeyPath = readonly (string | number)[];

/** A path as a text that no other path has. */
export function pathKey(path: KeyPath): string {
  return JSON.stringify(path);
}

/** A path for people: `covariates > #4 > window > season`, list entries counted from 1. */
export function cellText(path: KeyPath): string {
  return path.map((part) => (typeof part === "number" ? `#${part + 1}` : part)).join(" > ");
}
