import type { DuckDBConnection } from "@duckdb/node-api";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import {
  type Block,
  countText,
  type DraftFinding,
  NO_DAY,
  type Source,
  type StationColumn,
} from "./block.ts";
import { compileDateFormat, coveredPeriod, recogniseFormats } from "./dates.ts";
import { loadTable } from "./load-table.ts";
import type { LoadedTable } from "./loaded-table.ts";
import type { DateColumn, RecordOptions, SeriesColumn, StationOf } from "./options.ts";
import { passFlags } from "./quality-flags.ts";
import { type CodedColumn, type NumberColumn, readColumns } from "./read-columns.ts";
import { knownUnit, sameDimension } from "./units.ts";

/** More different odd texts than this are told as one finding. */
const MOST_ODD = 20;

/** One value column of a file: whose it is and how it is read. */
interface ValueColumn extends SeriesColumn {
  readonly variable: string;
  /** The station of the whole column (wide tables). */
  readonly site?: string;
}

export interface FileRead {
  readonly blocks: readonly Block[];
  readonly findings: readonly DraftFinding[];
  readonly source: Source;
  readonly rows: number;
}

/** Reads one file of a records entry. `index` is its number among all files. */
export async function readFile(
  database: DuckDBConnection,
  files: Files,
  options: RecordOptions,
  entry: number,
  file: string,
  index: number,
): Promise<FileRead> {
  const columns = valueColumns(options);
  const stationColumn =
    options.layout === "long" && "column" in options.station ? options.station.column : undefined;
  const dateColumns = [options.date.column, ...(options.date.with ?? [])];
  const flagColumns = [
    ...new Set(columns.flatMap(({ quality }) => (quality === undefined ? [] : [quality.column]))),
  ];
  const texts = [
    dateColumns,
    ...flagColumns.map((name) => [name]),
    ...(stationColumn === undefined ? [] : [[stationColumn]]),
  ];
  const table = await loadTable(database, files, file, texts.flat(), columns, options.date.column);
  const read = await readColumns(database, table, texts, columns.length, options.missing);
  const dates = read.texts[0];
  const ids = read.texts[texts.length - 1];
  const refusals = columns.flatMap((column, j) => {
    const flags = read.texts[1 + flagColumns.indexOf(column.quality?.column ?? "")];
    return column.quality === undefined ? [] : passFlags(read.numbers[j].values, flags, column, index, file);
  });
  const findings: DraftFinding[] = [
    ...refusedFindings(table),
    ...unitsRowFindings(table, columns),
    ...dateFindings(dates, options.date, table, index),
    ...refusals,
    ...columns.flatMap((column, j) => oddFindings(read.numbers[j], column, index, file)),
  ];
  const fixed = options.layout === "long" ? fixedStation(options.station, file) : undefined;
  const periods = new Map<number, Pick<Block, "starts" | "ends">>();
  const blocks = columns.map((column, j): Block => {
    const known = periods.get(column.day) ?? periodColumns(dates, options.date, column.day);
    periods.set(column.day, known);
    const site = column.site ?? fixed;
    const stations: StationColumn =
      site === undefined ? { codes: ids.codes, ids: ids.texts } : { codes: 0, ids: [site] };
    return {
      source: index,
      entry,
      variable: column.variable,
      kind: column.kind,
      unit: column.unit,
      scale: column.scale,
      covers: options.date.covers,
      ...(column.limits === undefined ? {} : { limits: column.limits }),
      stations,
      ...known,
      raw: read.numbers[j].values,
    };
  });
  return { blocks, findings, source: { file, lines: table.lines }, rows: table.rows };
}

function valueColumns(options: RecordOptions): readonly ValueColumn[] {
  if (options.layout === "long")
    return Object.entries(options.series).map(([variable, column]) => ({ variable, ...column }));
  const { variable, unit, kind, day, scale } = options;
  return Object.entries(options.columns).map(([column, site]) => ({
    variable,
    column,
    unit,
    kind,
    day,
    scale,
    site,
  }));
}

/** The station that a whole file belongs to, by `always` or from its name by a pattern with {id}. */
function fixedStation(station: StationOf, file: string): string | undefined {
  if ("column" in station) return undefined;
  if ("always" in station) return station.always;
  const base = file.slice(file.lastIndexOf("/") + 1);
  const plain = (text: string) => text.replace(/[.*+?^${}()|[\]\\]/g, "\\$&");
  const [before, after] = station.name.split("{id}");
  const pattern = new RegExp(`^${plain(before)}(.+?)${plain(after ?? "")}(?:\\.[A-Za-z]+(?:\\.gz)?)?$`);
  const match = station.name.includes("{id}") ? pattern.exec(base) : null;
  if (match !== null) return match[1];
  throw new InputError({
    name: "stations.name-pattern",
    expected: `a file name like ${JSON.stringify(station.name)}, {id} being the station`,
    found: JSON.stringify(base),
    where: { file },
    remedy: "change `station: { name: … }`, or narrow `files:` to the files that follow the pattern",
  });
}

/** Start and end of every row; the pattern is applied once per distinct text. */
function periodColumns(dates: CodedColumn, date: DateColumn, offset: number): Pick<Block, "starts" | "ends"> {
  const parse = compileDateFormat(date.format);
  const periods = dates.texts.map((text) => {
    const day = parse(text);
    return Number.isNaN(day) ? { start: NO_DAY, end: NO_DAY } : coveredPeriod(day + offset, date.covers);
  });
  const startOf = Int32Array.from(periods, (one) => one.start);
  const endOf = Int32Array.from(periods, (one) => one.end);
  return { starts: dates.codes.map((code) => startOf[code]), ends: dates.codes.map((code) => endOf[code]) };
}

function dateFindings(
  dates: CodedColumn,
  date: DateColumn,
  table: LoadedTable,
  source: number,
): DraftFinding[] {
  const parse = compileDateFormat(date.format);
  const bad = new Set<number>();
  for (const [code, text] of dates.texts.entries()) if (Number.isNaN(parse(text))) bad.add(code);
  if (bad.size === 0) return [];
  if (bad.size === dates.texts.length) throw noDate(dates, date, table);
  const tallies = new Map<number, { count: number; row: number }>();
  for (let row = 0; row < dates.codes.length; row++) {
    const code = dates.codes[row];
    if (!bad.has(code)) continue;
    const tally = tallies.get(code);
    if (tally === undefined) tallies.set(code, { count: 1, row });
    else tally.count++;
  }
  return limited([...tallies], (_, tally) => tally.count).map(
    ({ item: [code, { count, row }], others, total }) => ({
      kind: "bad-date" as const,
      subject: table.file,
      message:
        others > 0
          ? `${countText(total, "row")} more with ${others} other texts that are no dates of the form ${date.format}; not used.`
          : `${JSON.stringify(dates.texts[code])} is no date of the form ${date.format} (${countText(count, "row")}); not used.`,
      at: { source, row },
      value: dates.texts[code],
      count: others > 0 ? total : count,
      remedy: "correct the date in the file, or the pattern in `date.format`",
    }),
  );
}

function noDate(dates: CodedColumn, date: DateColumn, table: LoadedTable): InputError {
  const like = recogniseFormats(dates.texts.filter((text) => text !== "").slice(0, 200));
  return new InputError({
    name: "stations.no-date-matches",
    expected: `dates of the form ${date.format} in the column ${JSON.stringify(date.column)}`,
    found: `${JSON.stringify(dates.texts[dates.codes[0]])} and no row that matches`,
    where: { file: table.file, line: table.dialect.skip + 1 },
    remedy:
      like.length > 0
        ? `they look like ${like.join(" or ")}: write that as \`date.format\``
        : "write the pattern of the file as `date.format`, e.g. dd.MM.yyyy",
  });
}

function oddFindings(
  numbers: NumberColumn,
  column: ValueColumn,
  source: number,
  file: string,
): DraftFinding[] {
  const entries = numbers.odd.map((odd) => [0, odd] as const);
  return limited(entries, (_, odd) => odd.count).map(({ item: [, odd], others, total }) => ({
    kind: "bad-value" as const,
    subject:
      column.site === undefined ? `${column.variable} in ${file}` : `${column.variable} at ${column.site}`,
    message:
      others > 0
        ? `${countText(total, "row")} more of the column ${JSON.stringify(column.column)} with ${others} other texts that are no numbers; read as missing.`
        : `The column ${JSON.stringify(column.column)} holds ${JSON.stringify(odd.text)}, which is no number, in ${countText(odd.count, "row")}; read as missing.`,
    at: { source, row: odd.firstRow },
    value: odd.text,
    count: others > 0 ? total : odd.count,
    remedy: `declare it if it means missing: \`missing: [${JSON.stringify(odd.text)}]\`, or correct the file`,
  }));
}

/** At most MOST_ODD items one by one; the last one stands for all others. */
function limited<A, B>(
  items: readonly (readonly [A, B])[],
  count: (a: A, b: B) => number,
): { item: readonly [A, B]; others: number; total: number }[] {
  if (items.length <= MOST_ODD) return items.map((item) => ({ item, others: 0, total: 0 }));
  const rest = items.slice(MOST_ODD - 1);
  const total = rest.reduce((sum, [a, b]) => sum + count(a, b), 0);
  return items
    .slice(0, MOST_ODD)
    .map((item, i) =>
      i < MOST_ODD - 1 ? { item, others: 0, total: 0 } : { item, others: rest.length, total },
    );
}

function refusedFindings(table: LoadedTable): DraftFinding[] {
  const real = table.refused.filter((one) => one.text.trim() !== "");
  if (real.length === 0) return [];
  const [{ line, text, why }] = real;
  return [
    {
      kind: "bad-value",
      subject: table.file,
      message: `${countText(real.length, "row")} could not be read and ${real.length === 1 ? "is" : "are"} not used; the first has ${why}.`,
      where: { file: table.file, line },
      value: text.slice(0, 200),
      count: real.length,
      remedy: "mend the row: a cell that holds the separator must be quoted, a short row filled up",
    },
  ];
}

/** A row of units beneath the header that contradicts the declared ones. */
function unitsRowFindings(table: LoadedTable, columns: readonly ValueColumn[]): DraftFinding[] {
  const { units, header, headerLine } = table.dialect;
  if (units === undefined) return [];
  return columns.flatMap((column) => {
    const written = units[header.indexOf(column.column)].replace(/^[[(]|[\])]$/g, "");
    if (written === "" || written === column.unit || !knownUnit(written)) return [];
    const differs = sameDimension(written, column.unit) ? "another unit" : "a unit of another dimension";
    return [
      {
        kind: "unit" as const,
        subject: column.variable,
        message: `The file's row of units says ${written} for ${JSON.stringify(column.column)}, ${differs} than the declared ${column.unit}; the declared one is used.`,
        where: { file: table.file, line: headerLine + 1 },
        value: written,
        remedy: `write \`unit: ${written}\`, or accept it if the file is wrong`,
      },
    ];
  });
}
