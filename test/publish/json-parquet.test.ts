import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { DuckDBInstance } from "@duckdb/node-api";
import { parse } from "csv-parse/sync";
import fc from "fast-check";
import { parquetRead } from "hyparquet";
import { compressors } from "hyparquet-compressors";
import { afterAll, expect, test } from "vitest";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { csvBytes } from "../../src/publish/csv.ts";
import { tableJsonBytes } from "../../src/publish/json.ts";
import { parquetBytes } from "../../src/publish/parquet.ts";
import type { Table } from "../../src/tables/table.ts";
import { anyTable, column } from "./tables.ts";

const folder = mkdtempSync(join(tmpdir(), "covey-test-"));
afterAll(() => rmSync(folder, { recursive: true }));

const sample: Table = {
  name: "sample",
  title: "Sample",
  description: "",
  columns: [
    column("site's", "text"),
    column('rain "mm"', "number", "mm"),
    column("n", "integer", "1"),
    column("used", "truth"),
    column("2001", "number", "degC"),
  ],
  rows: [
    ["Äsche, 'x'", 0.1 + 0.2, 9007199254740991, true, -0],
    [undefined, Number.NaN, undefined, undefined, 1e300],
    ["=1+1", 5e-324, -3, false, Number.POSITIVE_INFINITY],
  ],
};

async function query(sql: string) {
  const connection = await (await DuckDBInstance.create(":memory:", { threads: "1" })).connect();
  try {
    return await connection.runAndReadAll(sql);
  } finally {
    connection.closeSync();
  }
}

const expected = [
  ["Äsche, 'x'", 0.30000000000000004, 9007199254740991n, true, -0],
  [null, null, null, null, 1e300],
  ["=1+1", 5e-324, -3n, false, Number.POSITIVE_INFINITY],
];

test("Parquet reads back with types and values, units under the key `units`", async () => {
  const file = join(folder, "sample.parquet");
  writeFileSync(file, await parquetBytes(sample, nodeDisk()));
  const read = await query(`SELECT * FROM read_parquet('${file}')`);
  expect(read.columnNames()).toEqual(sample.columns.map((one) => one.name));
  expect(read.columnTypes().map(String)).toEqual(["VARCHAR", "DOUBLE", "BIGINT", "BOOLEAN", "DOUBLE"]);
  expect(read.getRows()).toEqual(expected);
  const units = await query(
    `SELECT decode(value) FROM parquet_kv_metadata('${file}') WHERE decode(key) = 'units'`,
  );
  expect(JSON.parse(String(units.getRows()[0][0]))).toEqual([
    ['rain "mm"', "mm"],
    ["n", "1"],
    ["2001", "degC"],
  ]);
});

test("another reader of Parquet (hyparquet) finds in any table what the CSV beside it says", async () => {
  await fc.assert(
    fc.asyncProperty(anyTable, async (table) => {
      if (table.rows.length === 0) return;
      const bytes = await parquetBytes(table, nodeDisk());
      const rows: unknown[][] = [];
      const file = new Uint8Array(bytes).buffer;
      await parquetRead({ file, compressors, onComplete: (all) => void rows.push(...all) });
      const cells = parse(Buffer.from(csvBytes(table).bytes), { columns: false, from: 2 }) as string[][];
      expect(rows.length).toBe(cells.length);
      rows.forEach((row, i) => {
        table.columns.forEach((one, j) => {
          const [value, cell] = [row[j], cells[i][j]];
          const where = `${one.name}, row ${i}`;
          if (value === null || value === undefined || value === "") expect(cell, where).toBe("");
          else if (one.type === "text") expect([String(value), `'${value}`], where).toContain(cell);
          else if (one.type === "number")
            expect(Number(cell.replace("INF", "Infinity")), where).toBe(Number(value));
          else expect(cell, where).toBe(String(value));
        });
      });
    }),
    { numRuns: 60 },
  );
});

test("Parquet of the same table is the same bytes, and of another one not", async () => {
  const many: Table = {
    ...sample,
    rows: Array.from({ length: 5000 }, (_, i) => [`s${i % 7}`, Math.sin(i), i, i % 2 === 0, Math.cos(i)]),
  };
  const [a, b] = [await parquetBytes(many, nodeDisk()), await parquetBytes(many, nodeDisk())];
  expect(Buffer.from(a).equals(b)).toBe(true);
  const other = await parquetBytes({ ...many, rows: many.rows.slice(1) }, nodeDisk());
  expect(Buffer.from(a).equals(other)).toBe(false);
});

test("JSON and CSV read back by another reader with the declared types", async () => {
  const [json, csv] = [join(folder, "sample.json"), join(folder, "sample.csv")];
  writeFileSync(json, tableJsonBytes(sample));
  writeFileSync(csv, csvBytes(sample).bytes);
  const types = ["VARCHAR", "DOUBLE", "BIGINT", "BOOLEAN", "DOUBLE"];
  const columns = sample.columns
    .map((one, j) => `'${one.name.replaceAll("'", "''")}': '${types[j]}'`)
    .join(", ");
  const fromJson = await query(
    `SELECT * FROM read_json('${json}', columns = {${columns}}, format = 'array')`,
  );
  expect(fromJson.getRows()).toEqual(expected);
  const fromCsv = await query(
    `SELECT * FROM read_csv('${csv}', columns = {${columns}}, header = true, auto_detect = false)`,
  );
  // The apostrophe that keeps a spreadsheet from running the cell is in the CSV only.
  expect(fromCsv.getRows()).toEqual([expected[0], expected[1], ["'=1+1", ...expected[2].slice(1)]]);
});

test("any table is valid JSON with the keys in the order of the columns", () => {
  fc.assert(
    fc.property(anyTable, (table) => {
      const text = new TextDecoder().decode(tableJsonBytes(table));
      const rows: unknown = JSON.parse(text, (_, value: unknown) =>
        typeof value === "object" && value !== null && !Array.isArray(value) ? Object.entries(value) : value,
      );
      const order = table.columns.map((one) => one.name);
      const cell = (value: unknown) =>
        value === undefined || Number.isNaN(value)
          ? null
          : value === Number.POSITIVE_INFINITY
            ? "INF"
            : value === Number.NEGATIVE_INFINITY
              ? "-INF"
              : value;
      // Object.entries moves keys that look like numbers to the front; compare without order, then the text's order.
      const sorted = (pairs: [string, unknown][]) => pairs.sort(([a], [b]) => (a < b ? -1 : 1));
      expect((rows as [string, unknown][][]).map(sorted)).toEqual(
        table.rows.map((row) => sorted(row.map((value, j) => [order[j], cell(value)]))),
      );
      if (table.rows.length > 0) {
        const line = text.split("\n")[1];
        let at = 0;
        for (const name of order) {
          const found = line.indexOf(`${JSON.stringify(name)}:`, at);
          expect(found).toBeGreaterThanOrEqual(at);
          at = found + 1;
        }
      }
    }),
  );
});

test("an empty table is an empty array", () => {
  expect(new TextDecoder().decode(tableJsonBytes({ ...sample, rows: [] }))).toBe("[]\n");
});
