import { readdirSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { describe, expect, test } from "vitest";
import { extractLayers } from "../../../src/layers/extract.ts";
import type { LayerOptions, Wanted } from "../../../src/layers/options.ts";
import { effectsBelow } from "../effects.ts";

// test/data/netcdf/make.py: files written by netCDF4 and h5py, values as netCDF4 reads them, positions by PROJ.
const FOLDER = fileURLToPath(new URL("../../data/netcdf", import.meta.url));
interface Expected {
  readonly variable: string;
  /** [time][lat][lon]; null is missing. */
  readonly values: readonly (number | null)[];
  readonly lats?: readonly number[];
  readonly lons?: readonly number[];
  readonly cells?: readonly (readonly [number, number])[];
}
const EXPECTED = JSON.parse(readFileSync(`${FOLDER}/expected.json`, "utf8")) as Record<string, Expected>;

const LATS = [52.5, 52, 51.5, 51, 50.5, 50];
const LONS = [7, 7.5, 8, 8.5, 9, 9.5, 10, 10.5];
const OWN: Readonly<Record<string, Partial<LayerOptions>>> = {
  "one-record.nc": { date: { first: "2001-01", step: "month" } },
  "level-member.nc": { select: { member: "r2i1p1f1", level: 850 } },
  "quality.nc": {
    quality: {
      variable: "qa",
      pass: [
        { bits: [0, 1], values: [0, 1] },
        { bits: [2, 2], values: [0] },
      ],
    },
  },
};

function cellsOf(path: string, { lats = LATS, lons = LONS, cells }: Expected) {
  if (cells !== undefined) return cells;
  if (path === "one-record.nc")
    return [0, 1, 2, 3, 4, 5].flatMap((lat) => [0, 1, 2, 3, 4, 5, 6].map((lon) => [lon, lat] as const));
  const falling = path === "lon-falling.nc" ? [...LONS].reverse() : lons;
  return lats.flatMap((lat) => falling.map((lon) => [lon, lat] as const));
}

function wantedOf(path: string, expected: Expected): readonly Wanted[] {
  return cellsOf(path, expected).map(([lon, lat], i) => ({
    place: { type: "point", name: `p${i}`, position: [lon, lat] },
    use: { by: "nearest" },
  }));
}

function optionsOf(path: string, { variable }: Expected): LayerOptions {
  return {
    files: [path],
    date: { axis: "time" },
    covers: "month",
    variable,
    unit: "1",
    kind: "mean",
    ...OWN[path],
  };
}

describe("files of other programs, value by value bit-equal to the Python binding", () => {
  test("every file but the refused ones is in the table", () => {
    const refused = ["expected.json", "make.py", "two-dimensional.nc", "lagging.nc"];
    const files = readdirSync(FOLDER).filter((name) => !refused.includes(name));
    expect(files.sort()).toEqual(Object.keys(EXPECTED).sort());
  });
  test.each(Object.entries(EXPECTED))("%s", async (path, expected) => {
    const wanted = wantedOf(path, expected);
    const { series } = await extractLayers("x", optionsOf(path, expected), wanted, effectsBelow(FOLDER));
    const [first] = series;
    expect(Array.from(first.starts)).toEqual([11323, 11354, 11382, 11413]); // January to April 2001
    const off: string[] = [];
    series.forEach(({ values }, cell) =>
      values.forEach((value, image) => {
        const other = expected.values[image * series.length + cell] ?? Number.NaN;
        if (!Object.is(value, other) && off.length < 5) off.push(`${image}, ${cell}: ${value}, not ${other}`);
      }),
    );
    expect(off).toEqual([]);
    expect(expected.values).toHaveLength(4 * series.length);
  });
});
