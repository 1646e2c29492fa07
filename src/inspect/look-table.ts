import type { RawFinding } from "../data/finding.ts";
import { type Files, silentProgress } from "../effects/effects.ts";
import { withDatabase } from "../stations/database.ts";
import type { Encoding } from "../stations/dialect.ts";
import { loadTable } from "../stations/load-table.ts";
import type { RefusedRow } from "../stations/loaded-table.ts";
import type { RecordOptions, SeriesColumn } from "../stations/options.ts";
import { readRecords } from "../stations/read-records.ts";
import { type ColumnFacts, columnFacts } from "./column-facts.ts";
import { guessRoles, guessValue, type Role, type TableKind } from "./guess-roles.ts";
import { monthColumns, stanzaFor, stem } from "./stanza.ts";

export interface ColumnLook extends ColumnFacts {
  readonly role: Role;
}

/** What `look` tells of a text table. */
export interface TableLook {
  readonly path: string;
  readonly encoding: Encoding;
  readonly bom: boolean;
  readonly delimiter: string;
  readonly decimal: "." | ",";
  readonly headerLine: number;
  readonly units: readonly string[] | undefined;
  readonly rows: number;
  readonly refused: readonly RefusedRow[];
  readonly columns: readonly ColumnLook[];
  readonly kind: TableKind;
  /** Gaps per station, repeats, suspicious values: what a run with the stanza (before `missing:`) would find. */
  readonly findings: readonly RawFinding[];
  /** The part of a pipeline file that reads the table. */
  readonly stanza: string;
}

/**
 * Looks at a table: how it is written, what each column holds and is probably for, and, for records, what a run would
 * find. Everything is a guess to be checked; nothing is changed. Throws the table errors of the stations room.
 */
export async function lookTable(path: string, files: Files): Promise<TableLook> {
  const { table, facts } = await withDatabase(async (database) => {
    const table = await loadTable(database, files, path, { texts: [], numbers: [] });
    return { table, facts: await columnFacts(database, table) };
  });
  const { roles, kind } = guessRoles(facts, table.rows);
  const records = recordsFor(path, kind, facts, roles);
  const read =
    records === undefined || table.rows === 0
      ? undefined
      : await readRecords([records], undefined, { keep: "first", except: [] }, quiet(path, files));
  const findings = read?.findings ?? [];
  const { encoding, bom, delimiter, decimal, headerLine, units } = table.dialect;
  return {
    path,
    encoding,
    bom,
    delimiter,
    decimal,
    headerLine,
    units,
    rows: table.rows,
    refused: table.refused,
    columns: facts.map((one, i) => ({ ...one, role: roles[i] })),
    kind,
    findings,
    stanza: stanzaFor({ path, kind, columns: facts, roles, missing: suspectedMissing(findings) }),
  };
}

/** The options that the stanza stands for, so that look and run say the same of a file. */
function recordsFor(
  path: string,
  kind: TableKind,
  columns: readonly ColumnFacts[],
  roles: readonly Role[],
): RecordOptions | undefined {
  const date = columns[roles.indexOf("date")];
  if ((kind !== "records" && kind !== "wide records") || date === undefined) return undefined;
  const shared = {
    files: [path],
    date: { column: date.name, format: date.formats[0], covers: date.spacing ?? "day" },
    missing: [],
  };
  const values = columns.filter((_, i) => roles[i] === "value");
  if (kind === "wide records") {
    const months = monthColumns(columns, roles);
    if (months !== undefined)
      return {
        layout: "months across",
        ...shared,
        date: { column: date.name, format: "yyyy", covers: "day" },
        station: { always: stem(path) },
        variable: "value",
        unit: "1",
        kind: "mean",
        day: 0,
        scale: 1,
        columns: months,
      };
    const own = Object.fromEntries(values.map(({ name }) => [name, name]));
    // A unit without limits: which variable it is, is not known.
    return {
      layout: "wide",
      ...shared,
      variable: "value",
      unit: "1",
      kind: "mean",
      day: 0,
      scale: 1,
      columns: own,
    };
  }
  const station = columns[roles.indexOf("station")];
  const series = Object.fromEntries(
    values.map(({ name }): [string, SeriesColumn] => {
      const { unit, kind: valueKind } = guessValue(name);
      return [name, { column: name, unit, kind: valueKind, day: 0, scale: 1 }];
    }),
  );
  return {
    layout: "long",
    ...shared,
    station: station === undefined ? { always: stem(path) } : { column: station.name },
    series,
  };
}

/** Sentinels, and texts among numbers that stand more than once. */
function suspectedMissing(findings: readonly RawFinding[]): string[] {
  const texts = findings
    .filter(({ kind, value, count, remedy }) => {
      if (value === undefined) return false;
      return (
        kind === "sentinel" || (kind === "bad-value" && (count ?? 1) > 1 && remedy.startsWith("declare it"))
      );
    })
    .map(({ value }) => value ?? "");
  return [...new Set(texts)];
}

/** Effects for one file, named literally, without progress. */
function quiet(path: string, files: Files) {
  const one: Files = {
    list: async () => [path],
    readBytes: (file) => files.readBytes(file),
    readText: (file) => files.readText(file),
    open: (file) => files.open(file),
    absolute: (file) => files.absolute(file),
    identity: (file) => files.identity(file),
  };
  return { files: one, progress: silentProgress, checkInterrupted: () => {} };
}
