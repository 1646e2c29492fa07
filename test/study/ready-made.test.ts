import { describe, expect, test } from "vitest";
import { intervalsBetween } from "../../src/study/occasions.ts";
import { readReadyMade } from "../../src/study/ready-made.ts";
import { splitIntervals } from "../../src/study/split-years.ts";
import { errorOf, inMemory, lines, yearly } from "./support.ts";

const INTERVALS = intervalsBetween(yearly(4), "exact");
const read = (...rows: readonly string[]) =>
  readReadyMade(
    { file: "v.csv", interval: "interval", columns: { flood: { unit: "1" }, depth: { unit: "m" } } },
    INTERVALS,
    inMemory({ "v.csv": lines(...rows) }),
  );
const HEAD = "interval,flood,depth,note";

describe("ready-made values", () => {
  test("stand by the interval's name, in any order of rows", async () => {
    const { columns, findings } = await read(
      HEAD,
      "2003 to 2004,0,-1.5e1,x",
      "2001 to 2002,1,.5,",
      "2002 to 2003,1,+2,",
    );
    expect(columns).toEqual([
      { name: "flood", unit: "1", file: "v.csv", values: Float64Array.of(1, 1, 0) },
      { name: "depth", unit: "m", file: "v.csv", values: Float64Array.of(0.5, 2, -15) },
    ]);
    expect(findings).toEqual([]);
  });

  test("an empty cell and an absent row are missing, and said", async () => {
    const { columns, findings } = await read(HEAD, "2001 to 2002,1,,", "2002 to 2003,0,2,");
    expect(columns.map((one) => Array.from(one.values))).toEqual([
      [1, 0, Number.NaN],
      [Number.NaN, 2, Number.NaN],
    ]);
    expect(findings.map((one) => [one.kind, one.message, one.count])).toEqual([
      ["gap", "flood has no value for 1 of 3 intervals: 2003 to 2004", 1],
      ["gap", "depth has no value for 2 of 3 intervals: 2001 to 2002, 2003 to 2004", 2],
    ]);
  });

  test.each([
    [
      "study.unknown-interval",
      "2001-2002,1,2,",
      'v.csv:2:1 (interval): expected the name of an interval, from "2001 to 2002" to "2003 to 2004", found "2001-2002"; name the interval by its two occasions, or take the row out',
    ],
    [
      "study.interval-repeated",
      "2001 to 2002,1,2,\n\n2001 to 2002,1,2,",
      'v.csv:4:1 (interval): expected each interval in one row (see line 2), found "2001 to 2002"; keep one of the two rows',
    ],
    [
      "study.not-a-number",
      '2001 to 2002,"1,5",2,',
      'v.csv:2:2 (flood): expected a number, or an empty cell where it is not known, found "1,5"; write decimals with a point',
    ],
    [
      "study.not-a-number",
      "2001 to 2002,1,1e999,",
      'v.csv:2:3 (depth): expected a number, or an empty cell where it is not known, found "1e999"; mend the cell, or leave it empty if the value is not known',
    ],
  ])("%s", async (name, rows, message) => {
    expect(await errorOf(read(HEAD, rows))).toEqual({ name, message });
  });

  test("an interval that is split into years stands year by year, and a row of the whole says how", async () => {
    const years = splitIntervals(intervalsBetween(yearly(4).toSpliced(1, 1), "whole years")).years;
    const of = (...rows: readonly string[]) =>
      readReadyMade(
        { file: "v.csv", interval: "interval", columns: { flood: { unit: "1" } } },
        years,
        inMemory({ "v.csv": lines("interval,flood", ...rows) }),
      );
    const { columns } = await of(
      '"2001 to 2003, year 1 of 2",1',
      '"2001 to 2003, year 2 of 2",2',
      "2003 to 2004,3",
    );
    expect(columns[0].values).toEqual(Float64Array.of(1, 2, 3));
    expect(await errorOf(of("2001 to 2003,1"))).toEqual({
      name: "study.unknown-interval",
      message:
        'v.csv:2:1 (interval): expected a row for each of its years: "2001 to 2003, year 1 of 2" and "2001 to 2003, year 2 of 2", found "2001 to 2003"; survival.split cuts this interval into years; name each year so and give it a value of its own',
    });
  });
});
