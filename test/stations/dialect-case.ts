import { expect } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import { placeText } from "../../src/errors.ts";
import type { LongRecords, RecordOptions, SeriesColumn, WideRecords } from "../../src/stations/options.ts";
import { readRecords } from "../../src/stations/read-records.ts";
import { folder } from "./memory-files.ts";

export const MM: SeriesColumn = { column: "rain", unit: "mm", kind: "total", day: 0, scale: 1 };
export const long = (over: Partial<LongRecords> = {}): LongRecords => ({
  layout: "long",
  files: ["*"],
  station: { column: "site" },
  date: { column: "day", format: "yyyy-MM-dd", covers: "day" },
  missing: [],
  series: { rain: MM },
  ...over,
});
export const wide = (over: Partial<WideRecords> = {}): WideRecords => ({
  layout: "wide",
  files: ["*"],
  date: { column: "day", format: "yyyy-MM-dd", covers: "day" },
  missing: [],
  variable: "rain",
  unit: "mm",
  kind: "total",
  day: 0,
  scale: 1,
  columns: { Ash: "Ash", Beck: "Beck" },
  ...over,
});

/** Files as real sources write them; `rows` is the expected table, one `station start value` a line. */
export interface Case {
  readonly name: string;
  readonly files: Readonly<Record<string, string | Uint8Array>>;
  readonly options?: RecordOptions;
  readonly rows?: readonly string[];
  /** `kind file:line count value` of each finding. */
  readonly findings?: readonly string[];
  readonly error?: string;
}

/** Reads a case and holds it to its expected table, or its expected error text. */
export async function holdCase({ files, options, rows, findings, error }: Case): Promise<void> {
  const reading = readRecords([options ?? long()], undefined, { keep: "first", except: [] }, folder(files));
  if (error !== undefined) {
    expect(
      await reading.then(
        () => "no error",
        (thrown: Error) => thrown.message,
      ),
    ).toBe(error);
    return;
  }
  const read = await reading;
  const table = read.series.flatMap((series) =>
    Array.from(series.starts, (start, i) => {
      const days = series.ends[i] - start;
      const period = days === 1 ? isoDay(start) : `${isoDay(start)}..${isoDay(series.ends[i] - 1)}`;
      return `${series.site} ${period} ${series.values[i]}`;
    }),
  );
  expect(table).toEqual(rows);
  const told = read.findings.map(
    (one) => `${one.kind} ${placeText(one.where)} ${one.count ?? 1} ${one.value}`,
  );
  if (findings !== undefined) expect(told).toEqual(findings);
}
