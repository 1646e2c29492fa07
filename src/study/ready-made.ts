import { columnIndex, readCsv } from "../data/csv.ts";
import type { RawFinding } from "../data/finding.ts";
import type { Interval } from "../data/occasion.ts";
import type { Files } from "../effects/effects.ts";
import { cellError, numberCell } from "./numbers.ts";
import type { ReadyMadeOptions } from "./options.ts";

export interface ReadyMadeColumn {
  readonly name: string;
  readonly unit: string;
  readonly file: string;
  /** One per interval; NaN where the cell is empty or the interval has no row. */
  readonly values: Float64Array;
}

export interface ReadyMadeResult {
  readonly columns: readonly ReadyMadeColumn[];
  readonly findings: readonly RawFinding[];
}

/**
 * Reads values that already stand one per interval, in any order of rows; an empty cell or an absent row is missing,
 * and a finding. Throws `study.unknown-interval`, `study.interval-repeated`, `study.not-a-number`.
 */
export async function readReadyMade(
  options: ReadyMadeOptions,
  intervals: readonly Interval[],
  files: Files,
): Promise<ReadyMadeResult> {
  const table = readCsv(await files.readText(options.file), options.file);
  const key = columnIndex(table, options.interval, "ready-made.interval");
  const names = Object.keys(options.columns);
  const columns = names.map((name) => columnIndex(table, name, "ready-made.columns"));
  const values = names.map(() => new Float64Array(intervals.length).fill(Number.NaN));
  const lines = new Map<number, number>();
  table.rows.forEach(({ line, cells }, row) => {
    const t = intervals.findIndex((one) => one.name === cells[key]);
    const before = lines.get(t);
    if (t < 0)
      throw cellError(table, row, key, {
        name: "study.unknown-interval",
        ...intervalAdvice(cells[key], intervals),
      });
    if (before !== undefined)
      throw cellError(table, row, key, {
        name: "study.interval-repeated",
        expected: `each interval in one row (see line ${before})`,
        remedy: "keep one of the two rows",
      });
    lines.set(t, line);
    columns.forEach((column, k) => {
      values[k][t] = numberCell(table, row, column);
    });
  });
  const findings = names.flatMap((name, k): RawFinding[] => {
    const missing = intervals.filter((_, t) => Number.isNaN(values[k][t]));
    if (missing.length === 0) return [];
    return [
      {
        kind: "gap",
        subject: name,
        message: `${name} has no value for ${missing.length} of ${intervals.length} intervals: ${missing.map((one) => one.name).join(", ")}`,
        where: { file: options.file },
        count: missing.length,
        remedy: "fill in the values; a column with a gap may leave the matrix (prepare.incomplete)",
      },
    ];
  });
  return {
    columns: names.map((name, k) => ({
      name,
      unit: options.columns[name].unit,
      file: options.file,
      values: values[k],
    })),
    findings,
  };
}

/** What to write instead. An interval that is split into years is not one of them, but its years are. */
function intervalAdvice(found: string, intervals: readonly Interval[]) {
  const years = intervals.filter((one) => one.name.startsWith(`${found}, year `));
  if (found !== "" && years.length > 0)
    return {
      expected: `a row for each of its years: ${years.map(quoted).join(" and ")}`,
      remedy:
        "survival.split cuts this interval into years; name each year so and give it a value of its own",
    };
  return {
    expected: `the name of an interval, from ${quoted(intervals[0])} to ${quoted(intervals.at(-1))}`,
    remedy: "name the interval by its two occasions, or take the row out",
  };
}

const quoted = (interval: Interval | undefined) => JSON.stringify(interval?.name ?? "");
