import { readFileSync } from "node:fs";
import { join } from "node:path";
import { deflateSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import type { Where } from "../../src/data/place.ts";
import { InputError } from "../../src/errors.ts";
import { extractLayers } from "../../src/layers/extract.ts";
import type { LayerOptions } from "../../src/layers/options.ts";
import { planLayers } from "../../src/layers/plan.ts";
import { DATA, effectsOf, madeTiff } from "./effects.ts";

// What a common reader of TIFF files was measured to get wrong without a word, row by row: each either comes out as GDAL
// reads it (test/data/layers/expected.json, made by make.py) or is refused by name. Bit-equality of every fixture is held in
// gdal.test.ts; here each row of the list has a line of its own.
const fixture = (name: string) => new Uint8Array(readFileSync(join(DATA, "layers", name)));
const expected = JSON.parse(readFileSync(join(DATA, "layers/expected.json"), "utf8"));

const OPTIONS: LayerOptions = {
  files: ["x.tif"],
  date: { first: "2001-01", step: "month" },
  covers: "month",
  unit: "1",
  kind: "mean",
};
/** The whole of a fixture in UTM. */
const around: Where = {
  type: "area",
  name: "around",
  polygons: [
    [
      [
        [8.9, 49.5],
        [9.2, 49.5],
        [9.2, 49.7],
        [8.9, 49.7],
        [8.9, 49.5],
      ],
    ],
  ],
};

/** The error's name, or "read". */
async function outcome(bytes: Uint8Array, options: Partial<LayerOptions> = {}): Promise<string> {
  const wanted = [{ place: around, use: { by: "area", validArea: 0 } as const }];
  try {
    await extractLayers("x", { ...OPTIONS, ...options }, wanted, effectsOf({ "x.tif": bytes }));
    return "read";
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    expect(error.facts.where?.file).toBe("x.tif");
    return error.facts.name;
  }
}
const cut = (name: string) => fixture(name).slice(0, -40);

/** Share of pixels with a value, over all of a fixture. */
async function validShare(name: string): Promise<number> {
  const files = { "x.tif": fixture(name) };
  const wanted = [{ place: around, use: { by: "area", validArea: 0 } as const }];
  const { series, validShares } = await extractLayers("x", OPTIONS, wanted, effectsOf(files));
  const whole = await extractLayers(
    "x",
    OPTIONS,
    wanted,
    effectsOf({ "x.tif": fixture("c-none-float32.tif") }),
  );
  expect(Number.isFinite(series[0].values[0])).toBe(true);
  return validShares[0][0] / whole.validShares[0][0];
}

describe("truncated and corrupt files end in an error with the file's name", () => {
  test.each([
    ["truncated, uncompressed", cut("c-none-float32.tif")],
    ["truncated, Zstandard", cut("c-zstd-float32.tif")],
    ["truncated deflate", cut("c-deflate-float32.tif")],
    [
      "corrupt deflate",
      madeTiff(
        {
          256: [4],
          257: [4],
          258: [8],
          259: [8],
          273: [],
          277: [1],
          278: [4],
          279: [deflateSync(new Uint8Array(16)).length],
          33550: [30, 30, 0],
          33922: [0, 0, 0, 500000, 5500000, 0],
        },
        // The last byte is part of the checksum.
        [
          new Uint8Array(deflateSync(new Uint8Array(16))).map((byte, i, all) =>
            i === all.length - 1 ? byte ^ 1 : byte,
          ),
        ],
      ),
    ],
    ["truncated header", fixture("c-none-int16.tif").slice(0, 8)],
  ])("%s", async (_, bytes) =>
    expect(await outcome(bytes, { system: "EPSG:32632" })).toBe("layers.broken-file"),
  );
});

describe("what was misread is read as GDAL reads it", () => {
  test.each([
    ["big-endian with predictor 2", "big-deflate2-int16.tif"],
    ["big-endian with predictor 2, float32", "big-deflate2-float32.tif"],
    ["big-endian with predictor 3", "big-p3-float32.tif"],
    ["big-endian, many tiles", "big-many-tiles.tif"],
    ["PixelIsPoint", "geo-point.tif"],
    ["south-up", "geo-southup.tif"],
    ["rotated", "geo-rotated.tif"],
    ["nodata inf", "nd-inf.tif"],
    ["nodata −inf", "nd-minf.tif"],
    ["nodata −99.9 on float32", "nd-float32-frac.tif"],
    ["nodata 1e20 on float32", "nd-float32-1e20.tif"],
    ["scale, offset, descriptions, units escaped twice", "meta-bands.tif"],
    [".aux.xml", "meta-side.tif"],
    [".tfw", "geo-tfw.tif"],
    [".msk", "mask-beside.tif"],
    ["internal mask", "mask-internal.tif"],
    ["float64 with predictor 2", "p2-float64.tif"],
  ])("%s: %s is among the fixtures held to GDAL bit for bit", (_, name) => {
    expect(expected[name]?.bands[0].sha256).toMatch(/^[0-9a-f]{64}$/);
  });

  test("nodata of every such spelling takes pixels out", async () => {
    for (const name of [
      "nd-inf.tif",
      "nd-minf.tif",
      "nd-float32-frac.tif",
      "nd-float32-1e20.tif",
      "nd-nan.tif",
    ]) {
      const { width, height, bands } = expected[name];
      expect(bands[0].valid).toBeLessThan(width * height);
      expect(await validShare(name)).toBeLessThan(1);
    }
  });

  test("a window outside the image is missing, not 0", async () => {
    const place: Where = { type: "point", name: "far", position: [120, -30] };
    const { series, findings } = await extractLayers(
      "x",
      OPTIONS,
      [{ place, use: { by: "nearest" } }],
      effectsOf({ "x.tif": fixture("c-none-int16.tif") }),
    );
    expect([...series[0].values]).toEqual([Number.NaN]);
    expect(findings.map((one) => one.kind)).toContain("place-outside");
  });
});

describe("what is not read is refused by name before the run starts", () => {
  const points = madeTiff(
    {
      256: [4],
      257: [4],
      258: [8],
      259: [1],
      273: [],
      277: [1],
      278: [4],
      279: [16],
      33922: [0, 0, 0, 8, 50, 0, 4, 0, 0, 9, 50, 0, 4, 4, 0, 9, 49, 0],
    },
    [new Uint8Array(16)],
  );
  test.each([
    ["int64", fixture("no-int64.tif"), "layers.unsupported-type", "int64"],
    ["complex", fixture("no-complex.tif"), "layers.unsupported-type", "complex"],
    ["CCITT", fixture("no-ccittfax4.tif"), "layers.unsupported-compression", "CCITT"],
    ["LZMA", fixture("no-lzma.tif"), "layers.unsupported-compression", "LZMA"],
    ["WebP", fixture("no-webp.tif"), "layers.unsupported-compression", "WebP"],
    ["control points only", points, "layers.unsupported-georeference", "3 control points"],
  ])("%s", async (_, bytes, name, word) => {
    const facts = await planLayers("x", OPTIONS, effectsOf({ "x.tif": bytes }).files).then(
      () => undefined,
      (error: InputError) => error.facts,
    );
    expect(facts?.name).toBe(name);
    expect(facts?.found).toContain(word);
    expect(facts?.where?.file).toBe("x.tif");
  });
});
