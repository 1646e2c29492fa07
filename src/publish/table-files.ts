import type { Table } from "../tables/table.ts";
import { csvBytes } from "./csv.ts";
import { dataPackage, type PackageFacts } from "./datapackage.ts";
import type { Disk, FileSet } from "./disk.ts";
import { tableJsonBytes } from "./json.ts";
import { parquetBytes } from "./parquet.ts";

export interface TableFilesOptions {
  readonly package: PackageFacts;
  /** Names of the tables that are written as Parquet too. */
  readonly parquet: readonly string[];
}

export interface TableFiles {
  readonly files: FileSet;
  /** Text cells that were given an apostrophe in the CSV files, so that a spreadsheet does not run them. */
  readonly neutralised: number;
}

/**
 * Every table as `tables/NAME.csv` and `tables/NAME.json`, some as `tables/NAME.parquet`, and the `datapackage.json`
 * that describes the CSV files.
 */
export async function tableFiles(
  tables: readonly Table[],
  options: TableFilesOptions,
  disk: Disk,
): Promise<TableFiles> {
  const files = new Map<string, Uint8Array>();
  let neutralised = 0;
  const add = (path: string, bytes: Uint8Array) => {
    if (files.has(path)) throw new Error(`two tables would be written as ${path}`);
    files.set(path, bytes);
  };
  for (const table of tables) {
    const csv = csvBytes(table);
    neutralised += csv.neutralised;
    add(`tables/${table.name}.csv`, csv.bytes);
    add(`tables/${table.name}.json`, tableJsonBytes(table));
    if (options.parquet.includes(table.name))
      add(`tables/${table.name}.parquet`, await parquetBytes(table, disk));
  }
  const described = tables.map((table) => ({ table, path: `tables/${table.name}.csv` }));
  add("datapackage.json", dataPackage(options.package, described, files));
  return { files, neutralised };
}
