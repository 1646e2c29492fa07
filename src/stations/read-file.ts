import type { DuckDBConnection } from "@duckdb/node-api";
import { countText } from "../data/words.ts";
import type { Files } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import {
  type Block,
  type DraftFinding,
  NO_DAY,
  type Source,
  type StationColumn,
  stationAt,
} from "./block.ts";
import { compileDateFormat, recogniseFormats } from "./dates.ts";
import { dialectOf, isSheet, loadTable, loadText, type TableWish } from "./load-table.ts";
import type { LoadedTable } from "./loaded-table.ts";
import { placesIn, type SeenPlace } from "./moved.ts";
import type { DateColumn, RecordOptions, SeriesColumn, StationOf } from "./options.ts";
import { checkPacked } from "./packed.ts";
import { passFlags } from "./quality-flags.ts";
import { quickRead } from "./quick-read.ts";
import { type CodedColumn, type NumberColumn, type ReadColumns, readColumns } from "./read-columns.ts";
import { knownUnit, sameDimension } from "./units.ts";
import {
  coverOf,
  onlyRows,
  periodsOf,
  sameNumbers,
  type ValueColumn,
  valueColumns,
} from "./value-columns.ts";

/** More different odd texts than this are told as one finding. */
const MOST_ODD = 20;

export interface FileRead {
  readonly blocks: readonly Block[];
  readonly findings: readonly DraftFinding[];
  readonly places: readonly SeenPlace[];
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
  const station = options.layout === "wide" ? undefined : options.station;
  const own = station !== undefined && "column" in station ? station : undefined;
  const groups = groupsOf(options, columns, own);
  // Several variables may stand in one column, told apart by another one: it is read once.
  const numbers = columns.filter((one, j) => columns.findIndex((other) => sameNumbers(one, other)) === j);
  const wish: TableWish = {
    texts: groups.flat(),
    numbers,
    date: options.date,
    ...(options.table === undefined ? {} : { table: options.table }),
  };
  const { table, read } = await readTable(database, files, file, wish, groups, options.missing);
  const textsOf = (names: readonly string[]) =>
    read.texts[groups.findIndex((one) => one.join("\n") === names.join("\n"))];
  const dates = read.texts[0];
  const fixed = station === undefined || "column" in station ? undefined : fixedStation(station, file);
  const findings: DraftFinding[] = [
    ...refusedFindings(table),
    ...unitsRowFindings(table, numbers),
    ...dateFindings(dates, options.date, table, index),
    ...numbers.flatMap((column, j) => oddFindings(read.numbers[j], column, index, file)),
  ];
  const periods = periodsOf(dates, options.date);
  const blocks = columns.map((column): Block => {
    const number = numbers.findIndex((one) => sameNumbers(one, column));
    // Flags blank values out where they stand, which other variables of the same column must not see.
    const shared =
      column.quality !== undefined && columns.filter((one) => sameNumbers(one, column)).length > 1;
    const values = read.numbers[number].values;
    const raw = shared ? values.slice() : values;
    const only = column.only === undefined ? undefined : textsOf([column.only.column]);
    const placed = onlyRows(periods(column), only, column);
    if (column.across === "days across")
      findings.push(
        ...noSuchDay(periods(column).starts, raw, column, only, index, dates, options.date.format),
      );
    if (column.quality !== undefined)
      findings.push(...passFlags(raw, textsOf([column.quality.column]), column, index, file, placed.starts));
    const site = column.site ?? fixed;
    const ids = own === undefined ? undefined : textsOf([own.column]);
    const stations: StationColumn =
      site !== undefined || ids === undefined
        ? { codes: 0, ids: [site ?? ""] }
        : { codes: ids.codes, ids: ids.texts };
    return {
      source: index,
      entry,
      variable: column.variable,
      kind: column.kind,
      unit: column.unit,
      scale: column.scale,
      covers: coverOf(options),
      ...(column.limits === undefined ? {} : { limits: column.limits }),
      ...(column.accumulated === undefined
        ? {}
        : { accumulated: accumulatedMarks(textsOf([column.accumulated.column]), column.accumulated) }),
      stations,
      ...placed,
      raw,
    };
  });
  const places =
    own?.longitude === undefined || own.latitude === undefined
      ? []
      : placesIn(
          (row) => stationAt(blocks[0].stations, row),
          textsOf([own.longitude]),
          textsOf([own.latitude]),
          index,
        );
  return { blocks, findings, places, source: { file, lines: table.lines }, rows: table.rows };
}

/** The text columns to read, each group joined to one text: the date first. */
function groupsOf(
  { date }: RecordOptions,
  columns: readonly ValueColumn[],
  own: { readonly column: string; readonly longitude?: string; readonly latitude?: string } | undefined,
): readonly (readonly string[])[] {
  const names = [
    ...columns.flatMap(({ quality, only, accumulated }) =>
      [quality, only, accumulated].flatMap((one) => (one === undefined ? [] : [one.column])),
    ),
    ...[own?.column, own?.longitude, own?.latitude].filter((one) => one !== undefined),
  ];
  return [[date.column, ...(date.with ?? [])], ...[...new Set(names)].map((name) => [name])];
}

function accumulatedMarks(
  flags: CodedColumn,
  { flags: marks, rule }: NonNullable<SeriesColumn["accumulated"]>,
): NonNullable<Block["accumulated"]> {
  const marked = flags.texts.map((text) => (marks.includes(text) ? 1 : 0));
  return { marks: Uint8Array.from(flags.codes, (code) => marked[code]), rule };
}

/** Values that stand on a day their month does not have; rows whose date is no date at all are told elsewhere. */
function noSuchDay(
  starts: Int32Array,
  raw: Float64Array,
  column: ValueColumn,
  only: CodedColumn | undefined,
  source: number,
  dates: CodedColumn,
  format: string,
): DraftFinding[] {
  const parse = compileDateFormat(format);
  const meant = (row: number) =>
    only === undefined || column.only?.is.includes(only.texts[only.codes[row]]) === true;
  const rows = Array.from(starts.keys()).filter(
    (row) =>
      starts[row] === NO_DAY &&
      !Number.isNaN(raw[row]) &&
      meant(row) &&
      !Number.isNaN(parse(dates.texts[dates.codes[row]])),
  );
  const [first] = rows;
  if (first === undefined) return [];
  const told = dates.texts[dates.codes[first]];
  return [
    {
      kind: "bad-date",
      subject: column.variable,
      message: `${JSON.stringify(column.column)} holds a value of ${column.variable} for a day that ${told} does not have (${countText(rows.length, "row")}); not used.`,
      at: { source, row: first },
      value: String(raw[first]),
      count: rows.length,
      remedy: "correct the file, or declare the value missing",
    },
  ];
}

/** A table read the quick way where it is clean, else by way of `raw`, which finds out what is the matter. */
async function readTable(
  database: DuckDBConnection,
  files: Files,
  file: string,
  wish: TableWish,
  groups: readonly (readonly string[])[],
  missing: readonly string[],
): Promise<{ readonly table: LoadedTable; readonly read: ReadColumns }> {
  const slow = async (table: LoadedTable) => ({
    table,
    read: await readColumns(database, table, groups, wish.numbers.length, missing),
  });
  if (isSheet(file) || file.endsWith(".parquet")) return slow(await loadTable(database, files, file, wish));
  await checkPacked(files, file);
  const dialect = dialectOf(files, file, wish);
  const quick = await quickRead(database, files, file, wish, groups, missing, dialect);
  return quick ?? slow(await loadText(database, files, file, wish, dialect));
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
