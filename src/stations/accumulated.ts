import { isoDay } from "../data/day.ts";
import { countText } from "../data/words.ts";
import type { DraftFinding } from "./block.ts";
import type { AccumulatedRule } from "./options.ts";

/** A total over more days than this is not spread but dropped: it says too little of each. Common practice, no source. */
const MOST_DAYS = 31;

/** Rows of one station, sorted by start. */
interface Rows {
  readonly site: string;
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  readonly values: Float64Array;
  readonly rows: Uint32Array | number;
}

type Finding = Omit<DraftFinding, "at"> & { readonly row: number };

/**
 * Totals that were read after days without a reading, as their flags say: spread evenly over the days since the last value
 * (their own day included), dropped, or kept on the day they were written at. Daily rows only.
 */
export function settleAccumulated(
  rows: Rows,
  variable: string,
  ruleOf: (row: number) => AccumulatedRule | undefined,
): { readonly rows: Rows; readonly findings: readonly Finding[] } {
  const { starts, ends, values } = rows;
  const rowOf = (i: number) => (typeof rows.rows === "number" ? rows.rows + i : rows.rows[i]);
  const out = { starts: [] as number[], ends: [] as number[], values: [] as number[], rows: [] as number[] };
  const tallies = new Map<string, { count: number; days: number; at: number }>();
  const push = (start: number, end: number, value: number, row: number) => {
    out.starts.push(start);
    out.ends.push(end);
    out.values.push(value);
    out.rows.push(row);
  };
  let last = Number.NaN;
  for (let i = 0; i < starts.length; i++) {
    const rule = Number.isNaN(values[i]) ? undefined : ruleOf(rowOf(i));
    if (rule !== undefined) {
      const days = ends[i] - last;
      const spread = rule === "spread" && days >= 1 && days <= MOST_DAYS;
      const how = spread || rule === "keep" ? rule : "drop";
      const tally = tallies.get(how) ?? { count: 0, days: 0, at: i };
      tallies.set(how, { ...tally, count: tally.count + 1, days: tally.days + (spread ? days : 1) });
      if (spread) {
        // Rows without a value that stand for days of the total give way to their share of it.
        while (out.starts.length > 0 && out.starts[out.starts.length - 1] >= last)
          for (const list of [out.starts, out.ends, out.values, out.rows]) list.pop();
        for (let day = last; day < ends[i]; day++) push(day, day + 1, values[i] / days, rowOf(i));
      } else push(starts[i], ends[i], how === "keep" ? values[i] : Number.NaN, rowOf(i));
    } else push(starts[i], ends[i], values[i], rowOf(i));
    if (!Number.isNaN(values[i])) last = ends[i];
  }
  if (tallies.size === 0) return { rows, findings: [] };
  const words = {
    spread: "spread evenly over",
    drop: "read as missing on",
    keep: "left as the total of one day on",
  };
  const findings = [...tallies].map(
    ([how, { count, days, at }]): Finding => ({
      kind: "accumulated",
      subject: `${variable} at ${rows.site}`,
      message:
        `${countText(count, "value")} of ${variable} at ${rows.site} ${count === 1 ? "is the total" : "are totals"} of several days, ` +
        `${words[how as AccumulatedRule]} ${countText(days, "day")}; the first on ${isoDay(starts[at])}.`,
      row: rowOf(at),
      value: String(values[at]),
      count,
      remedy:
        "choose another rule in `accumulated`, or accept it: daily maxima and counts of wet days suffer most",
    }),
  );
  return {
    rows: {
      ...rows,
      starts: Int32Array.from(out.starts),
      ends: Int32Array.from(out.ends),
      values: Float64Array.from(out.values),
      rows: Uint32Array.from(out.rows),
    },
    findings,
  };
}
