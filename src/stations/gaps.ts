import { isoDay } from "../data/day.ts";
import { periodText } from "../data/period.ts";
import { countText } from "../data/words.ts";
import { refOf, type TracedSeries } from "./assemble.ts";
import type { DraftFinding } from "./block.ts";
import { periodsBetween } from "./dates.ts";

/** A run of missing periods between two observations, [start, end). */
export interface Gap {
  readonly start: number;
  readonly end: number;
  /** Missing days, months, years or dekads, by what the records cover. */
  readonly missing: number;
  /** Index of the last value before the gap. */
  readonly after: number;
}

/**
 * The runs without a value between the first and the last value of a series; a row with a missing value and no row at all
 * are the same.
 */
export function gapsOf({ series, covers }: Pick<TracedSeries, "series" | "covers">): readonly Gap[] {
  const { starts, ends, values } = series;
  const gaps: Gap[] = [];
  let last = -1;
  for (let i = 0; i < starts.length; i++) {
    if (Number.isNaN(values[i])) continue;
    if (last >= 0 && starts[i] > ends[last]) {
      const [start, end] = [ends[last], starts[i]];
      gaps.push({ start, end, missing: periodsBetween(start, end, covers), after: last });
    }
    last = i;
  }
  return gaps;
}

/** One finding per station and variable: how much is missing in how many runs, and the longest with its dates. */
export function gapFindings(traced: TracedSeries): readonly DraftFinding[] {
  const { series, covers } = traced;
  const subject = `${series.variable} at ${series.site}`;
  const first = series.values.findIndex((value) => !Number.isNaN(value));
  if (first < 0)
    return [
      {
        kind: "gap",
        subject,
        message: `${subject} has ${countText(series.starts.length, "row")} and not a single value.`,
        at: refOf(traced, 0),
        count: series.starts.length,
        remedy: "check the column, the missing values declared and the files, or leave the station out",
      },
    ];
  const gaps = gapsOf(traced);
  if (gaps.length === 0) return [];
  const longest = gaps.reduce((best, gap) => (gap.missing > best.missing ? gap : best));
  const missing = gaps.reduce((sum, gap) => sum + gap.missing, 0);
  const last = series.values.findLastIndex((value) => !Number.isNaN(value));
  const runs = countText(gaps.length, "run");
  const span = periodText({ start: series.starts[first], end: series.ends[last] });
  return [
    {
      kind: "gap",
      subject,
      message:
        `${subject} lacks ${countText(missing, covers)} in ${runs} between its first and last value (${span}); ` +
        `the longest is ${countText(longest.missing, covers)}, ${gapText(longest, covers)}.`,
      at: refOf(traced, longest.after),
      value: gaps
        .slice(0, 12)
        .map((gap) => gapText(gap, covers))
        .concat(gaps.length > 12 ? [`and ${gaps.length - 12} more`] : [])
        .join("; "),
      count: missing,
      remedy:
        "the completeness rule of each covariate decides what a gap costs; more files or infilling may close it",
    },
  ];
}

/** `1982-08`, `1986-01 to 1986-07` for months; days otherwise. */
function gapText(gap: Gap, covers: TracedSeries["covers"]): string {
  const width = covers === "month" ? 7 : covers === "year" ? 4 : 10;
  const [first, last] = [isoDay(gap.start).slice(0, width), isoDay(gap.end - 1).slice(0, width)];
  return first === last ? first : `${first} to ${last}`;
}
