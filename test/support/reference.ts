import { readFileSync } from "node:fs";
import type { Counts } from "../../src/study/counts.ts";

/** A reference file copied from the project's reference numbers; each states its source and tolerance. */
export function reference<T>(name: string): T {
  return JSON.parse(readFileSync(new URL(`../reference/${name}.json`, import.meta.url), "utf8")) as T;
}

/** Counts from a triangular or square table of next recaptures. */
export function countsOf(
  released: readonly number[],
  seen: readonly (readonly number[])[],
  stratum = "all",
): Counts {
  const n = released.length;
  const data = new Float64Array(n * n);
  seen.forEach((row, i) => {
    row.forEach((m, j) => {
      data[i * n + (row.length === n ? j : i + j)] = m;
    });
  });
  return {
    stratum,
    occasions: n + 1,
    released: Float64Array.from(released),
    seen: { rows: n, columns: n, data },
    animals: Number.NaN,
  };
}
