import type { ValueKind } from "../data/series.ts";

/** `stations:` the list of stations. */
export interface StationListOptions {
  readonly file: string;
  readonly id: string;
  readonly name?: string;
  readonly longitude?: string;
  readonly latitude?: string;
  readonly elevation?: string;
}

export interface DateColumn {
  readonly column: string;
  /** Further columns of a date that is split, joined to the first by blanks: `yyyy M d` for year, month and day. */
  readonly with?: readonly string[];
  /** Unicode date pattern (yyyy, MM, dd, D for the day of the year), e.g. `dd.MM.yyyy`, `yyyy-MM`. */
  readonly format: string;
  /** What one row stands for. */
  readonly covers: "day" | "month" | "year" | "dekad";
}

/** Where the station's id stands: in a column, the same for every row, or in the file name by a pattern with {id}. */
export type StationOf = { readonly column: string } | { readonly always: string } | { readonly name: string };

export interface SeriesColumn {
  readonly column: string;
  readonly unit: string;
  readonly kind: ValueKind;
  /** Days to add to the written date: −1 if rain read in the morning belongs to the day before. */
  readonly day: number;
  /** Multiplied with every value before the unit is read (e.g. 0.1 for tenths); 1 by default. */
  readonly scale: number;
  /** A text that stands for an amount too small to measure, and the value it is given, as if written in its place. */
  readonly trace?: { readonly text: string; readonly value: number };
  /** A column of quality flags and the flags whose values pass; all others are read as missing, and counted. */
  readonly quality?: { readonly column: string; readonly pass: readonly string[] };
  /** Least and greatest possible value, in the column's unit, instead of the usual limits. */
  readonly limits?: readonly [number, number];
}

/** Long: a row per station and date, a column per variable. */
export interface LongRecords {
  readonly layout: "long";
  readonly files: readonly string[];
  readonly station: StationOf;
  readonly date: DateColumn;
  readonly missing: readonly string[];
  readonly series: Readonly<Record<string, SeriesColumn>>;
}

/** Wide: a row per date, a column per station, one variable. */
export interface WideRecords {
  readonly layout: "wide";
  readonly files: readonly string[];
  readonly date: DateColumn;
  readonly missing: readonly string[];
  readonly variable: string;
  readonly unit: string;
  readonly kind: ValueKind;
  readonly day: number;
  readonly scale: number;
  /** Column → station id. */
  readonly columns: Readonly<Record<string, string>>;
}

export type RecordOptions = LongRecords | WideRecords;

/** What to do with rows that repeat a station and day. */
export interface DuplicateRule {
  /** Which one of contradicting rows stands where the policy lets the run go on. */
  readonly keep: "first" | "last" | "none";
  readonly except: readonly {
    readonly file: string;
    readonly keep: "first" | "last" | "none";
    readonly note: string;
  }[];
}
