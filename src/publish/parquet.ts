import { join } from "node:path";
import type { Table, TableColumn } from "../tables/table.ts";
import { checkedCell, requireRectangle } from "./cell.ts";
import type { Disk } from "./disk.ts";

const SQL_TYPES = { text: "VARCHAR", number: "DOUBLE", integer: "BIGINT", truth: "BOOLEAN" } as const;

/**
 * A table as Parquet, columns typed, missing as null, units as JSON under the file's key `units`. One thread and no
 * extension from outside: the same table gives the same bytes with the same version of the writer.
 */
export async function parquetBytes(table: Table, disk: Disk): Promise<Uint8Array> {
  requireRectangle(table.name, table.columns, table.rows);
  // Imported here: the library takes a quarter of a second to load.
  const { DuckDBInstance } = await import("@duckdb/node-api");
  return disk.scratch(async (folder) => {
    const file = join(folder, "table.parquet");
    const instance = await DuckDBInstance.create(":memory:", {
      threads: "1",
      autoinstall_known_extensions: "false",
      autoload_known_extensions: "false",
    });
    const connection = await instance.connect();
    try {
      const columns = table.columns.map((one) => `${quoteName(one.name)} ${SQL_TYPES[one.type]}`);
      await connection.run(`CREATE TABLE held (${columns.join(", ")})`);
      const appender = await connection.createAppender("held");
      for (const row of table.rows) {
        row.forEach((cell, j) => {
          const value = checkedCell(table.columns[j], cell);
          if (value === undefined) appender.appendNull();
          else if (typeof value === "string") appender.appendVarchar(value);
          else if (typeof value === "boolean") appender.appendBoolean(value);
          else if (table.columns[j].type === "integer") appender.appendBigInt(BigInt(value));
          else appender.appendDouble(value);
        });
        appender.endRow();
      }
      appender.closeSync();
      const units = quoteText(JSON.stringify(unitsOf(table.columns)));
      await connection.run(
        `COPY held TO ${quoteText(file)} (FORMAT parquet, COMPRESSION zstd, KV_METADATA {units: ${units}})`,
      );
      return disk.read(file);
    } finally {
      connection.closeSync();
      instance.closeSync();
    }
  });
}

function unitsOf(columns: readonly TableColumn[]): readonly (readonly [string, string])[] {
  return columns.flatMap((one) => (one.unit === undefined ? [] : [[one.name, one.unit] as const]));
}

function quoteName(name: string): string {
  return `"${name.replaceAll('"', '""')}"`;
}

function quoteText(text: string): string {
  return `'${text.replaceAll("'", "''")}'`;
}
