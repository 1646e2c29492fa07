import { describe, expect, test } from "vitest";
import { dayOf, isoDay } from "../../src/data/day.ts";
import { guessDates } from "../../src/inspect/layer-dates.ts";
import { guessSpacing } from "../../src/inspect/layer-spacing.ts";

const named = (days: readonly number[]) => days.map((day) => `g_${isoDay(day)}.tif`);
/** Every so many days from each 1 January, as composites are counted (common practice, no source). */
const anew = (length: number, years: readonly number[]) =>
  years.flatMap((year) =>
    Array.from({ length: Math.ceil(365 / length) }, (_, k) => dayOf(year, 1, 1) + length * k),
  );
const inMonths = (dates: readonly number[]) =>
  Array.from({ length: 14 }, (_, m) =>
    dates.map((date) => dayOf(2003 + Math.floor(m / 12), 1 + (m % 12), date)),
  ).flat();

describe("how long each image of a row counts, by the days in the names", () => {
  test.each([
    ["16 days anew each year", anew(16, [2003, 2004, 2005])],
    ["8 days anew each year", anew(8, [2003, 2004])],
    ["dekad", inMonths([1, 11, 21])],
    ["month", inMonths([1])],
    [undefined, Array.from({ length: 60 }, (_, k) => dayOf(2003, 2, 1) + k)],
    [undefined, inMonths([3])],
    [undefined, anew(16, [2003]).slice(0, 3)],
    [undefined, []],
  ])("%s", (expected, days) => {
    expect(guessSpacing(named(days))?.text).toBe(expected);
    // in any order, and with some files lost
    expect(guessSpacing(named(days.toReversed().filter((_, i) => i % 9 !== 4)))?.text).toBe(expected);
  });

  test("an image's own period is told by it too", () => {
    expect(guessDates("g.A2004353.tif", [""], { covers: { days: 16, anew: true } })).toEqual([
      "2004-12-18 to 2004-12-31",
    ]);
    expect(guessDates("g.A2004353.tif", [""])).toEqual(["2004-12-18 to 2004-12-18"]);
  });

  test("days of the year in names count as dates; names without a whole date say nothing", () => {
    const names = Array.from({ length: 23 }, (_, k) => `veg.A2004${String(1 + 16 * k).padStart(3, "0")}.tif`);
    expect(guessSpacing(names)).toEqual({ covers: { days: 16, anew: true }, text: "16 days anew each year" });
    expect(
      guessSpacing(["g_2003_01.tif", "g_2003_02.tif", "g_2003_03.tif", "g_2003_04.tif"]),
    ).toBeUndefined();
    expect(guessSpacing(["a.tif", "b.tif", "c.tif", "d.tif", "e.tif"])).toBeUndefined();
  });
});
