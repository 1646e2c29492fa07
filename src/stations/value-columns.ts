import type { Day } from "../data/day.ts";
import { civil, dayOf, daysInMonth } from "../data/day.ts";
import { type Block, type Cover, NO_DAY } from "./block.ts";
import { compileDateFormat, compileStamp, coveredPeriod } from "./dates.ts";
import type { DateColumn, RecordOptions, SeriesColumn } from "./options.ts";
import type { CodedColumn } from "./read-columns.ts";
import { dayOfReading } from "./within-day.ts";

/** One value column of a file: whose it is and how it is read. */
export interface ValueColumn extends SeriesColumn {
  readonly variable: string;
  /** The station of the whole column (wide tables). */
  readonly site?: string;
  /** The month of the row's year, or the day of its month, that the column stands for, from 0 (calendar tables). */
  readonly slot?: number;
  readonly across?: "months across" | "days across";
}

export function valueColumns(options: RecordOptions): readonly ValueColumn[] {
  if (options.layout === "long")
    return Object.entries(options.series).map(([variable, column]) => ({ variable, ...column }));
  const { variable, unit, kind, day, scale, trace, limits, only } = options;
  const shared = {
    variable,
    unit,
    kind,
    day,
    scale,
    ...(trace === undefined ? {} : { trace }),
    ...(limits === undefined ? {} : { limits }),
    ...(only === undefined ? {} : { only }),
  };
  if (options.layout === "wide")
    return Object.entries(options.columns).map(([column, site]) => ({ ...shared, column, site }));
  const across = options.layout;
  return options.columns.map((column, slot) => ({ ...shared, column, slot, across }));
}

/** True if two variables are read from the same numbers. */
export function sameNumbers(a: ValueColumn, b: ValueColumn): boolean {
  return a.column === b.column && a.trace?.text === b.trace?.text && a.trace?.value === b.trace?.value;
}

/** What one value of the records stands for in the end. */
export function coverOf({ layout, date }: RecordOptions): Cover {
  if (layout === "months across") return "month";
  return layout === "days across" || date.covers === "reading" ? "day" : date.covers;
}

type Placed = Pick<Block, "starts" | "ends" | "readings">;

/** Start and end of every row for a value column; the pattern is applied once per distinct text. */
export function periodsOf(dates: CodedColumn, date: DateColumn): (column: ValueColumn) => Placed {
  const known = new Map<string, Placed>();
  return (column) => {
    const key = `${column.day} ${column.across ?? ""} ${column.slot ?? ""}`;
    const placed = known.get(key) ?? placeRows(dates, date, column);
    known.set(key, placed);
    return placed;
  };
}

function placeRows(dates: CodedColumn, date: DateColumn, column: ValueColumn): Placed {
  if (date.covers === "reading") return placeReadings(dates, date, column.day);
  const parse = compileDateFormat(date.format);
  const cover = date.covers;
  const periods = dates.texts.map((text) => {
    const day = parse(text);
    const nothing = { start: NO_DAY, end: NO_DAY };
    if (Number.isNaN(day)) return nothing;
    if (column.slot === undefined) return coveredPeriod(day + column.day, cover);
    return slotPeriod(day, column.slot, column.across === "months across", column.day) ?? nothing;
  });
  const startOf = Int32Array.from(periods, (one) => one.start);
  const endOf = Int32Array.from(periods, (one) => one.end);
  const { codes } = dates;
  const [starts, ends] = [new Int32Array(codes.length), new Int32Array(codes.length)];
  for (let i = 0; i < codes.length; i++) {
    starts[i] = startOf[codes[i]];
    ends[i] = endOf[codes[i]];
  }
  return { starts, ends };
}

/** The month `slot` of the year, or the day `slot` of the month, that a date lies in; undefined for a day it does not have. */
function slotPeriod(day: Day, slot: number, months: boolean, offset: number) {
  const { year, month } = civil(day);
  if (months) return coveredPeriod(dayOf(year, slot + 1, 1), "month");
  if (slot >= daysInMonth(year, month)) return undefined;
  return coveredPeriod(dayOf(year, month, slot + 1) + offset, "day");
}

function placeReadings(dates: CodedColumn, date: DateColumn, offset: number): Placed {
  const rule = date.within;
  if (rule === undefined) throw new Error("readings need to be told how they make days");
  const { read } = compileStamp(date.format);
  const minutesOf = Float64Array.from(dates.texts, (text) => {
    const stamp = read(text);
    return stamp === undefined ? Number.NaN : stamp.day * 1440 + stamp.minutes + rule.shift;
  });
  const minutes = Float64Array.from(dates.codes, (code) => minutesOf[code]);
  const starts = Int32Array.from(minutes, (one) =>
    Number.isNaN(one) ? NO_DAY : dayOfReading(one, rule) + offset,
  );
  const ends = starts.map((start) => (start === NO_DAY ? NO_DAY : start + 1));
  return { starts, ends, readings: { minutes, rule, offset } };
}

/** Leaves only the rows in which the telling column holds one of the texts. */
export function onlyRows(placed: Placed, telling: CodedColumn | undefined, { only }: ValueColumn): Placed {
  if (telling === undefined || only === undefined) return placed;
  const wanted = telling.texts.map((text) => only.is.includes(text));
  const keep = (days: Int32Array) => days.map((day, i) => (wanted[telling.codes[i]] ? day : NO_DAY));
  return { ...placed, starts: keep(placed.starts), ends: keep(placed.ends) };
}
