import type { DuckDBConnection } from "@duckdb/node-api";
import { InputError } from "../errors.ts";
import type { Dialect } from "./dialect.ts";

/** A row that the reader refused because it has too many or too few cells or a broken quote. */
export interface RefusedRow {
  readonly line: number;
  readonly text: string;
  readonly why: string;
}

/** A file's wanted columns in the table `raw` (see `rawSelection`; rowid is the row's index). */
export interface LoadedTable {
  readonly file: string;
  readonly dialect: Dialect;
  readonly rows: number;
  readonly refused: readonly RefusedRow[];
  /** True physical lines of rows, given as ascending 0-based indices. Reads the file again: only for findings. */
  readonly lines: (rows: readonly number[]) => Promise<readonly number[]>;
}

/** Runs a reading statement; what the database says of the file becomes the user's error. */
export async function readOrExplain(database: DuckDBConnection, file: string, sql: string): Promise<void> {
  try {
    await database.run(sql);
  } catch (error) {
    throw new InputError(
      {
        name: "stations.unreadable",
        expected: "a table that can be read to its end",
        found: error instanceof Error ? error.message.split("\n")[0] : String(error),
        where: { file },
        remedy: "the file may be cut off or damaged: fetch it again",
      },
      error,
    );
  }
}
