import { isoDay } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";

function overlap(site: string, variable: string, day: number, files: readonly string[]): InputError {
  return new InputError({
    name: "aggregate.series-overlap",
    expected: `one value of ${variable} at ${site} per day`,
    found: `two that cover ${isoDay(day)}`,
    where: { cell: files.join(", ") },
    remedy: "say which of the records holds (findings: duplicate), or name the stations apart",
  });
}

/** Parts of one site's series put end to end in order of time. Throws `aggregate.series-overlap`. */
function endToEnd(parts: readonly Series[]): Series {
  if (parts.length === 1) return parts[0];
  const ordered = parts
    .filter((part) => part.starts.length > 0)
    .sort((a, b) => a.starts[0] - b.starts[0] || a.ends[0] - b.ends[0]);
  const first = ordered[0] ?? parts[0];
  const size = ordered.reduce((sum, part) => sum + part.starts.length, 0);
  const [starts, ends, values] = [new Int32Array(size), new Int32Array(size), new Float64Array(size)];
  let n = 0;
  for (const part of ordered) {
    if (n > 0 && part.starts[0] < ends[n - 1])
      throw overlap(part.site, part.variable, part.starts[0], filesOf(parts));
    starts.set(part.starts, n);
    ends.set(part.ends, n);
    values.set(part.values, n);
    n += part.starts.length;
  }
  return { ...first, starts, ends, values, files: filesOf(parts) };
}

/** The files of some series, each once, sorted by code unit. */
export function filesOf(series: readonly Series[]): string[] {
  return [...new Set(series.flatMap((one) => one.files))].sort();
}

/** One series per site, sorted by the site's name, so that neither order nor splitting changes a result. */
export function bySite(series: readonly Series[]): Series[] {
  const parts = new Map<string, Series[]>();
  for (const one of series) parts.set(one.site, [...(parts.get(one.site) ?? []), one]);
  return [...parts.keys()].sort().map((site) => endToEnd(parts.get(site) ?? []));
}
