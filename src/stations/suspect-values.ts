import { isoDay } from "../data/day.ts";
import type { ValueKind } from "../data/series.ts";
import { countText } from "../data/words.ts";
import { type Block, type DraftFinding, NO_DAY, type RowRef, stationAt } from "./block.ts";
import { suspectUnit } from "./suspect-unit.ts";
import { convertUnit, isTemperature, sameDimension } from "./units.ts";

/** Numbers that loggers and offices write for "no value" (common practice, no one source). */
export const SENTINELS: readonly number[] = [
  88.8, 99, 99.9, 99.99, 888, 888.8, 999, 999.9, 999.99, 8888, 9999, 9999.9, 9999.99, 32767, 32768, 99999,
  99999.9, 999999, 6999, 7777, 1e20,
].flatMap((value) => [value, -value]);

/** Least and greatest value that a reading can have, in its unit. */
interface Limits {
  readonly least: number;
  readonly greatest: number;
  readonly words: string;
}

/** Limits by dimension: temperature −90 to 60 degC, no negative lengths of rain or snow, speeds, pressures; 0 to 100 percent. */
export function limitsOf(unit: string, kind: ValueKind): Limits | undefined {
  if (isTemperature(unit) && kind !== "total") {
    const [least, greatest] = convertUnit([-90, 60], "degC", unit, "reading");
    return { least, greatest, words: "outside −90 to 60 degC, which no station has measured" };
  }
  if (unit === "percent" || unit === "%")
    return { least: 0, greatest: 100, words: "outside 0 to 100 percent" };
  for (const base of ["mm", "m/s", "hPa"])
    if (sameDimension(unit, base))
      return { least: 0, greatest: Number.POSITIVE_INFINITY, words: "below 0, which cannot be measured" };
  return undefined;
}

function ownLimits([least, greatest]: readonly [number, number]): Limits {
  return { least, greatest, words: `outside the stated limits ${least} to ${greatest}` };
}

/** All columns of one variable in one records entry: sentinels that were not declared, impossible values, a wrong unit. */
export function suspectFindings(blocks: readonly Block[]): readonly DraftFinding[] {
  const [{ variable, unit, kind, scale, covers }] = blocks;
  const own = blocks[0].limits;
  const limits = own === undefined ? limitsOf(unit, kind) : ownLimits(own);
  const outside = (value: number) =>
    limits !== undefined && (value < limits.least || value > limits.greatest);
  const marks = new Map<number, { count: number; first: RowRef }>();
  let [least, greatest] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
  const candidates = new Set(SENTINELS);
  let impossible = false;
  // Every block has one source, so the row with the block tells the place.
  for (const block of blocks)
    for (let row = 0; row < block.raw.length; row++) {
      const value = block.raw[row];
      if (Number.isNaN(value) || block.starts[row] === NO_DAY) continue;
      if ((value >= 88 || value <= -88) && candidates.has(value)) {
        const mark = marks.get(value);
        if (mark === undefined) marks.set(value, { count: 1, first: { source: block.source, row } });
        else mark.count++;
        continue;
      }
      if (outside(value * scale)) {
        impossible = true;
        continue;
      }
      if (value < least) least = value;
      if (value > greatest) greatest = value;
    }
  const findings: DraftFinding[] = [];
  const sentinels = new Set<number>();
  for (const [value, { count, first }] of [...marks].sort((a, b) => a[0] - b[0])) {
    // Far from all other values: further than their whole range, and written again and again; or impossible.
    const range = greatest - least;
    const apart = value > greatest + range || value < least - range;
    if (!outside(value * scale) && !(apart && count >= 3)) continue;
    sentinels.add(value);
    findings.push({
      kind: "sentinel",
      subject: variable,
      message:
        `${variable} holds ${value} in ${countText(count, "row")}, far from its other values` +
        `${Number.isFinite(range) ? ` (${least} to ${greatest})` : ""}: probably a mark for a missing value; it was read as a value.`,
      at: first,
      value: String(value),
      count,
      remedy: `declare it: \`missing: [${value}]\`, or accept it if it was measured`,
    });
  }
  // A sentinel that lies outside was not counted as one: it is looked at again, like every value, only then.
  if (impossible || [...marks.keys()].some((value) => outside(value * scale)))
    findings.push(...impossibleFindings(blocks, sentinels, outside, limits?.words ?? ""));
  const suspicion = suspectUnit(blocks, sentinels, unit, kind, covers);
  return suspicion === undefined ? findings : [...findings, suspicion];
}

function impossibleFindings(
  blocks: readonly Block[],
  sentinels: ReadonlySet<number>,
  outside: (value: number) => boolean,
  words: string,
): readonly DraftFinding[] {
  const tallies = new Map<
    string,
    { count: number; first: RowRef; value: number; day: number; unit: string }
  >();
  for (const block of blocks)
    for (let row = 0; row < block.raw.length; row++) {
      const value = block.raw[row] * block.scale;
      if (!outside(value) || block.starts[row] === NO_DAY || sentinels.has(block.raw[row])) continue;
      const site = stationAt(block.stations, row);
      const tally = tallies.get(site);
      if (tally !== undefined) tally.count++;
      else {
        const first = { source: block.source, row };
        tallies.set(site, {
          count: 1,
          first,
          value: block.raw[row],
          day: block.starts[row],
          unit: block.unit,
        });
      }
    }
  const { variable } = blocks[0];
  return [...tallies]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([site, tally]) => ({
      kind: "bad-value" as const,
      subject: `${variable} at ${site}`,
      message: `${variable} at ${site} is ${words}, in ${countText(tally.count, "row")}; the first is ${tally.value} ${tally.unit} on ${isoDay(tally.day)}.`,
      at: tally.first,
      value: String(tally.value),
      count: tally.count,
      remedy: "correct the file, declare the value missing, or check unit and scale",
    }));
}
