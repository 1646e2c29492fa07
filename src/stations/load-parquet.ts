import type { DuckDBConnection } from "@duckdb/node-api";
import type { Files } from "../effects/effects.ts";
import { pathLiteral } from "./database.ts";
import { checkColumn } from "./dialect.ts";
import { type LoadedTable, readOrExplain } from "./loaded-table.ts";
import { type NumberSource, rawColumns, rawSelection } from "./raw-columns.ts";

/**
 * Loads columns of a Parquet file into `raw`, by way of text as those of the other tables: dates as yyyy-MM-dd, numbers so
 * that they read back the same. Its "lines" are row numbers, 1-based.
 */
export async function loadParquet(
  database: DuckDBConnection,
  files: Files,
  file: string,
  texts: readonly string[],
  numbers: readonly NumberSource[],
): Promise<LoadedTable> {
  const source = `read_parquet(${pathLiteral(files.absolute(file))})`;
  await readOrExplain(database, file, `CREATE OR REPLACE TEMP VIEW parquet AS SELECT * FROM ${source}`);
  const header = (await database.runAndReadAll("DESCRIBE parquet"))
    .getRowsJson()
    .map(([name]) => String(name));
  for (const name of [...texts, ...numbers.map((one) => one.column)]) checkColumn(header, name, file, 1);
  const text = (i: number) => `CAST("${header[i].replaceAll('"', '""')}" AS VARCHAR)`;
  const selection = rawSelection(rawColumns(header, texts, numbers), ".", "parquet", text);
  await readOrExplain(database, file, `CREATE TEMP TABLE raw AS ${selection}`);
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
      comment: undefined,
    },
    rows: Number(rows),
    refused: [],
    lines: async (indices) => indices.map((row) => row + 1),
  };
}
