import type { DuckDBConnection } from "@duckdb/node-api";
import type { Files } from "../effects/effects.ts";
import { pathLiteral } from "./database.ts";
import { checkColumn } from "./dialect.ts";
import { type LoadedTable, readOrExplain } from "./loaded-table.ts";

/**
 * Loads columns of a Parquet file into `raw`, as text like those of the other tables: dates as yyyy-MM-dd, numbers so that they
 * read back the same. Its "lines" are row numbers, 1-based.
 */
export async function loadParquet(
  database: DuckDBConnection,
  files: Files,
  file: string,
  wanted: readonly string[],
): Promise<LoadedTable> {
  const source = `read_parquet(${pathLiteral(files.absolute(file))})`;
  await readOrExplain(database, file, `CREATE OR REPLACE TEMP VIEW parquet AS SELECT * FROM ${source}`);
  const header = (await database.runAndReadAll("DESCRIBE parquet"))
    .getRowsJson()
    .map(([name]) => String(name));
  for (const name of wanted) checkColumn(header, name, file, 1);
  const columns = header
    .map((name, i) => ({ name, i }))
    .filter(({ name }) => wanted.length === 0 || wanted.includes(name))
    .map(({ name, i }) => `trim(CAST("${name.replaceAll('"', '""')}" AS VARCHAR)) AS c${i}`);
  await readOrExplain(database, file, `CREATE TEMP TABLE raw AS SELECT ${columns.join(", ")} FROM parquet`);
  const [[rows]] = (await database.runAndReadAll("SELECT count(*)::INTEGER FROM raw")).getRowsJson();
  await database.run("DROP VIEW parquet");
  return {
    file,
    dialect: {
      encoding: "utf-8",
      bom: false,
      delimiter: "",
      decimal: ".",
      headerLine: 0,
      header,
      skip: 0,
      units: undefined,
    },
    rows: Number(rows),
    refused: [],
    lines: async (indices) => indices.map((row) => row + 1),
  };
}
