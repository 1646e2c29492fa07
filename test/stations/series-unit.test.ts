import { describe, expect, test } from "vitest";
import type { Series } from "../../src/data/series.ts";
import { seriesInUnit } from "../../src/stations/series-unit.ts";

const series = (unit: string, kind: Series["kind"], values: number[], length = 1): Series => ({
  site: "Ash",
  variable: "x",
  unit,
  kind,
  starts: Int32Array.from(values, (_, i) => i * length),
  ends: Int32Array.from(values, (_, i) => (i + 1) * length),
  values: Float64Array.from(values),
  files: ["a.csv"],
});

describe("a series in another unit", () => {
  test("100 W/m2 over a day are 8.64 MJ/m2 (FAO Irrigation and Drainage Paper 56, table 3), over 30 days 259.2", () => {
    const day = seriesInUnit(series("W/m2", "mean", [100, Number.NaN]), "MJ/m2");
    expect([day.kind, day.unit]).toEqual(["total", "MJ/m2"]);
    expect(day.values[0]).toBeCloseTo(8.64, 12);
    expect(day.values[1]).toBeNaN();
    expect(seriesInUnit(series("W/m2", "mean", [100], 30), "MJ/m2").values[0]).toBeCloseTo(259.2, 10);
  });

  test("0.5 mm/h over a day are 12 mm, and 12 mm a day are 0.5 mm/h again", () => {
    const total = seriesInUnit(series("mm/h", "mean", [0.5]), "mm");
    expect(total.values[0]).toBeCloseTo(12, 12);
    const rate = seriesInUnit(series("mm", "total", [12]), "mm/h");
    expect([rate.kind, rate.unit]).toEqual(["mean", "mm/h"]);
    expect(rate.values[0]).toBeCloseTo(0.5, 12);
    expect(seriesInUnit(series("mm", "total", [62], 31), "mm/day").values[0]).toBeCloseTo(2, 12);
  });

  test("kept and converted by dimension otherwise", () => {
    const same = series("mm", "total", [1]);
    expect(seriesInUnit(same, "mm")).toBe(same);
    expect(seriesInUnit(same, "cm").values[0]).toBeCloseTo(0.1, 12);
    expect(seriesInUnit(series("degC", "mean", [10]), "degF").values[0]).toBeCloseTo(50, 12);
  });

  test("the greatest rate of a day is no total; other dimensions are refused", () => {
    expect(() => seriesInUnit(series("mm/h", "maximum", [5]), "mm")).toThrow(
      "a.csv (x): expected a mean rate, which adds up to a total, found a maximum of x in mm/h",
    );
    expect(() => seriesInUnit(series("degC", "mean", [5]), "mm")).toThrow(
      'expected a unit that "degC" can be converted to, found "mm"',
    );
  });
});
