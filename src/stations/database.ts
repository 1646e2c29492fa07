import type { DuckDBConnection } from "@duckdb/node-api";

/**
 * Runs work with an in-memory database that reads and encodes tables. One thread: same order and bytes every time.
 * Extensions are never fetched. The package is loaded here, so that commands which read no tables start fast.
 */
export async function withDatabase<T>(work: (database: DuckDBConnection) => Promise<T>): Promise<T> {
  const { DuckDBInstance } = await import("@duckdb/node-api");
  const instance = await DuckDBInstance.create(":memory:", {
    threads: "1",
    autoinstall_known_extensions: "false",
    autoload_known_extensions: "false",
  });
  const connection = await instance.connect();
  try {
    return await work(connection);
  } finally {
    connection.closeSync();
    instance.closeSync();
  }
}

/** A text as an SQL literal. */
export function literal(text: string): string {
  return `'${text.replaceAll("'", "''")}'`;
}

/** A path as an SQL literal, its characters that would be read as a pattern taken literally. */
export function pathLiteral(path: string): string {
  return literal(path.replace(/[[*?]/g, (mark) => `[${mark}]`));
}
