import { describe, expect, test } from "vitest";
import { isoDay } from "../../../src/data/day.ts";
import { InputError } from "../../../src/errors.ts";
import { extractLayers } from "../../../src/layers/extract.ts";
import { kindFinding, methodsOverTime, statisticFinding } from "../../../src/layers/netcdf/cell-methods.ts";
import type { LayerOptions } from "../../../src/layers/options.ts";
import { planLayers } from "../../../src/layers/plan.ts";
import { effectsOf } from "../effects.ts";
import { gridOf, type Made, madeClassic } from "./make.ts";

const OPTIONS: LayerOptions = {
  files: ["made.nc"],
  date: { axis: "time" },
  covers: "month",
  variable: "v",
  unit: "1",
  kind: "mean",
};
const read = (made: Made, options: Partial<LayerOptions> = {}) =>
  extractLayers(
    "x",
    { ...OPTIONS, ...options },
    [{ place: { type: "point", name: "here", position: [8.6, 49.4] }, use: { by: "nearest" } }],
    effectsOf({ "made.nc": madeClassic(made) }),
  );
const dates = async (made: Made, options: Partial<LayerOptions> = {}) => {
  const { series, findings } = await read(made, options);
  const { starts, ends } = series[0];
  return {
    periods: Array.from(starts, (start, i) => `${isoDay(start)}/${isoDay(ends[i])}`),
    found: findings.map((one) => one.kind),
  };
};
const refused = async (made: Made, options: Partial<LayerOptions> = {}) => {
  try {
    await read(made, options);
  } catch (error) {
    if (error instanceof InputError) return error;
    throw error;
  }
  throw new Error("nothing was thrown");
};
const days = { units: "days since 2001-01-01" };

describe("periods", () => {
  test("without bounds a time stands for what the pipeline file says", async () => {
    expect((await dates(gridOf([0, 40], days))).periods).toEqual([
      "2001-01-01/2001-02-01",
      "2001-02-01/2001-03-01",
    ]);
  });
  // CF 1.11 §7.1: bounds give the extent of a cell; here the times stand at the end of their months, which by
  // themselves would fall into the next.
  const bounds = { time_bnds: { dimensions: ["time", "nv"], values: [0, 31, 31, 59] } };
  test("time bounds win over times", async () => {
    const made = gridOf([31, 59], { ...days, bounds: "time_bnds" }, bounds);
    expect(await dates(made)).toEqual({
      periods: ["2001-01-01/2001-02-01", "2001-02-01/2001-03-01"],
      found: [],
    });
  });
  test("bounds that are not what was said stand, and are told", async () => {
    const made = gridOf([31, 59], { ...days, bounds: "time_bnds" }, bounds);
    expect(await dates(made, { covers: "day" })).toEqual({
      periods: ["2001-01-01/2001-02-01", "2001-02-01/2001-03-01"],
      found: ["layer-bounds"],
    });
    expect((await dates(made, { covers: "bounds" })).found).toEqual([]);
  });
  test("bounds off midnight go to the nearest, and are told", async () => {
    const off = { time_bnds: { dimensions: ["time", "nv"], values: [0.25, 1.25, 1.25, 2.25] } };
    const made = gridOf([1, 2], { ...days, bounds: "time_bnds" }, off);
    expect(await dates(made, { covers: "bounds" })).toEqual({
      periods: ["2001-01-01/2001-01-02", "2001-01-02/2001-01-03"],
      found: ["layer-bounds"],
    });
  });
  // CF 1.11 §7.3, the timeseries of 12-hourly maxima and sums: time_bnds reach from the time before to the time itself.
  test("the 12-hourly example of §7.3 is refused: it is within the day", async () => {
    const example = {
      time_bnds: { dimensions: ["time", "nv"], values: [-12, 0, 0, 12, 12, 24, 24, 36, 36, 48] },
    };
    const made = gridOf(
      [0, 12, 24, 36, 48],
      { units: "h since 1998-4-19 6:0:0", bounds: "time_bnds" },
      example,
    );
    expect((await refused(made)).facts.name).toBe("layers.within-day");
    expect((await refused(gridOf([0, 12], { units: "hours since 2001-01-01" }))).facts.name).toBe(
      "layers.within-day",
    );
  });
  test("climatological bounds (§7.4) are refused", async () => {
    const made = gridOf([15, 45], { ...days, climatology: "climatology_bounds" });
    expect((await refused(made)).facts.name).toBe("layers.climatology");
  });
  test.each([
    ["months since 2001-01-01", undefined, "layers.time-units"],
    ["days since 2001-01-01", "none", "layers.calendar"],
    ["days since 2001-02-30", "standard", "layers.time-reference"],
  ])("%s, calendar %s: a clean error with file and variable", async (units, calendar, name) => {
    const error = await refused(gridOf([0, 1], { units, ...(calendar === undefined ? {} : { calendar }) }));
    expect(error.facts.name).toBe(name);
    expect(error.facts.where).toEqual({ file: "made.nc", cell: "time" });
  });
  test("days that no year has are refused in the models' calendars; months are read", async () => {
    const daily = gridOf([58, 59], { ...days, calendar: "360_day" });
    const error = await refused(daily, { covers: "day" });
    expect(error.facts.name).toBe("layers.calendar-day");
    expect(error.facts.found).toBe("29.2.2001 in the 360_day calendar");
    const monthly = gridOf([15, 45], { ...days, calendar: "360_day" });
    expect((await dates(monthly)).periods[1]).toBe("2001-02-01/2001-03-01");
  });
  test("months since can be dated by first and step instead", async () => {
    const made = gridOf([0, 1], { units: "months since 2001-01-01" });
    const { periods } = await dates(made, { date: { first: "2001-01", step: "month" } });
    expect(periods).toEqual(["2001-01-01/2001-02-01", "2001-02-01/2001-03-01"]);
  });
  test("one file a year is one series", async () => {
    const files = {
      "a_2001.nc": madeClassic(gridOf([14, 365 - 15], days)),
      "a_2002.nc": madeClassic(gridOf([365 + 14, 730 - 15], days)),
    };
    const plan = await planLayers("x", { ...OPTIONS, files: ["a_*.nc"] }, effectsOf(files).files);
    expect(plan.images.map((one) => isoDay(one.start))).toEqual([
      "2001-01-01",
      "2001-12-01",
      "2002-01-01",
      "2002-12-01",
    ]);
    expect(plan.findings.map((one) => one.kind)).toEqual(["layer-gap", "layer-gap"]);
  });
});

describe("bounds of cells", () => {
  const cells = (bounds: readonly number[], attributes: Readonly<Record<string, string>>): Made => {
    const made = gridOf([0], days);
    return {
      ...made,
      variables: {
        ...made.variables,
        lat: { dimensions: ["lat"], values: [50, 49], attributes: { units: "degrees_north", ...attributes } },
        lat_bnds: { dimensions: ["lat", "nv"], values: bounds },
      },
    };
  };
  // CF 1.11 §7.1, example "Cells on a latitude axis": latitude i has the interval from lat_bnds(i, 0) to lat_bnds(i, 1).
  test("bounds say where a cell lies, in either order; without them the coordinate is its middle", async () => {
    // The place at 49.4 lies in the second cell by its bounds [49, 50] whose coordinate is its southern edge; and
    // in the second cell by middles too, but at 49.6 only the bounds put it there.
    const at = async (made: Made) =>
      (
        await extractLayers(
          "x",
          OPTIONS,
          [{ place: { type: "point", name: "here", position: [8.6, 49.6] }, use: { by: "nearest" } }],
          effectsOf({ "made.nc": madeClassic(made) }),
        )
      ).series[0].values[0];
    expect(await at(cells([50, 51, 49, 50], { bounds: "lat_bnds" }))).toBe(0.3);
    expect(await at(cells([51, 50, 50, 49], { bounds: "lat_bnds" }))).toBe(0.3);
    expect(await at(cells([50, 51, 49, 50], {}))).toBe(0.1);
  });
  test("gaps between cells are refused by name", async () => {
    const error = await refused(cells([50, 51, 48, 49], { bounds: "lat_bnds" }));
    expect(error.facts.name).toBe("layers.irregular-axis");
  });
});

describe("cell methods (CF 1.11 §7.3)", () => {
  test.each([
    ["time: mean", ["mean"]],
    ["area: mean time: sum (interval: 1 hour comment: time: none)", ["sum"]],
    ["time: maximum within days time: mean over days", ["maximum", "mean"]],
    ["lat: lon: standard_deviation", []],
    ["time: lat: lon: mean", ["mean"]],
  ])("%s", (text, methods) => expect(methodsOverTime(text, "time")).toEqual(methods));
  test("a kind that contradicts them is found", async () => {
    const { findings, methods } = await read(gridOf([0, 31], days, {}, { cell_methods: "time: mean" }), {
      kind: "total",
    });
    expect(findings.map((one) => one.kind)).toEqual(["layer-methods"]);
    expect(methods?.text).toBe("time: mean");
    const { files } = effectsOf({
      "x.nc": madeClassic(gridOf([0, 31], days, {}, { cell_methods: "time: mean" })),
    });
    expect((await planLayers("x", { ...OPTIONS, files: ["x.nc"] }, files)).methods?.text).toBe("time: mean");
    expect(kindFinding("x", "f", "time: maximum within days time: mean over days", "time", "maximum")).toBe(
      undefined,
    );
    expect(kindFinding("x", "f", "time: mean", "time", "mean")).toBe(undefined);
    expect(kindFinding("x", "f", "time: point", "time", "mean")).toBe(undefined);
  });
  test.each([
    ["sum", "time: mean", true],
    ["mean", "time: mean", false],
    ["maximum", "time: mean", false],
    ["sum", "time: sum", false],
    ["maximum", "time: minimum", true],
    ["maximum", "time: maximum within days time: mean over days", false],
    ["sum", "time: point", false],
  ])("%s of %s", (statistic, text, found) => {
    const methods = { path: "f", text, time: "time" };
    expect(statisticFinding("c", statistic, "x", methods) !== undefined).toBe(found);
  });
});

describe("what cannot be settled is refused with what there is", () => {
  test("several variables, further dimensions, no axes", async () => {
    const two = gridOf([0], days, { w: { dimensions: ["time", "lat", "lon"], values: [0, 0, 0, 0] } });
    const { variable: _, ...without } = OPTIONS;
    const error = await planLayers("x", without, effectsOf({ "made.nc": madeClassic(two) }).files).catch(
      (one: unknown) => one,
    );
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).facts).toMatchObject({
      name: "layers.no-variable",
      expected: "a variable on a grid (v, w)",
      found: "2 of them",
    });
    const made = gridOf([0], days);
    const level: Made = {
      dimensions: { ...made.dimensions, level: 2 },
      variables: {
        ...made.variables,
        level: { dimensions: ["level"], values: [1000, 850], attributes: { units: "hPa" } },
        v: { dimensions: ["time", "level", "lat", "lon"], values: [0, 1, 2, 3, 4, 5, 6, 7] },
      },
    };
    expect((await refused(level)).facts).toMatchObject({
      name: "layers.further-dimension",
      expected: "one level of v: 1000, 850 (hPa)",
      remedy: "write e.g. select: { level: 1000 }",
    });
    expect((await refused(level, { select: { level: 500 } })).facts.found).toBe("500");
    expect((await refused(level, { select: { member: 1 } })).facts.name).toBe("layers.select");
    expect((await read(level, { select: { level: 850 } })).series[0].values[0]).toBe(7);
    expect((await refused(gridOf([0], days), { variable: "time" })).facts.name).toBe("layers.no-axes");
    expect((await refused(gridOf([0], days), { variable: "rain" })).facts.name).toBe("layers.no-variable");
  });
  test("a GeoTIFF cannot be dated by a time axis", async () => {
    const { coveredPeriod } = await import("../../../src/layers/cover.ts");
    expect(() => coveredPeriod(0, "bounds")).toThrow(/NetCDF/);
  });
});
