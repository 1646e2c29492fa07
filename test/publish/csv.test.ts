import { parse } from "csv-parse/sync";
import fc from "fast-check";
import { expect, test } from "vitest";
import { csvBytes, plainText } from "../../src/publish/csv.ts";
import type { Cell, Table } from "../../src/tables/table.ts";
import { anyTable, column } from "./tables.ts";

function table(columns: Table["columns"], rows: readonly (readonly Cell[])[]): Table {
  return { name: "t", title: "T", description: "", columns, rows };
}

const read = (bytes: Uint8Array) => new TextDecoder("utf-8", { fatal: true, ignoreBOM: true }).decode(bytes);

test("the bytes of a small table", () => {
  const { bytes, neutralised } = csvBytes(
    table(
      [
        column("site", "text"),
        column("rain", "number", "mm"),
        column("n", "integer"),
        column("used", "truth"),
      ],
      [
        ["Ash, lower", 0.1 + 0.2, 3, true],
        ['the "old" one', Number.NaN, undefined, false],
        ["=1+1", -1.5, -2, undefined],
      ],
    ),
  );
  expect(read(bytes)).toBe(
    'site,rain,n,used\n"Ash, lower",0.30000000000000004,3,true\n"the ""old"" one",,,false\n\'=1+1,-1.5,-2,\n',
  );
  expect(neutralised).toBe(1);
});

// RFC 4180 as read by an independent parser; numbers by the round trip that ECMAScript's Number::toString promises.
test("any table reads back as it was, by an independent parser", () => {
  fc.assert(
    fc.property(anyTable, (given) => {
      const records: string[][] = parse(Buffer.from(csvBytes(given).bytes), { record_delimiter: "\n" });
      const [header, ...rows] = records;
      expect(header.map(plainText)).toEqual(given.columns.map((one) => one.name));
      const back = rows.map((row) =>
        row.map((cell, j): Cell => {
          const { type } = given.columns[j];
          if (cell === "") return undefined;
          if (type === "text") return plainText(cell);
          if (type === "truth") return cell === "true";
          return Number(cell.replace("INF", "Infinity"));
        }),
      );
      const missing = (cell: Cell) => cell === undefined || cell === "" || Number.isNaN(cell);
      expect(back).toEqual(given.rows.map((row) => row.map((cell) => (missing(cell) ? undefined : cell))));
    }),
    { numRuns: 500 },
  );
});

test("no text cell begins as a formula does; numbers are never touched", () => {
  fc.assert(
    fc.property(anyTable, (given) => {
      const records: string[][] = parse(Buffer.from(csvBytes(given).bytes), { record_delimiter: "\n" });
      records.slice(1).forEach((row, i) => {
        row.forEach((cell, j) => {
          if (given.columns[j].type === "text") expect(cell).not.toMatch(/^[=+\-@\t\r]/);
          else expect(cell, String(given.rows[i][j])).not.toMatch(/^'/);
        });
      });
      for (const cell of records[0]) expect(cell).not.toMatch(/^[=+\-@\t\r]/);
    }),
  );
});

test("the neutralised cells are counted, header too", () => {
  const rows = ["=a", "+a", "-a", "@a", "\ta", "\ra", "'=a", "a=", "", "'a"].map((one) => [one, -1]);
  const { neutralised } = csvBytes(table([column("@name", "text"), column("n", "number")], rows));
  expect(neutralised).toBe(8);
});

test("numbers keep −0, infinities are spelled as Table Schema spells them, integers have no exponent", () => {
  const given = table(
    [column("x", "number"), column("k", "integer")],
    [
      [-0, -0],
      [Number.POSITIVE_INFINITY, 1e22],
      [Number.NEGATIVE_INFINITY, -(2 ** 70)],
      [5e-324, 0],
    ],
  );
  expect(read(csvBytes(given).bytes)).toBe(
    "x,k\n-0,0\nINF,10000000000000000000000\n-INF,-1180591620717411303424\n5e-324,0\n",
  );
});

test("cells of another type than their column, ragged rows and repeated names are bugs", () => {
  const columns = [column("k", "integer")];
  for (const cell of [1.5, "1", true, Number.POSITIVE_INFINITY])
    expect(() => csvBytes(table(columns, [[cell]]))).toThrow("column k is of type integer");
  expect(() => csvBytes(table([column("x", "number")], [["1"]]))).toThrow("of type number");
  expect(() => csvBytes(table([column("x", "text")], [[1]]))).toThrow("of type text");
  expect(() => csvBytes(table([column("x", "truth")], [["true"]]))).toThrow("of type truth");
  expect(() => csvBytes(table(columns, [[1], [1, 2]]))).toThrow("row 1 of table t has 2 of 1 cells");
  expect(() => csvBytes(table([...columns, ...columns], []))).toThrow("repeats a column name");
});
