import type { Table, TableColumn } from "../tables/table.ts";
import type { FileSet } from "./disk.ts";
import { sha256 } from "./hash.ts";
import { jsonBytes } from "./json.ts";

const PROFILES = "https://datapackage.org/profiles/2.0";

/** What the package says of itself. */
export interface PackageFacts {
  /** Lower case letters, digits, `-`, `_` and `.` only. */
  readonly name: string;
  readonly title: string;
  readonly description: string;
}

/** One table and where its CSV stands in the output folder. */
export interface TableFile {
  readonly table: Table;
  /** Relative to the folder that holds datapackage.json. */
  readonly path: string;
}

const FIELD_TYPES = { text: "string", number: "number", integer: "integer", truth: "boolean" } as const;

/**
 * `datapackage.json` by the Data Package standard, version 2 (Data Package, Data Resource, Table Dialect and Table
 * Schema): every table with its fields, units, missing value, size and hash. The standard has no property for a unit;
 * `unit` is an additional one, as it allows. No `created`: the same run writes the same bytes.
 */
export function dataPackage(facts: PackageFacts, tables: readonly TableFile[], files: FileSet): Uint8Array {
  const sorted = [...tables].sort((a, b) => (a.path < b.path ? -1 : 1));
  return jsonBytes({
    $schema: `${PROFILES}/datapackage.json`,
    name: slug(facts.name),
    title: facts.title,
    description: facts.description,
    resources: sorted.map((one) => resource(one, files)),
  });
}

function resource({ table, path }: TableFile, files: FileSet) {
  const bytes = files.get(path);
  if (bytes === undefined) throw new Error(`table ${table.name} has no file ${path}`);
  return {
    $schema: `${PROFILES}/dataresource.json`,
    name: slug(table.name),
    type: "table",
    path,
    title: table.title,
    description: table.description,
    format: "csv",
    mediatype: "text/csv",
    encoding: "utf-8",
    bytes: bytes.length,
    hash: `sha256:${sha256(bytes)}`,
    dialect: {
      $schema: `${PROFILES}/tabledialect.json`,
      header: true,
      delimiter: ",",
      lineTerminator: "\n",
      quoteChar: '"',
      doubleQuote: true,
    },
    schema: {
      $schema: `${PROFILES}/tableschema.json`,
      fields: table.columns.map(field),
      missingValues: [""],
    },
  };
}

function field(column: TableColumn) {
  return {
    name: column.name,
    type: FIELD_TYPES[column.type],
    title: column.title,
    description: column.description,
    ...(column.unit === undefined ? {} : { unit: column.unit }),
  };
}

/** A name the standard takes: lower case, everything else turned into hyphens; `data` if nothing is left. */
export function slug(text: string): string {
  const name = text
    .normalize("NFKD")
    .toLowerCase()
    .replace(/\p{M}/gu, "")
    .replace(/[^a-z0-9._-]+/g, "-")
    .replace(/^[-.]+|[-.]+$/g, "");
  return name === "" ? "data" : name;
}
