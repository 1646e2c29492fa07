import { describe, expect, test } from "vitest";
import { slug, uniqueSlugs } from "../../src/tables/columns.ts";

describe("column names", () => {
  test("are lower case, without accents, spaces and signs", () => {
    expect(slug("Winter rain (mm)")).toBe("winter_rain_mm");
    expect(slug("  Été—hot  ")).toBe("ete_hot");
  });

  test("stay apart where words differ only in what a column name cannot hold", () => {
    expect(uniqueSlugs(["a b", "a-b", "雨", "雪"])).toEqual(["a_b", "a_b_2", "column", "column_2"]);
  });
});
