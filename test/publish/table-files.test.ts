import { expect, test } from "vitest";
import { nodeDisk } from "../../src/pipeline/effects.ts";
import { tableFiles } from "../../src/publish/table-files.ts";
import type { Table } from "../../src/tables/table.ts";
import { column } from "./tables.ts";

const table = (name: string, cell: string): Table => ({
  name,
  title: name,
  description: "",
  columns: [column("x", "text")],
  rows: [[cell]],
});
const facts = { name: "p", title: "P", description: "" };

test("every table as CSV and JSON, the chosen ones as Parquet, all CSV files in the data package", async () => {
  const tables = [table("raw", "=1"), table("dictionary", "@x")];
  const { files, neutralised } = await tableFiles(tables, { package: facts, parquet: ["raw"] }, nodeDisk());
  expect([...files.keys()]).toEqual([
    "tables/raw.csv",
    "tables/raw.json",
    "tables/raw.parquet",
    "tables/dictionary.csv",
    "tables/dictionary.json",
    "datapackage.json",
  ]);
  expect(neutralised).toBe(2);
  // "PAR1", the mark at both ends of a Parquet file (Apache Parquet format, "File format").
  const parquet = Buffer.from(files.get("tables/raw.parquet") ?? []);
  expect([parquet.subarray(0, 4).toString(), parquet.subarray(-4).toString()]).toEqual(["PAR1", "PAR1"]);
  const { resources } = JSON.parse(Buffer.from(files.get("datapackage.json") ?? []).toString());
  expect(resources.map((one: { path: string }) => one.path)).toEqual([
    "tables/dictionary.csv",
    "tables/raw.csv",
  ]);
});

test("two tables of one name are a bug", async () => {
  const twice = [table("raw", "a"), table("raw", "b")];
  await expect(tableFiles(twice, { package: facts, parquet: [] }, nodeDisk())).rejects.toThrow("two tables");
});
