import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import type { Where } from "../../src/data/place.ts";
import { extractLayers } from "../../src/layers/extract.ts";
import type { LayerOptions, PlaceUse } from "../../src/layers/options.ts";
import { DATA, effectsBelow } from "./effects.ts";

// K_layers.json: values read by GDAL, coverage by exact polygon clipping (its source is stated in the file).
interface Case {
  readonly file: string;
  readonly area?: string;
  readonly geojson_rings?: readonly (readonly (readonly [number, number])[])[];
  readonly point?: readonly [number, number];
  readonly mean: number;
  readonly nearest: number;
  readonly valid_share: number;
}
const { cases } = JSON.parse(
  readFileSync(new URL("../reference/K_layers.json", import.meta.url), "utf8"),
) as { cases: readonly Case[] };

const OPTIONS: LayerOptions = {
  files: ["luxembourg-elevation.tif"],
  date: { first: "2000-02-11", step: "day" },
  covers: "day",
  unit: "m",
  kind: "mean",
};

describe("reference values of a real elevation layer (K_layers.json, relative 1e-9)", () => {
  const tifs = cases.filter((one) => one.file.endsWith(".tif"));
  test("there are six GeoTIFF cases", () => expect(tifs).toHaveLength(6));
  test.each(tifs)("$area $point", async (one) => {
    const place: Where =
      one.point === undefined
        ? { type: "area", name: "here", polygons: [one.geojson_rings ?? []] }
        : { type: "point", name: "here", position: one.point };
    const use: PlaceUse = one.point === undefined ? { by: "area", validArea: 0 } : { by: "nearest" };
    const { series, validShares } = await extractLayers(
      "elevation",
      OPTIONS,
      [{ place, use }],
      effectsBelow(DATA),
    );
    const expected = one.point === undefined ? one.mean : one.nearest;
    expect(Math.abs(series[0].values[0] / expected - 1)).toBeLessThan(1e-9);
    if (one.point === undefined) expect(Math.abs(validShares[0][0] / one.valid_share - 1)).toBeLessThan(1e-9);
  });
});

interface GridCase extends Omit<Case, "mean" | "valid_share"> {
  readonly variable: string;
  readonly months: readonly string[];
  readonly mean: readonly number[];
  readonly valid_share: readonly number[];
}

describe("reference values of a real monthly NetCDF file (K_layers.json, relative 1e-9)", () => {
  const grids = cases.filter((one) => one.file.endsWith(".nc")) as unknown as readonly GridCase[];
  test("there are four NetCDF cases", () => expect(grids).toHaveLength(4));
  test.each(grids)("$variable over $area", async (one) => {
    const place: Where = { type: "area", name: "here", polygons: [one.geojson_rings ?? []] };
    const options: LayerOptions = {
      files: [one.file],
      date: { axis: "time" },
      covers: "month",
      variable: one.variable,
      unit: "1",
      kind: one.variable === "pr" ? "total" : "mean",
    };
    const use: PlaceUse = { by: "area", validArea: 0 };
    const { series, validShares } = await extractLayers("x", options, [{ place, use }], effectsBelow(DATA));
    expect(Array.from(series[0].starts, (day) => isoDay(day).slice(0, 7))).toEqual(one.months);
    one.mean.forEach((mean, i) => {
      expect(Math.abs(series[0].values[i] / mean - 1)).toBeLessThan(1e-9);
      expect(Math.abs(validShares[0][i] / one.valid_share[i] - 1)).toBeLessThan(1e-9);
    });
  });
});
