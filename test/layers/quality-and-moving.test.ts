import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, test } from "vitest";
import { dayOf } from "../../src/data/day.ts";
import type { Fix, MovingPlace } from "../../src/data/place.ts";
import { extractLayers } from "../../src/layers/extract.ts";
import { fixesIn } from "../../src/layers/moving.ts";
import type { LayerOptions, Wanted } from "../../src/layers/options.ts";
import { qualityTest } from "../../src/layers/quality.ts";
import { refusalsOf } from "../../src/layers/refusals.ts";
import { readFixes } from "../../src/study/fixes.ts";
import { effectsBelow, effectsOf, madeTiff } from "./effects.ts";

const FOLDER = fileURLToPath(new URL("../data/netcdf", import.meta.url));

/** Four by one pixels of a degree from 8 E, 50 N, in one strip. */
function tif(values: readonly number[], bits: 8 | 32): Uint8Array {
  const bytes = bits === 8 ? Uint8Array.from(values) : new Uint8Array(Float32Array.from(values).buffer);
  return madeTiff(
    {
      256: [4],
      257: [1],
      258: [bits],
      259: [1],
      273: [],
      277: [1],
      278: [1],
      279: [bytes.length],
      339: [bits === 8 ? 1 : 3],
      33550: [1, 1, 0],
      33922: [0, 0, 0, 8, 50, 0],
    },
    [bytes],
  );
}
const OPTIONS: LayerOptions = {
  files: ["v_*.tif"],
  date: { name: "v_{yyyy}_{MM}" },
  covers: "month",
  unit: "1",
  kind: "mean",
  system: "EPSG:4326",
};
const FILES = {
  "v_2001_01.tif": tif([1, 2, 3, 4], 32),
  "v_2001_02.tif": tif([5, 6, 7, 8], 32),
  "v_2001_03.tif": tif([9, 10, 11, 12], 32),
  "q_2001_01.tif": tif([0b00, 0b01, 0b10, 0b11], 8),
  "q_2001_02.tif": tif([0b101, 0, 0, 0b100], 8),
};
const area: Wanted = {
  place: {
    type: "area",
    name: "all",
    polygons: [
      [
        [
          [8, 49],
          [12, 49],
          [12, 50],
          [8, 50],
          [8, 49],
        ],
      ],
    ],
  },
  use: { by: "area", validArea: 0.6 },
};

describe("bits of quality", () => {
  // By hand: 0b1011_0110 = 182 has bits 1–2 = 0b11 = 3, bits 4–7 = 0b1011 = 11.
  test("fields are counted from the lowest bit", () => {
    expect(qualityTest([{ bits: [1, 2], values: [3] }])(182)).toBe(true);
    expect(qualityTest([{ bits: [4, 7], values: [11] }])(182)).toBe(true);
    expect(qualityTest([{ bits: [0, 0], values: [1] }])(182)).toBe(false);
    expect(qualityTest([{ values: [182] }])(182)).toBe(true);
    expect(qualityTest([{ bits: [30, 31], values: [3] }])(-1)).toBe(true);
    expect(qualityTest([{ bits: [0, 31], values: [2 ** 32 - 1] }])(2 ** 32 - 1)).toBe(true);
    expect(qualityTest([{ values: [0] }])(Number.NaN)).toBe(false);
  });
  const quality = { files: ["q_*.tif"], date: { name: "q_{yyyy}_{MM}" } as const };
  test("refuses pixel by pixel before averaging; the share counts, missing quality is told", async () => {
    const options: LayerOptions = {
      ...OPTIONS,
      quality: {
        ...quality,
        pass: [
          { bits: [0, 1], values: [0, 1] },
          { bits: [2, 2], values: [0] },
        ],
      },
    };
    const out = await extractLayers("v", options, [area], effectsOf(FILES));
    // January passes pixels 1 and 2 (mean 1.5, half the area: below 0.6), February 2 and 3; March has no quality.
    expect(Array.from(out.validShares[0])).toEqual([0.5, 0.5, 0]);
    expect(out.series[0].values.every(Number.isNaN)).toBe(true);
    expect(Array.from(out.refused[0])).toEqual([0.5, 0.5, 1]);
    expect(out.findings.map((one) => one.kind)).toEqual(["layer-valid-area", "layer-quality"]);
    const lower = { ...area, use: { by: "area", validArea: 0.5 } } as const;
    const again = await extractLayers("v", options, [lower], effectsOf(FILES));
    expect(Array.from(again.series[0].values)).toEqual([1.5, 6.5, Number.NaN]);
    expect(refusalsOf("v", [lower], again)[0]).toMatchObject({
      images: 3,
      touched: 3,
      greatest: 1,
      worst: dayOf(2001, 3, 1),
      missing: 1,
    });
  });
  test("kept values are not taken for those of another quality", async () => {
    const effects = effectsOf(FILES);
    const lower = { ...area, use: { by: "area", validArea: 0 } } as const;
    const mean = async (values: readonly number[]) =>
      (
        await extractLayers(
          "v",
          { ...OPTIONS, quality: { ...quality, pass: [{ bits: [0, 1], values }] } },
          [lower],
          effects,
        )
      ).series[0].values[0];
    expect(await mean([0])).toBe(1);
    expect(await mean([3])).toBe(4);
    expect(await mean([0])).toBe(1);
  });
  test("quality on another grid is refused by name", async () => {
    const other = {
      ...FILES,
      "q_2001_01.tif": madeTiff(
        {
          256: [2],
          257: [1],
          258: [8],
          259: [1],
          273: [],
          277: [1],
          278: [1],
          279: [2],
          33550: [2, 1, 0],
          33922: [0, 0, 0, 8, 50, 0],
        },
        [Uint8Array.of(0, 0)],
      ),
    };
    const options = { ...OPTIONS, quality: { ...quality, pass: [{ values: [0] }] } };
    await expect(extractLayers("v", options, [area], effectsOf(other))).rejects.toMatchObject({
      facts: { name: "layers.quality-grid" },
    });
  });
});

const fix = (month: number, day: number, longitude: number, animal = ""): Fix => ({
  time: dayOf(2001, month, day),
  position: [longitude, 49.5],
  animal,
});
const moving = (fixes: readonly Fix[], more: Partial<MovingPlace> = {}): Wanted => ({
  place: { type: "moving", name: "bats", fixes, weigh: "fixes", least: 1, ...more },
  use: { by: "nearest" },
});

describe("a place that moves", () => {
  test("each image is read where the fixes of its period are", async () => {
    const place = moving([fix(1, 2, 8.5), fix(1, 3, 8.6), fix(1, 4, 11.5), fix(2, 5, 9.5)]);
    const { series, validShares, findings } = await extractLayers("v", OPTIONS, [place], effectsOf(FILES));
    expect(Array.from(series[0].values)).toEqual([2, 6, Number.NaN]); // (1 + 1 + 4) / 3; pixel 2; no fix
    expect(Array.from(validShares[0])).toEqual([1, 1, 0]);
    expect(findings.map((one) => [one.kind, one.count])).toEqual([["few-fixes", 1]]);
  });
  test("by time a burst counts no more than the time it lasted", async () => {
    // Midpoints: 1 to 1.5 January stands for fix 1, … the third from 2.5 January to the month's end.
    const place = moving([fix(1, 1, 8.5), fix(1, 2, 8.5), fix(1, 3, 11.5)], { weigh: "time" });
    const { series } = await extractLayers("v", OPTIONS, [place], effectsOf(FILES));
    expect(series[0].values[0]).toBeCloseTo((1 * 1.5 + 4 * 29.5) / 31, 12);
  });
  test("weights by time add up to the period for each animal", () => {
    const { place } = moving([fix(1, 3, 8, "a"), fix(1, 9, 8, "b"), fix(1, 20, 8, "a")], { weigh: "time" });
    const weighed = fixesIn(place as MovingPlace, { start: dayOf(2001, 1, 1), end: dayOf(2001, 2, 1) });
    const of = (animal: string) =>
      weighed.filter((one) => one.fix.animal === animal).reduce((sum, one) => sum + one.weight, 0);
    expect([of("a"), of("b")]).toEqual([31, 31]);
  });
  test("too few fixes are missing and a finding", async () => {
    const place = moving([fix(1, 2, 8.5), fix(1, 3, 8.6), fix(2, 5, 9.5)], { least: 2 });
    const { series, findings } = await extractLayers("v", OPTIONS, [place], effectsOf(FILES));
    expect(Array.from(series[0].values)).toEqual([1, Number.NaN, Number.NaN]);
    expect(findings[0].message).toContain("2 of 3 images have fewer than 2 fixes");
  });
  test("in NetCDF, chunks of several images: as images one by one", async () => {
    const expected = JSON.parse(readFileSync(`${FOLDER}/expected.json`, "utf8"))["chunks-time.nc"].values;
    const options: LayerOptions = {
      ...OPTIONS,
      files: ["chunks-time.nc"],
      date: { axis: "time" },
      variable: "x",
    };
    const place = moving([
      { time: dayOf(2001, 1, 9), position: [7, 52.5], animal: "" },
      { time: dayOf(2001, 3, 9), position: [10.5, 50], animal: "" },
      { time: dayOf(2001, 3, 10), position: [7.5, 52.5], animal: "" },
    ]);
    const still: Wanted = { place: { type: "point", name: "p", position: [8, 52] }, use: { by: "nearest" } };
    const { series } = await extractLayers("x", options, [place, still], effectsBelow(FOLDER));
    expect(series[0].values[0]).toBe(expected[0]);
    expect(series[0].values[1]).toBeNaN();
    expect(series[0].values[2]).toBeCloseTo((expected[2 * 48 + 47] + expected[2 * 48 + 1]) / 2, 12);
    expect(series[1].values[3]).toBe(expected[3 * 48 + 8 + 2]);
  });
});

describe("a table of fixes", () => {
  const options = {
    fixes: "f.csv",
    date: "time",
    format: "yyyy-MM-dd",
    longitude: "lon",
    latitude: "lat",
    where: {},
    weigh: "fixes",
    least: 5,
  } as const;
  const read = (text: string, more = {}) =>
    readFixes("bats", { ...options, ...more }, { readText: async () => text });
  test("times of day, offsets, rows without a position, rows of another colony", async () => {
    const text =
      "time,lon,lat,colony\n2001-01-02 06:00,8.5,49.5,a\n2001-01-01T23:00:00+02:00,8.6,49.5,a\n2001-01-03,,,a\n2001-01-04,9,49,b\n";
    const { place, findings } = await read(text, { where: { colony: "a" } });
    expect(place.fixes.map((one) => one.time - dayOf(2001, 1, 1))).toEqual([21 / 24, 1.25]);
    expect(findings.map((one) => one.count)).toEqual([1]);
  });
  test.each([
    ["time,lon,lat\n01.02.2001,8,49\n", "study.fix-date"],
    ["time,lon,lat\n2001-02-30,8,49\n", "study.fix-date"],
    ["time,lon,lat\n2001-02-03 25:00,8,49\n", "study.fix-date"],
    ["time,lon,lat\n2001-02-03,8,94\n", "study.fix-position"],
    ['time,lon,lat\n2001-02-03,"8,5",49\n', "study.fix-position"],
    ["time,lon,lat\n2001-02-03,8,\n", "study.fix-position"],
    ["time,lon,lat\n", "study.no-fixes"],
  ])("%j is refused", async (text, name) => {
    await expect(read(text)).rejects.toMatchObject({ facts: { name } });
  });
});
