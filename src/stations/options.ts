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
  /** What one row stands for; `reading`: one of several within a day, which are made into days as `within` says. */
  readonly covers: "day" | "month" | "year" | "dekad" | "reading";
  readonly within?: WithinDay;
}

/** How readings within the day become one value per day: totals are added, means averaged, extremes taken. */
export interface WithinDay {
  /** Minutes after midnight at which a day ends; it is named after the date that holds most of it (of equal halves the first). */
  readonly ends: number;
  /** Whether a time is that of the beginning or of the end of what was measured: a reading at the boundary itself. */
  readonly stamped: "start" | "end";
  /** Minutes added to every written time first, e.g. 60 from UTC to the time one hour ahead. */
  readonly shift: number;
  /** Readings that make a whole day, and the fewest that make one that counts. */
  readonly readings: number;
  readonly least: number;
}

/**
 * Where the station's id stands: in a column (its coordinates perhaps beside it, which must not change), the same for every
 * row, or in the file name by a pattern with {id}.
 */
export type StationOf =
  | { readonly column: string; readonly longitude?: string; readonly latitude?: string }
  | { readonly always: string }
  | { readonly name: string };

/** How a table is written, where the guess from its first lines does not hold. */
export interface TableOptions {
  readonly delimiter?: "comma" | "semicolon" | "tab" | "bar" | "blanks";
  readonly decimal?: "point" | "comma";
  readonly encoding?: "utf-8" | "utf-16le" | "utf-16be" | "windows-1252";
  /** The line (row of a sheet) of the header, from 1; with `headerRows` the first of them. */
  readonly headerRow?: number;
  /** Several header rows are joined by blanks, a merged cell standing for all columns below it. */
  readonly headerRows?: number;
  /** What a line of comment begins with; "none" if no line is one. */
  readonly comment?: string;
  /** Whether a row of units stands below the header. */
  readonly unitsRow?: boolean;
  /** Sheet of an Excel file by name, or by number from 1. */
  readonly sheet?: string | number;
}

/** How the values of one variable are read, wherever they stand. */
export interface ValueReading {
  readonly unit: string;
  readonly kind: ValueKind;
  /** Days to add to the written date: −1 if rain read in the morning belongs to the day before. */
  readonly day: number;
  /** Multiplied with every value before the unit is read (e.g. 0.1 for tenths); 1 by default. */
  readonly scale: number;
  /** A text that stands for an amount too small to measure, and the value it is given, as if written in its place. */
  readonly trace?: { readonly text: string; readonly value: number };
  /** Least and greatest possible value, in the column's unit, instead of the usual limits. */
  readonly limits?: readonly [number, number];
  /** Only the rows in which this column holds one of these texts (tables with the variable's name in a column). */
  readonly only?: { readonly column: string; readonly is: readonly string[] };
}

export interface SeriesColumn extends ValueReading {
  readonly column: string;
  /** A column of quality flags and the flags whose values pass; all others are read as missing, and counted. */
  readonly quality?: { readonly column: string; readonly pass: readonly string[] };
  /** Flags that mark a total as that of all days since the last value, and what becomes of it. */
  readonly accumulated?: {
    readonly column: string;
    readonly flags: readonly string[];
    readonly rule: AccumulatedRule;
  };
}

/** `spread` evenly over its days, `drop` (missing), or `keep` on the day it is written at. */
export type AccumulatedRule = "spread" | "drop" | "keep";

/** What all kinds of records have. */
interface RecordsShared {
  readonly files: readonly string[];
  readonly date: DateColumn;
  readonly missing: readonly string[];
  readonly table?: TableOptions;
}

/** Long: a row per station and date, a column per variable. */
export interface LongRecords extends RecordsShared {
  readonly layout: "long";
  readonly station: StationOf;
  readonly series: Readonly<Record<string, SeriesColumn>>;
}

/** Wide: a row per date, a column per station, one variable. */
export interface WideRecords extends RecordsShared, ValueReading {
  readonly layout: "wide";
  readonly variable: string;
  /** Column → station id. */
  readonly columns: Readonly<Record<string, string>>;
}

/** Calendar: a row per year and a column per month, or a row per month and a column per day; one variable. */
export interface CalendarRecords extends RecordsShared, ValueReading {
  readonly layout: "months across" | "days across";
  readonly station: StationOf;
  readonly variable: string;
  /** January to December, or day 1 to day 31 in order. */
  readonly columns: readonly string[];
}

export type RecordOptions = LongRecords | WideRecords | CalendarRecords;

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
