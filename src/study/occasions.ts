import { columnIndex, readCsv, type TextTable } from "../data/csv.ts";
import { addMonths, type Day, isoDay } from "../data/day.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Interval, Occasion } from "../data/occasion.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { dayReader } from "./day-format.ts";
import { cellError, numberCell } from "./numbers.ts";
import type { OccasionOptions } from "./options.ts";

export interface OccasionResult {
  readonly occasions: readonly Occasion[];
  readonly intervals: readonly Interval[];
  readonly findings: readonly RawFinding[];
}

/** A length this near to a whole number of years counts as that number under `whole years`. */
const WHOLE_YEAR_DAYS = 18;

/**
 * Reads the occasions, one row each, in order of time, and the intervals between their mid-dates (methods §1).
 * Throws `study.occasion-date`, `study.occasion-ends-early`, `study.occasion-order`, `study.occasion-overlap`,
 * `study.occasion-name`, `study.effort` and `study.too-few-occasions`.
 */
export async function readOccasions(options: OccasionOptions, files: Files): Promise<OccasionResult> {
  const table = readCsv(await files.readText(options.file), options.file);
  const at = {
    name: columnIndex(table, options.name, "occasions.name"),
    start: columnIndex(table, options.start, "occasions.start"),
    end: columnIndex(table, options.end, "occasions.end"),
    effort: options.effort === undefined ? -1 : columnIndex(table, options.effort, "occasions.effort"),
  };
  const read = dayReader(options.format, "occasions.format");
  const day = (row: number, column: number): Day => {
    const value = read(table.rows[row].cells[column]);
    if (!Number.isNaN(value)) return value;
    throw cellError(table, row, column, {
      name: "study.occasion-date",
      expected: `a date written as ${options.format}`,
      remedy: "mend the date, or state how dates are written under occasions.format",
    });
  };
  const occasions = table.rows.map((row, index): Occasion => {
    const first = day(index, at.start);
    const last = day(index, at.end);
    const effort = at.effort < 0 ? Number.NaN : effortOf(table, index, at.effort);
    return { index, name: row.cells[at.name], first, last, effort };
  });
  checkNames(table, at.name);
  checkTimes(table, occasions, at.start, at.end);
  if (occasions.length < 2)
    throw new InputError({
      name: "study.too-few-occasions",
      expected: "at least 2 occasions, so that there is an interval between them",
      found: `${occasions.length} ${occasions.length === 1 ? "occasion" : "occasions"}`,
      where: { file: options.file },
      remedy: "add the missing rows: one for each visit",
    });
  return { occasions, intervals: intervalsBetween(occasions, options.lengths), findings: [] };
}

function effortOf(table: TextTable, row: number, column: number): number {
  const value = numberCell(table, row, column);
  if (Number.isNaN(value) || value > 0) return value;
  throw cellError(table, row, column, {
    name: "study.effort",
    expected: "an effort above 0",
    remedy: "leave the cell empty if the effort is not known, or drop the occasion if nobody looked",
  });
}

/** Names must be there and differ: intervals, captures and ready-made values are told apart by them. */
function checkNames(table: TextTable, column: number): void {
  const lines = new Map<string, number>();
  table.rows.forEach(({ line, cells }, row) => {
    const name = cells[column];
    const before = lines.get(name);
    if (name !== "" && before === undefined) {
      lines.set(name, line);
      return;
    }
    throw cellError(table, row, column, {
      name: "study.occasion-name",
      expected: before === undefined ? "a name for the occasion" : `a name of its own (see line ${before})`,
      remedy: "give each occasion its own name, e.g. its year",
    });
  });
}

function checkTimes(table: TextTable, occasions: readonly Occasion[], start: number, end: number): void {
  occasions.forEach((one, row) => {
    if (one.last < one.first)
      throw cellError(table, row, end, {
        name: "study.occasion-ends-early",
        expected: `a last day on or after the first, ${isoDay(one.first)}`,
        remedy: "swap the two dates or mend the wrong one; both days belong to the occasion",
      });
    if (row === 0) return;
    const before = occasions[row - 1];
    const line = table.rows[row - 1].line;
    if (one.first < before.first)
      throw cellError(table, row, start, {
        name: "study.occasion-order",
        expected: `occasions in order of time, this one after ${isoDay(before.last)} (line ${line})`,
        remedy: "sort the rows by date",
      });
    if (one.first <= before.last)
      throw cellError(table, row, start, {
        name: "study.occasion-overlap",
        expected: `a first day after the last day of the occasion before, ${isoDay(before.last)} (line ${line})`,
        remedy: "mend the dates or join the two occasions: a day belongs to one occasion only",
      });
  });
}

/** The mid-date: the day that holds the middle of the occasion's days, both ends included. */
export function midDate(occasion: Occasion): Day {
  return Math.floor((occasion.first + occasion.last + 1) / 2);
}

export function intervalName(before: Occasion, after: Occasion): string {
  return `${before.name} to ${after.name}`;
}

export function intervalsBetween(
  occasions: readonly Occasion[],
  lengths: OccasionOptions["lengths"],
): readonly Interval[] {
  return occasions.slice(1).map((after, index) => {
    const before = occasions[index];
    const [start, end] = [midDate(before), midDate(after)];
    return {
      index,
      name: intervalName(before, after),
      start,
      end,
      length: yearsBetween(start, end, lengths),
    };
  });
}

/**
 * Years from `start` to `end`: whole anniversaries plus the remaining days / 365.25; under `whole years` a length
 * within 18 days of n anniversaries, n ≥ 1, is n (methods §1). The anniversary of 29 February is 28 February in
 * common years.
 */
export function yearsBetween(start: Day, end: Day, lengths: OccasionOptions["lengths"]): number {
  const anniversary = (years: number) => addMonths(start, 12 * years);
  const near = Math.round((end - start) / 365.25);
  if (lengths === "whole years" && near >= 1 && Math.abs(end - anniversary(near)) <= WHOLE_YEAR_DAYS)
    return near;
  const whole = anniversary(near) <= end ? near : near - 1;
  return whole + (end - anniversary(whole)) / 365.25;
}
