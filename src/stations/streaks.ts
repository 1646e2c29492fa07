import { isoDay } from "../data/day.ts";
import { periodText } from "../data/period.ts";
import { countText } from "../data/words.ts";
import { refOf, type TracedSeries } from "./assemble.ts";
import type { DraftFinding } from "./block.ts";
import { convertUnit, isTemperature } from "./units.ts";

/**
 * Limits of Durre et al. (2010, J. Appl. Meteor. Climatol. 49:1615–1633), from memory: twenty equal daily values in a row
 * (rain: without dry days between), and a temperature 25 degC above, or below, the days before and after.
 */
const STREAK = 20;
const JUMP_DEGC = 25;

/** Flat runs and spikes of a daily series; one finding each, with the longest run or the first spike. */
export function streakFindings(traced: TracedSeries): readonly DraftFinding[] {
  const { series, covers } = traced;
  const temperature = isTemperature(series.unit);
  if (covers !== "day" || !(temperature || series.kind === "total")) return [];
  return [...flatRuns(traced), ...(temperature ? spikes(traced) : [])];
}

function flatRuns(traced: TracedSeries): readonly DraftFinding[] {
  const { series } = traced;
  const { starts, ends, values } = series;
  const dry = (value: number) => series.kind === "total" && value === 0;
  const runs: { from: number; to: number }[] = [];
  for (let i = 0; i < values.length; ) {
    let j = i + 1;
    while (j < values.length && values[j] === values[i] && starts[j] === ends[j - 1]) j++;
    if (j - i >= STREAK && !dry(values[i])) runs.push({ from: i, to: j });
    i = j;
  }
  if (runs.length === 0) return [];
  const longest = runs.reduce((best, run) => (run.to - run.from > best.to - best.from ? run : best));
  const days = longest.to - longest.from;
  const count = runs.reduce((sum, run) => sum + run.to - run.from, 0);
  return [
    {
      kind: "flat-run",
      subject: `${series.variable} at ${series.site}`,
      message:
        `${series.variable} at ${series.site} does not change over ${countText(runs.length, "run")} of ${STREAK} days or more; the longest is ` +
        `${days} days at ${values[longest.from]} ${series.unit}, ${periodText({ start: starts[longest.from], end: ends[longest.to - 1] })}.`,
      at: refOf(traced, longest.from),
      value: String(values[longest.from]),
      count,
      remedy: "a sensor may have stuck or a value been filled down: check, and take the days out of the file",
    },
  ];
}

function spikes(traced: TracedSeries): readonly DraftFinding[] {
  const { series } = traced;
  const { starts, ends, values } = series;
  // Beyond 150 degC it is a mark for a missing value, which is told as such.
  const [jump, mark] = convertUnit([JUMP_DEGC, 150], "degC", series.unit, "difference");
  const at: number[] = [];
  for (let i = 1; i + 1 < values.length; i++) {
    if (starts[i] !== ends[i - 1] || starts[i + 1] !== ends[i]) continue;
    const [before, after] = [values[i] - values[i - 1], values[i] - values[i + 1]];
    if (Math.abs(before) > mark || Math.abs(after) > mark) continue;
    if ((before >= jump && after >= jump) || (before <= -jump && after <= -jump)) at.push(i);
  }
  if (at.length === 0) return [];
  const i = at[0];
  return [
    {
      kind: "spike",
      subject: `${series.variable} at ${series.site}`,
      message:
        `${series.variable} at ${series.site} jumps by ${JUMP_DEGC} degC or more for a single day, ${at.length === 1 ? "once" : `${at.length} times`}: ` +
        `${values[i - 1]}, ${values[i]}, ${values[i + 1]} ${series.unit} around ${isoDay(starts[i])}.`,
      at: refOf(traced, i),
      value: String(values[i]),
      count: at.length,
      remedy: "a sign or a decimal point may be wrong: check the row",
    },
  ];
}
