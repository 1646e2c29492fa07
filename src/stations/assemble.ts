import { isoDay } from "../data/day.ts";
import type { Series } from "../data/series.ts";
import { countText } from "../data/words.ts";
import { InputError } from "../errors.ts";
import { settleAccumulated } from "./accumulated.ts";
import {
  type Block,
  type Cover,
  type DraftFinding,
  NO_DAY,
  placeOf,
  type RowRef,
  type Source,
} from "./block.ts";
import type { DuplicateRule } from "./options.ts";
import { convertUnit } from "./units.ts";

/** A series with the row that each of its values came from. */
export interface TracedSeries {
  readonly series: Series;
  readonly covers: Cover;
  readonly refs: readonly RefRun[];
  /** Per value: index into all rows of the variable's blocks. */
  readonly rows: RowIndex;
}

/** Row numbers one by one, or the first of rows that follow one another. */
export type RowIndex = Uint32Array | number;

export function rowAt(rows: RowIndex, i: number): number {
  return typeof rows === "number" ? rows + i : rows[i];
}

interface RefRun {
  readonly first: number;
  readonly block: Block;
}

/** The file and row of value i. */
export function refOf(traced: TracedSeries, i: number): RowRef {
  return locate(rowAt(traced.rows, i), traced.refs);
}

function runOf(row: number, refs: readonly RefRun[]): RefRun {
  let run = refs[0];
  for (const one of refs) if (one.first <= row) run = one;
  return run;
}

function locate(row: number, refs: readonly RefRun[]): RowRef {
  const { block, first } = runOf(row, refs);
  return placeOf(block, row - first);
}

/**
 * Merges all blocks of one variable into one series per station, sorted by start, values scaled and in the first block's
 * unit. Rows that repeat a station and period become one: a missing value gives way to a value, equal values are one, and
 * of contradicting values `rule` says which stands (first and last by the order of `records:`, files by code unit, rows).
 * Throws `stations.kinds-differ` and `stations.periods-overlap`.
 */
export function assembleVariable(
  blocks: readonly Block[],
  rule: DuplicateRule,
  sources: readonly Source[],
): { readonly traced: readonly TracedSeries[]; readonly findings: readonly DraftFinding[] } {
  const [{ variable, unit, kind, covers }] = blocks;
  for (const block of blocks)
    if (block.kind !== kind)
      throw new InputError({
        name: "stations.kinds-differ",
        expected: `${variable} to be a ${kind} in every records entry, as in the first`,
        found: `${block.kind} in ${sources[block.source].file}`,
        where: { cell: `records[${block.entry}].series.${variable}` },
        remedy: "give the other one a name of its own",
      });
  const gathered = gather(blocks, unit);
  const refs: RefRun[] = [];
  let first = 0;
  for (const block of blocks) {
    refs.push({ first, block });
    first += block.starts.length;
  }
  const findings: DraftFinding[] = [];
  const traced = gathered.map((rows) => {
    const sorted = sortRows(rows);
    const merged = mergeRepeats(sorted, rule, variable, refs, sources);
    findings.push(...merged.findings);
    const settled = settle(merged.rows, variable, refs);
    findings.push(...settled.findings);
    const kept = settled.rows;
    const files = rows.sources.map((source) => sources[source].file).sort((a, b) => (a < b ? -1 : 1));
    const series: Series = {
      site: rows.site,
      variable,
      unit,
      kind,
      starts: kept.starts,
      ends: kept.ends,
      values: kept.values,
      files: [...new Set(files)],
    };
    refuseOverlap(series);
    return {
      series,
      covers: blocks.every((block) => block.covers === covers) ? covers : "day",
      refs,
      rows: kept.rows,
    };
  });
  return { traced, findings };
}

/** Totals of several days are treated as their block says. */
function settle(rows: StationRows, variable: string, refs: readonly RefRun[]) {
  if (refs.every(({ block }) => block.accumulated === undefined)) return { rows, findings: [] };
  const settled = settleAccumulated(rows, variable, (row) => {
    const { block, first } = runOf(row, refs);
    const { marks, rule } = block.accumulated ?? {};
    return marks === undefined || marks[row - first] === 0 ? undefined : rule;
  });
  return {
    rows: { ...rows, ...settled.rows },
    findings: settled.findings.map(({ row, ...one }): DraftFinding => ({ ...one, at: locate(row, refs) })),
  };
}

interface StationRows {
  readonly site: string;
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  readonly values: Float64Array;
  readonly rows: RowIndex;
  /** Files that the rows came from, in the order read. */
  readonly sources: readonly number[];
}

/**
 * Rows of each station in order of file and row, stations by code unit; two passes: count, then place. Rows of one station
 * follow one another in most files: where all of them do, they are looked at where they are, and not copied.
 */
function gather(blocks: readonly Block[], unit: string): StationRows[] {
  const counts = new Map<string, { rows: number; runs: number }>();
  for (const block of blocks) {
    const { ids } = block.stations;
    const [perCode, runs] = [new Float64Array(ids.length), new Float64Array(ids.length)];
    forRuns(block, (code, from, to) => {
      perCode[code] += to - from;
      runs[code]++;
    });
    for (const [code, n] of perCode.entries()) {
      if (n === 0) continue;
      const before = counts.get(ids[code]) ?? { rows: 0, runs: 0 };
      counts.set(ids[code], { rows: before.rows + n, runs: before.runs + runs[code] });
    }
  }
  counts.delete("");
  const into = new Map<string, Gathered>();
  for (const site of [...counts.keys()].sort((a, b) => (a < b ? -1 : 1))) {
    const { rows, runs } = counts.get(site) ?? { rows: 0, runs: 0 };
    into.set(site, { site, n: rows, whole: runs === 1, at: 0, rows: undefined, sources: [] });
  }
  let first = 0;
  for (const block of blocks) {
    const targets = block.stations.ids.map((id) => into.get(id));
    const values = scaled(block, unit);
    forRuns(block, (code, from, to) => {
      const target = targets[code];
      if (target === undefined) return;
      place(target, block, values, from, to, first);
      if (block.places !== undefined)
        target.sources.push(...new Set(block.places.sources.subarray(from, to)));
      else if (target.sources.at(-1) !== block.source) target.sources.push(block.source);
    });
    first += block.starts.length;
  }
  return [...into.values()].map(({ site, rows, sources }) => {
    if (rows === undefined) throw new Error(`the rows of ${site} were counted and are gone`);
    return { site, ...rows, sources };
  });
}

interface Gathered {
  readonly site: string;
  readonly n: number;
  /** All rows follow one another in one block. */
  readonly whole: boolean;
  at: number;
  rows: Pick<StationRows, "starts" | "ends" | "values" | "rows"> | undefined;
  readonly sources: number[];
}

/** Puts the rows [from, to) of a block behind those that the station has already. */
function place(
  target: Gathered,
  { starts, ends }: Block,
  values: Float64Array,
  from: number,
  to: number,
  first: number,
): void {
  const { n, at } = target;
  if (target.whole) {
    const part = { starts: starts.subarray(from, to), ends: ends.subarray(from, to) };
    target.rows = { ...part, values: values.subarray(from, to), rows: first + from };
    return;
  }
  target.rows ??= {
    starts: new Int32Array(n),
    ends: new Int32Array(n),
    values: new Float64Array(n),
    rows: new Uint32Array(n),
  };
  const { rows } = target;
  // Short runs are copied by hand: a view costs more than a few numbers.
  if (to - from > 32) {
    rows.starts.set(starts.subarray(from, to), at);
    rows.ends.set(ends.subarray(from, to), at);
    rows.values.set(values.subarray(from, to), at);
  } else
    for (let i = from; i < to; i++) {
      rows.starts[at + i - from] = starts[i];
      rows.ends[at + i - from] = ends[i];
      rows.values[at + i - from] = values[i];
    }
  if (typeof rows.rows !== "number") for (let i = from; i < to; i++) rows.rows[at + i - from] = first + i;
  target.at += to - from;
}

/** Runs of rows [from, to) that have a date and one station. */
function forRuns(
  { starts, stations: { codes } }: Block,
  use: (code: number, from: number, to: number) => void,
): void {
  const n = starts.length;
  let from = 0;
  while (from < n) {
    if (starts[from] === NO_DAY) {
      from++;
      continue;
    }
    let to = from + 1;
    if (typeof codes === "number") while (to < n && starts[to] !== NO_DAY) to++;
    else while (to < n && codes[to] === codes[from] && starts[to] !== NO_DAY) to++;
    use(typeof codes === "number" ? codes : codes[from], from, to);
    from = to;
  }
}

/** Raw × scale, in the wanted unit. */
function scaled(block: Block, unit: string): Float64Array {
  const { raw, scale } = block;
  // Tenths are divided by 10, not multiplied by 0.1: 123 gives 12.3 and not 12.300000000000001.
  const parts = Math.round(1 / scale);
  const exact = Math.abs(parts * scale - 1) < 1e-12;
  const values = scale === 1 ? raw : raw.map((value) => (exact ? value / parts : value * scale));
  return block.unit === unit ? values : convertUnit(values, block.unit, unit, "reading");
}

/** By start; rows of one start keep their order. */
function sortRows(rows: StationRows): StationRows {
  const n = rows.starts.length;
  let sorted = true;
  for (let i = 1; i < n && sorted; i++) sorted = rows.starts[i] >= rows.starts[i - 1];
  if (sorted) return rows;
  let least = rows.starts[0];
  for (const start of rows.starts) if (start < least) least = start;
  // One number holds start and position (below 2^53 for 10^8 rows over 10^7 days), so the fast numeric sort is stable.
  const keys = Float64Array.from(rows.starts, (start, i) => (start - least) * n + i).sort();
  const order = Uint32Array.from(keys, (key) => key % n);
  return {
    site: rows.site,
    starts: Int32Array.from(order, (i) => rows.starts[i]),
    ends: Int32Array.from(order, (i) => rows.ends[i]),
    values: Float64Array.from(order, (i) => rows.values[i]),
    rows: Uint32Array.from(order, (i) => rowAt(rows.rows, i)),
    sources: rows.sources,
  };
}

interface Tally {
  count: number;
  firstAt: number;
  example: string;
}

function mergeRepeats(
  rows: StationRows,
  rule: DuplicateRule,
  variable: string,
  refs: readonly RefRun[],
  sources: readonly Source[],
): { readonly rows: StationRows; readonly findings: readonly DraftFinding[] } {
  const { starts, ends } = rows;
  const n = starts.length;
  let repeats = 0;
  for (let i = 1; i < n; i++) if (starts[i] === starts[i - 1] && ends[i] === ends[i - 1]) repeats++;
  if (repeats === 0) return { rows, findings: [] };
  const keep: number[] = [];
  const values: number[] = [];
  const tallies = new Map<string, Tally>();
  for (let i = 0; i < n; ) {
    let j = i + 1;
    while (j < n && starts[j] === starts[i] && ends[j] === ends[i]) j++;
    const finite: number[] = [];
    for (let k = i; k < j; k++) if (!Number.isNaN(rows.values[k])) finite.push(k);
    let stands = finite.length > 0 ? finite[0] : i;
    let value = rows.values[stands];
    if (j - i > 1) {
      const contradicts = finite.some((k) => rows.values[k] !== value);
      const places = Array.from({ length: j - i }, (_, k) => locate(rowAt(rows.rows, i + k), refs).source);
      const exception = rule.except.find((one) => places.some((source) => sources[source].file === one.file));
      const how = exception?.keep ?? rule.keep;
      const shown = finite.map((k) => rows.values[k]).join(" and ");
      if (contradicts && how === "last") {
        stands = finite[finite.length - 1];
        value = rows.values[stands];
      } else if (contradicts && how === "none") value = Number.NaN;
      const sort =
        exception !== undefined
          ? `excepted: ${exception.note}`
          : contradicts
            ? `contradicting ${how}`
            : "same";
      const tally = tallies.get(sort);
      if (tally === undefined)
        tallies.set(sort, { count: 1, firstAt: i + 1, example: `${isoDay(starts[i])}: ${shown}` });
      else tally.count++;
    }
    keep.push(stands);
    values.push(value);
    i = j;
  }
  return {
    rows: {
      site: rows.site,
      starts: Int32Array.from(keep, (i) => starts[i]),
      ends: Int32Array.from(keep, (i) => ends[i]),
      values: Float64Array.from(values),
      rows: Uint32Array.from(keep, (i) => rowAt(rows.rows, i)),
      sources: rows.sources,
    },
    findings: [...tallies].map(([sort, tally]) => duplicateFinding(sort, tally, variable, rows, refs)),
  };
}

function duplicateFinding(
  sort: string,
  tally: Tally,
  variable: string,
  rows: StationRows,
  refs: readonly RefRun[],
): DraftFinding {
  const subject = `${variable} at ${rows.site}`;
  const times = `${countText(tally.count, "period")} of ${subject} ${tally.count === 1 ? "stands" : "stand"} in more than one row`;
  const shared = {
    subject,
    at: locate(rowAt(rows.rows, tally.firstAt), refs),
    value: tally.example,
    count: tally.count,
  };
  if (sort.startsWith("excepted: "))
    return {
      kind: "excepted",
      ...shared,
      message: `${times}; the exception for this file applies (${sort.slice(10)}).`,
      remedy:
        "none needed while the exception holds that stands in the pipeline file under findings, duplicate",
    };
  if (sort === "same")
    return {
      kind: "duplicate",
      ...shared,
      message: `${times}, with the same value or with one value missing; each counts once.`,
      remedy:
        "remove the repeated rows, or say in the pipeline file, findings: { duplicate: { do: stop, except: [{ file: …, keep: first, note: … }] } }",
    };
  const outcome = sort.endsWith("none")
    ? "none of the values is used"
    : `the ${sort.split(" ")[1]} value stands`;
  return {
    kind: "duplicate",
    ...shared,
    message: `${times} with contradicting values; ${outcome}.`,
    remedy: "correct the file, or say in `findings.duplicate` which value to keep, with a note",
  };
}

function refuseOverlap(series: Series): void {
  for (let i = 1; i < series.starts.length; i++)
    if (series.starts[i] < series.ends[i - 1])
      throw new InputError({
        name: "stations.periods-overlap",
        expected: `periods of ${series.variable} at ${series.site} that do not overlap`,
        found: `one from ${isoDay(series.starts[i])} inside one from ${isoDay(series.starts[i - 1])} to ${isoDay(series.ends[i - 1] - 1)}`,
        where: { file: series.files.join(", ") },
        remedy: "daily and monthly values of one station need variables of their own; check `covers:`",
      });
}
