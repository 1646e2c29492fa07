import { isoDay } from "../data/day.ts";
import { countText } from "../data/words.ts";
import { refOf, type TracedSeries } from "./assemble.ts";
import type { DraftFinding } from "./block.ts";
import { convertUnit, isTemperature } from "./units.ts";

/**
 * Periods in which a station's minimum temperature is above its maximum. Judged only where exactly one variable of each
 * kind is read: with several, which belongs to which is not known.
 */
export function crossedFindings(all: readonly TracedSeries[]): readonly DraftFinding[] {
  const named = (kind: string) => [
    ...new Set(
      all
        .filter(({ series }) => series.kind === kind && isTemperature(series.unit))
        .map(({ series }) => series.variable),
    ),
  ];
  const [lows, highs] = [named("minimum"), named("maximum")];
  if (lows.length !== 1 || highs.length !== 1) return [];
  return all
    .filter(({ series }) => series.variable === lows[0])
    .flatMap((low) => {
      const high = all.find(({ series }) => series.variable === highs[0] && series.site === low.series.site);
      return high === undefined ? [] : crossedAt(low, high);
    });
}

function crossedAt(low: TracedSeries, high: TracedSeries): readonly DraftFinding[] {
  const [a, b] = [low.series, high.series];
  const maxima = a.unit === b.unit ? b.values : convertUnit(b.values, b.unit, a.unit, "reading");
  let [count, first, firstMaximum] = [0, -1, Number.NaN];
  for (let i = 0, j = 0; i < a.starts.length && j < b.starts.length; ) {
    if (a.starts[i] < b.starts[j]) i++;
    else if (a.starts[i] > b.starts[j]) j++;
    else {
      if (a.ends[i] === b.ends[j] && a.values[i] > maxima[j]) {
        if (count === 0) [first, firstMaximum] = [i, b.values[j]];
        count++;
      }
      i++;
      j++;
    }
  }
  if (count === 0) return [];
  const shown = `${a.variable} ${a.values[first]} ${a.unit}, ${b.variable} ${firstMaximum} ${b.unit}`;
  return [
    {
      kind: "bad-value",
      subject: `${a.variable} and ${b.variable} at ${a.site}`,
      message: `The minimum is above the maximum at ${a.site} in ${countText(count, "row")}; the first on ${isoDay(a.starts[first])} (${shown}).`,
      at: refOf(low, first),
      value: shown,
      count,
      remedy: "the columns may be exchanged, or one of them belongs to another day (`day: -1`)",
    },
  ];
}
