import { isoDay } from "../data/day.ts";
import type { ValueKind } from "../data/series.ts";
import { countText } from "../data/words.ts";
import { type Block, type DraftFinding, NO_DAY, placeOf, type RowRef } from "./block.ts";
import type { DuplicateRule, WithinDay } from "./options.ts";

/** Minutes of a day. */
const DAY = 1440;

/**
 * The day that a reading belongs to. A day ends at `ends` minutes after midnight; a reading at the boundary belongs to the day
 * that begins there if times are those of beginnings, to the one that ends there if they are those of ends. The day is named
 * after the date that holds most of it: one that ends at 07:00 after the date before.
 */
export function dayOfReading(minutes: number, { ends, stamped }: WithinDay): number {
  const since = (minutes - (ends % DAY)) / DAY;
  const begun = stamped === "start" ? Math.floor(since) : Math.ceil(since) - 1;
  return ends % DAY <= DAY / 2 ? begun : begun + 1;
}

interface Reading extends RowRef {
  readonly minutes: number;
  readonly value: number;
}

/**
 * The readings of one variable of one entry as days: totals added, means averaged, minima and maxima taken, over all files, so
 * that a day may begin in one and end in the next. A day with fewer than `least` readings is missing; a total with some missing
 * is scaled up by readings due over readings had. Repeated times count once; of contradicting ones `rule` says which stands.
 */
export function daysOfReadings(
  blocks: readonly Block[],
  rule: DuplicateRule,
): { readonly block: Block; readonly findings: readonly DraftFinding[] } {
  const [model] = blocks;
  if (model.readings === undefined) throw new Error(`${model.variable} has no readings`);
  const { rule: within, offset } = model.readings;
  const bySite = readingsBySite(blocks);
  const sites = [...bySite.keys()].sort((a, b) => (a < b ? -1 : 1));
  const findings: DraftFinding[] = [];
  const days: { site: number; day: number; value: number; at: RowRef }[] = [];
  for (const [site, id] of sites.entries()) {
    const sorted = (bySite.get(id) ?? []).sort((a, b) => a.minutes - b.minutes);
    const { kept, findings: repeated } = withoutRepeats(sorted, rule, `${model.variable} at ${id}`);
    findings.push(...repeated);
    const told = { few: 0, scaled: 0, many: 0, first: undefined as Reading | undefined };
    for (let i = 0; i < kept.length; ) {
      const day = dayOfReading(kept[i].minutes, within);
      let j = i + 1;
      while (j < kept.length && dayOfReading(kept[j].minutes, within) === day) j++;
      const value = dayValue(kept.slice(i, j), model.kind, within, told);
      days.push({ site, day: day + offset, value, at: kept[i] });
      i = j;
    }
    findings.push(...partFindings(told, within, `${model.variable} at ${id}`, model.kind));
  }
  const places = {
    sources: Int32Array.from(days, ({ at }) => at.source),
    rows: Int32Array.from(days, ({ at }) => at.row),
  };
  const { readings: _, ...rest } = model;
  const block: Block = {
    ...rest,
    stations: { codes: Int32Array.from(days, ({ site }) => site), ids: sites },
    starts: Int32Array.from(days, ({ day }) => day),
    ends: Int32Array.from(days, ({ day }) => day + 1),
    raw: Float64Array.from(days, ({ value }) => value),
    places,
  };
  return { block, findings };
}

function readingsBySite(blocks: readonly Block[]): Map<string, Reading[]> {
  const bySite = new Map<string, Reading[]>();
  for (const block of blocks) {
    const { codes, ids } = block.stations;
    for (let row = 0; row < block.starts.length; row++) {
      const id = ids[typeof codes === "number" ? codes : codes[row]];
      if (block.starts[row] === NO_DAY || id === "" || Number.isNaN(block.raw[row])) continue;
      const list = bySite.get(id) ?? [];
      if (list.length === 0) bySite.set(id, list);
      const minutes = block.readings?.minutes[row] ?? Number.NaN;
      list.push({ ...placeOf(block, row), minutes, value: block.raw[row] });
    }
  }
  return bySite;
}

function withoutRepeats(
  sorted: readonly Reading[],
  rule: DuplicateRule,
  subject: string,
): { readonly kept: readonly Reading[]; readonly findings: readonly DraftFinding[] } {
  const kept: Reading[] = [];
  const tallies = new Map<"same" | "contradicting", { count: number; at: Reading }>();
  for (let i = 0; i < sorted.length; ) {
    let j = i + 1;
    while (j < sorted.length && sorted[j].minutes === sorted[i].minutes) j++;
    const differ = sorted.slice(i, j).some((one) => one.value !== sorted[i].value);
    if (j - i > 1) {
      const sort = differ ? "contradicting" : "same";
      const tally = tallies.get(sort);
      tallies.set(sort, { count: (tally?.count ?? 0) + 1, at: tally?.at ?? sorted[i + 1] });
    }
    if (!differ || rule.keep === "first") kept.push(sorted[i]);
    else if (rule.keep === "last") kept.push(sorted[j - 1]);
    i = j;
  }
  const findings = [...tallies].map(
    ([sort, { count, at }]): DraftFinding => ({
      kind: "duplicate",
      subject,
      message: `${countText(count, "time")} of ${subject} ${count === 1 ? "stands" : "stand"} in more than one row with ${
        sort === "same" ? "the same value; each counts once" : `contradicting values; keep: ${rule.keep}`
      }.`,
      at,
      value: String(at.value),
      count,
      remedy: "clocks that were put back repeat an hour; else remove the repeated rows",
    }),
  );
  return { kept, findings };
}

interface Told {
  few: number;
  scaled: number;
  many: number;
  first: Reading | undefined;
}

function dayValue(readings: readonly Reading[], kind: ValueKind, within: WithinDay, told: Told): number {
  const n = readings.length;
  if (n !== within.readings && told.first === undefined) told.first = readings[0];
  if (n > within.readings) told.many++;
  if (n < within.least) {
    told.few++;
    return Number.NaN;
  }
  const values = readings.map((one) => one.value);
  const sum = values.reduce((a, b) => a + b, 0);
  if (kind === "minimum") return values.reduce((a, b) => Math.min(a, b));
  if (kind === "maximum") return values.reduce((a, b) => Math.max(a, b));
  if (kind === "mean") return sum / n;
  if (n >= within.readings) return sum;
  told.scaled++;
  return (sum * within.readings) / n;
}

function partFindings(
  told: Told,
  within: WithinDay,
  subject: string,
  kind: ValueKind,
): readonly DraftFinding[] {
  if (told.first === undefined || told.few + told.scaled + told.many === 0) return [];
  const parts = [
    ...(told.few > 0
      ? [`${countText(told.few, "day")} with fewer than ${within.least} readings, read as missing`]
      : []),
    ...(told.scaled > 0 && kind === "total"
      ? [`${countText(told.scaled, "total")} of fewer than ${within.readings} readings, scaled up`]
      : []),
    ...(told.many > 0 ? [`${countText(told.many, "day")} with more than ${within.readings}`] : []),
  ];
  return [
    {
      kind: "part-day",
      subject,
      message: `${subject}: ${parts.join("; ")}. The first such day has a reading on ${isoDay(Math.floor(told.first.minutes / DAY))}.`,
      at: told.first,
      value: String(told.first.value),
      count: told.few + told.scaled + told.many,
      remedy: "check `readings` and `at least` under `within day`, and the clock",
    },
  ];
}
