import type { RawFinding } from "../data/finding.ts";
import type { ValueKind } from "../data/series.ts";
import type { AccumulatedRule, DateColumn, WithinDay } from "./options.ts";

/** A row without a real date; it takes part in nothing. */
export const NO_DAY = -2_147_483_648;

/** What a value stands for, once readings within the day have become days. */
export type Cover = Exclude<DateColumn["covers"], "reading">;

/** What one column of one file holds of one variable; row i of every array is row i of the file. */
export interface Block {
  /** Index of the file among all that were read. */
  readonly source: number;
  /** Index of the `records:` entry. */
  readonly entry: number;
  readonly variable: string;
  readonly kind: ValueKind;
  readonly unit: string;
  readonly scale: number;
  readonly covers: Cover;
  /** The user's own least and greatest possible value, in `unit`. */
  readonly limits?: readonly [number, number];
  readonly stations: StationColumn;
  readonly starts: Int32Array;
  readonly ends: Int32Array;
  /** As written, before scale; NaN where missing. */
  readonly raw: Float64Array;
  /** Readings within the day, not made into days yet: minutes since 1970 of every row, shifted as `rule` says. */
  readonly readings?: { readonly minutes: Float64Array; readonly rule: WithinDay; readonly offset: number };
  /** 1 for a total of all days since the last value, and what becomes of it. */
  readonly accumulated?: { readonly marks: Uint8Array; readonly rule: AccumulatedRule };
  /** Where row i came from, if the rows are no longer those of one file. */
  readonly places?: { readonly sources: Int32Array; readonly rows: Int32Array };
}

/** The file and row that row i of a block came from. */
export function placeOf({ source, places }: Block, row: number): RowRef {
  return places === undefined ? { source, row } : { source: places.sources[row], row: places.rows[row] };
}

/** Ids by code; one code for all rows where the whole column is one station's. */
export interface StationColumn {
  readonly codes: Int32Array | number;
  readonly ids: readonly string[];
}

export function stationAt(stations: StationColumn, row: number): string {
  return stations.ids[typeof stations.codes === "number" ? stations.codes : stations.codes[row]];
}

/** A row of a file that was read, whose physical line is looked up only if a finding needs it. */
export interface RowRef {
  readonly source: number;
  readonly row: number;
}

/** A finding whose line is not known yet. */
export interface DraftFinding extends RawFinding {
  readonly at?: RowRef;
}

/** One file that was read. */
export interface Source {
  readonly file: string;
  readonly lines: (rows: readonly number[]) => Promise<readonly number[]>;
}

/** Puts file and true physical line into the findings, reading each file at most once. */
export async function placeFindings(
  drafts: readonly DraftFinding[],
  sources: readonly Source[],
): Promise<readonly RawFinding[]> {
  const wanted = new Map<number, Set<number>>();
  for (const { at } of drafts)
    if (at !== undefined) wanted.set(at.source, (wanted.get(at.source) ?? new Set()).add(at.row));
  const lines = new Map<string, number>();
  for (const [source, rows] of wanted) {
    const sorted = [...rows].sort((a, b) => a - b);
    const found = await sources[source].lines(sorted);
    for (const [i, row] of sorted.entries()) lines.set(`${source}:${row}`, found[i]);
  }
  return drafts.map(({ at, ...finding }) => {
    if (at === undefined) return finding;
    const line = lines.get(`${at.source}:${at.row}`);
    const where = { ...finding.where, file: sources[at.source].file };
    return { ...finding, where: line === undefined ? where : { ...where, line } };
  });
}
