import { describe, expect, test } from "vitest";
import { columnIndex, readCsv } from "../../src/data/csv.ts";

describe("small tables", () => {
  test("true lines are told across quoted line breaks and empty lines (RFC 4180 quoting)", () => {
    const table = readCsv('a,b\n1,"two\nlines"\n\n3,"x, ""y"""\n', "t.csv");
    expect(table.header).toEqual(["a", "b"]);
    expect(table.rows).toEqual([
      { line: 2, cells: ["1", "two\nlines"] },
      { line: 5, cells: ["3", 'x, "y"'] },
    ]);
  });

  test("BOM, CRLF, semicolons and tabs are read", () => {
    expect(readCsv("\uFEFFa;b\r\n1;2,5\r\n", "t.csv").rows[0]).toEqual({ line: 2, cells: ["1", "2,5"] });
    expect(readCsv("a\tb\n1\t2\n", "t.csv").header).toEqual(["a", "b"]);
  });

  test("unequal rows, repeated and missing columns are told with their place", () => {
    expect(() => readCsv("a,b\n1,2\n3\n", "t.csv")).toThrow(/t\.csv:3: expected rows of equal length/);
    expect(() => readCsv("a,a\n1,2\n", "t.csv")).toThrow('expected each column name once, found "a" twice');
    expect(() => columnIndex(readCsv("a,b\n1,2\n", "t.csv"), "c", "captures.date")).toThrow(
      't.csv:1 (captures.date): expected a column named "c", found the columns "a", "b"',
    );
  });
});
