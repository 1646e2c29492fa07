import { describe, expect, test } from "vitest";
import { parse } from "yaml";
import { guessPattern, layerStanza } from "../../src/inspect/layer-stanza.ts";
import { lookLayer } from "../../src/inspect/look-layer.ts";
import { DATA, filesBelow } from "../layers/effects.ts";

const files = filesBelow(DATA);

describe("a look at a layer", () => {
  test("a real elevation layer: size, system, ground size, missing pixels and range as gdalinfo and K_layers say", async () => {
    const look = await lookLayer("luxembourg-elevation.tif", files);
    expect(look).toMatchObject({
      width: 95,
      height: 90,
      bytes: 7994,
      type: "int16",
      compression: "LZW",
      layout: "strips of 95 × 43",
      system: "EPSG:4326",
      systemKnown: true,
      nodataText: "-32768",
      mask: "none",
      reducedImages: 0,
    });
    // gdalinfo: minimum 141, maximum 547; corners 5.7416667 E 49.4416667 N to 6.5333333 E 50.1916667 N.
    expect([look.bands[0].least, look.bands[0].greatest, look.bands[0].nodata]).toEqual([141, 547, -32768]);
    expect(look.bands[0].description).toBe("elevation");
    [5.7416667, 49.4416667, 6.5333333, 50.1916667].forEach((bound, i) => {
      expect(look.bounds[i]).toBeCloseTo(bound, 6);
    });
    // A degree at 49.8 N has 111,226 m of latitude and 71,970 m of longitude on WGS 84 (series of the meridian arc
    // and parallel, common tables); a 120th of each.
    expect(look.pixelMetres[1]).toBeCloseTo(111226 / 120, 0);
    expect(look.pixelMetres[0]).toBeCloseTo(71970 / 120, 0);
  });

  test("a system of its own, scale and offset of each band, missing share and mask", async () => {
    const bands = await lookLayer("layers/meta-bands.tif", files);
    expect(bands.bands.map((band) => [band.scale, band.offset, band.unit])).toEqual([
      [0.0001, 0, "K & more"],
      [0.5, -273.15, "K & more"],
      [2, 1, "K & more"],
    ]);
    const masked = await lookLayer("layers/mask-beside.tif", files);
    // make.py masks 5 × 11 of 13 × 21 pixels.
    expect(masked.bands[0].missingShare).toBeCloseTo(55 / 273, 12);
    expect(masked.mask).toBe("beside the file");
    expect((await lookLayer("layers/sys-laea-km.tif", files)).pixelMetres[0] / 20000).toBeCloseTo(1, 2);
  });

  test("an unknown system is told, and the stanza asks for it", async () => {
    const look = await lookLayer("layers/geo-tfw.tif", files);
    expect(look.systemKnown).toBe(false);
    expect(look.system).toContain("unknown");
    expect(look.pixelMetres[0]).toBeNaN();
    expect(look.stanza).toContain("system: EPSG:");
    expect(look.beside).toEqual(["layers/geo-tfw.tfw"]);
  });
});

describe("the stanza to paste", () => {
  test.each([
    ["layers/green_2001_02.tif", "layers/green_*.tif", "green_{yyyy}_{MM}", "month"],
    ["MX.A2004033.h18v03.tif", "MX.A*.h18v03.tif", "MX.A{yyyy}{DDD}.h18v03", "day"],
    ["rain19990131.tif", "rain*.tif", "rain{yyyy}{MM}{dd}", "day"],
    ["snow-1999.tif", "snow-*.tif", "snow-{yyyy}", "year"],
  ])("%s", (path, glob, pattern, covers) => {
    const stanza = parse(layerStanza(path, [""], "mm", true)) as { layers: Record<string, unknown> };
    const [layer] = Object.values(stanza.layers);
    expect(layer).toEqual({ files: [glob], date: { name: pattern }, covers, unit: "mm", kind: "mean" });
  });

  test("bands that carry their dates", () => {
    const text = layerStanza("snow.tif", ["snow 2001-12", "snow 2002-01"], "", false);
    expect(parse(text)).toEqual({
      layers: {
        snow: {
          files: ["snow.tif"],
          date: { band: "snow {yyyy}-{MM}" },
          covers: "month",
          unit: "1",
          kind: "mean",
          system: "EPSG:0000",
        },
      },
    });
  });

  test("no date", () => expect(guessPattern("elevation")).toBeUndefined());
});
