import type { ColumnFacts } from "./column-facts.ts";
import { guessValue, type Role, type TableKind } from "./guess-roles.ts";

/** A table's columns with their roles, as the stanza needs them. */
export interface StanzaInput {
  readonly path: string;
  readonly kind: TableKind;
  readonly columns: readonly ColumnFacts[];
  readonly roles: readonly Role[];
  /** What the reading suspects to mean missing. */
  readonly missing: readonly string[];
}

/** The part of a pipeline file that reads this table, to be pasted and checked; guesses are marked by a comment. */
export function stanzaFor(input: StanzaInput): string {
  const lines = {
    records: longStanza,
    "wide records": wideStanza,
    captures: capturesStanza,
    "zero-one captures": zeroOneStanza,
    occasions: occasionsStanza,
    stations: stationsStanza,
    "ready-made": readyMadeStanza,
    unknown: () => ["# neither records nor captures, occasions or stations were recognised in this file"],
  }[input.kind](input);
  return `${lines.join("\n")}\n`;
}

function columnOf({ columns, roles }: StanzaInput, role: Role): ColumnFacts | undefined {
  return columns[roles.indexOf(role)];
}

/** Text as YAML reads it back: quoted where plain text would be a number, a truth value, or broken. */
export function yamlText(text: string): string {
  const plain = /^[\p{L}_][\p{L}\p{N}_./*-]*( [\p{L}\p{N}_./*-]+)*$/u.test(text);
  return plain && !/^(y|n|yes|no|on|off|true|false|null)$/i.test(text) ? text : JSON.stringify(text);
}

function dateLine(date: ColumnFacts | undefined): string {
  if (date === undefined) return "    # date: no column of dates was recognised";
  const [format, ...others] = date.formats;
  const doubt = others.length > 0 ? `  # or ${others.join(", ")}: the dates do not tell` : "";
  return `    date: { column: ${yamlText(date.name)}, format: ${formatText(format)}, covers: ${date.spacing} }${doubt}`;
}

function formatText(format: string): string {
  return /^[A-Za-z.\-/]+$/.test(format) ? format : JSON.stringify(format);
}

function missingLine(missing: readonly string[]): string[] {
  if (missing.length === 0) return [];
  const items = missing.map((one) => (/^-?\d+(\.\d+)?$/.test(one) ? one : JSON.stringify(one)));
  return [`    missing: [${items.join(", ")}]  # suspected: check them`];
}

function longStanza(input: StanzaInput): string[] {
  const station = columnOf(input, "station");
  const names = new Map<string, number>();
  const series = input.columns
    .filter((_, i) => input.roles[i] === "value")
    .map((column) => {
      const { variable, unit, kind, sure } = guessValue(column.name);
      const seen = names.get(variable) ?? 0;
      names.set(variable, seen + 1);
      const name = seen === 0 ? variable : `${variable} ${seen + 1}`;
      const comment = sure
        ? "  # guessed from the name: check unit and kind"
        : "  # unit and kind are not known: write them";
      return `      ${yamlText(name)}: { column: ${yamlText(column.name)}, unit: ${yamlText(unit)}, kind: ${kind} }${comment}`;
    });
  return [
    "records:",
    `  - files: [${yamlText(input.path)}]`,
    station === undefined
      ? `    station: { always: ${yamlText(stem(input.path))} }  # no column of stations was recognised`
      : `    station: { column: ${yamlText(station.name)} }`,
    dateLine(columnOf(input, "date")),
    ...missingLine(input.missing),
    "    series:",
    ...series,
  ];
}

const MONTHS = ["jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"];

/** The twelve columns that are named like the months, in order, if all are there beside a column of years. */
export function monthColumns(
  columns: readonly ColumnFacts[],
  roles: readonly Role[],
): readonly string[] | undefined {
  const found = MONTHS.map((month) =>
    columns.find(({ name }, i) => roles[i] === "value" && name.toLowerCase().startsWith(month)),
  );
  const years = columns[roles.indexOf("date")]?.formats[0] === "yyyy";
  return years && found.every((one) => one !== undefined) ? found.map((one) => one.name) : undefined;
}

function monthsStanza(input: StanzaInput, months: readonly string[]): string[] {
  const { variable, unit, kind, sure } = guessValue(stem(input.path));
  return [
    "records:",
    `  - files: [${yamlText(input.path)}]`,
    "    layout: months across",
    `    station: { always: ${yamlText(stem(input.path))} }  # no column of stations was recognised`,
    `    date: { column: ${yamlText(columnOf(input, "date")?.name ?? "year")}, format: yyyy }`,
    ...missingLine(input.missing),
    `    variable: ${yamlText(variable)}  # ${sure ? "guessed from the file's name: check unit and kind" : "name, unit and kind are not known: write them"}`,
    `    unit: ${yamlText(unit)}`,
    `    kind: ${kind}`,
    `    columns: [${months.map(yamlText).join(", ")}]`,
  ];
}

function wideStanza(input: StanzaInput): string[] {
  const months = monthColumns(input.columns, input.roles);
  if (months !== undefined) return monthsStanza(input, months);
  const values = input.columns.filter((_, i) => input.roles[i] === "value");
  const { variable, unit, kind, sure } = guessValue(stem(input.path));
  return [
    "records:",
    `  - files: [${yamlText(input.path)}]`,
    "    layout: wide",
    dateLine(columnOf(input, "date")),
    ...missingLine(input.missing),
    `    variable: ${yamlText(variable)}  # ${sure ? "guessed from the file's name: check unit and kind" : "name, unit and kind are not known: write them"}`,
    `    unit: ${yamlText(unit)}`,
    `    kind: ${kind}`,
    "    columns:",
    ...values.map(({ name }) => `      ${yamlText(name)}: ${yamlText(name)}`),
  ];
}

function strataList(input: StanzaInput): string {
  return input.columns
    .filter((_, i) => input.roles[i] === "stratum")
    .map(({ name }) => yamlText(name))
    .join(", ");
}

function lostLine(input: StanzaInput): string[] {
  const fate = columnOf(input, "fate");
  if (fate === undefined) return [];
  // An animal that was let go is not lost; to count it as lost would take it out of every later occasion.
  const values = fate.examples
    .filter((one) => !/releas|alive|live|free|^ok$|normal/i.test(one))
    .map(yamlText);
  const comment = "  # keep those that mean lost on capture";
  if (values.length === 0) return [`  # lost: { column: ${yamlText(fate.name)}, values: [] }${comment}`];
  return [`  lost: { column: ${yamlText(fate.name)}, values: [${values.join(", ")}] }${comment}`];
}

function capturesStanza(input: StanzaInput): string[] {
  const date = columnOf(input, "date");
  const format =
    date === undefined || date.formats[0] === "yyyy-MM-dd"
      ? []
      : [`  format: ${formatText(date.formats[0])}`];
  return [
    "captures:",
    `  file: ${yamlText(input.path)}`,
    "  layout: dated",
    `  animal: ${yamlText(columnOf(input, "animal")?.name ?? "animal")}`,
    `  date: ${yamlText(date?.name ?? "date")}`,
    ...format,
    `  strata: [${strataList(input)}]`,
    ...lostLine(input),
  ];
}

function zeroOneStanza(input: StanzaInput): string[] {
  const columns = input.columns.filter((_, i) => input.roles[i] === "value");
  return [
    "captures:",
    `  file: ${yamlText(input.path)}`,
    "  layout: zero-one",
    `  animal: ${yamlText(columnOf(input, "animal")?.name ?? input.columns[0].name)}`,
    `  columns: [${columns.map(({ name }) => yamlText(name)).join(", ")}]`,
    `  strata: [${strataList(input)}]`,
    ...lostLine(input),
  ];
}

function occasionsStanza(input: StanzaInput): string[] {
  const start = columnOf(input, "start");
  const name = columnOf(input, "occasion") ?? start;
  const effort = columnOf(input, "effort");
  const format =
    start === undefined || start.formats[0] === "yyyy-MM-dd"
      ? []
      : [`  format: ${formatText(start.formats[0])}`];
  return [
    "occasions:",
    `  file: ${yamlText(input.path)}`,
    `  name: ${yamlText(name?.name ?? "name")}`,
    `  start: ${yamlText(start?.name ?? "start")}`,
    `  end: ${yamlText(columnOf(input, "end")?.name ?? "end")}`,
    ...format,
    ...(effort === undefined ? [] : [`  effort: ${yamlText(effort.name)}`]),
  ];
}

function stationsStanza(input: StanzaInput): string[] {
  const keys = ["id", "name", "longitude", "latitude", "elevation"] as const;
  return [
    "stations:",
    `  file: ${yamlText(input.path)}`,
    ...keys.flatMap((key) => {
      const column = columnOf(input, key);
      return column === undefined ? [] : [`  ${key}: ${yamlText(column.name)}`];
    }),
  ];
}

function readyMadeStanza(input: StanzaInput): string[] {
  const columns = input.columns.filter((_, i) => input.roles[i] === "value");
  return [
    "ready-made:",
    `  ${yamlText(stem(input.path))}:`,
    `    file: ${yamlText(input.path)}`,
    `    interval: ${yamlText(columnOf(input, "interval")?.name ?? "interval")}`,
    "    columns:",
    ...columns.map(({ name }) => `      ${yamlText(name)}: { unit: "1" }  # write the unit; 1 for counts`),
  ];
}

/** The file's name without folder and endings. */
export function stem(path: string): string {
  return path.slice(path.lastIndexOf("/") + 1).replace(/(\.[A-Za-z]+)+$/, "");
}
