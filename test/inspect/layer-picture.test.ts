import { decode } from "fast-png";
import { describe, expect, test } from "vitest";
import { guessDates } from "../../src/inspect/layer-dates.ts";
import { layerPicture } from "../../src/inspect/layer-picture.ts";
import { DATA, filesBelow } from "../layers/effects.ts";

const files = filesBelow(DATA);
const LAYER = "luxembourg-elevation.tif";
const point = (lon: number, lat: number) => ({
  file: "p.geojson",
  text: JSON.stringify({ type: "Point", coordinates: [lon, lat] }),
});
const picture = (places: ReturnType<typeof point> | undefined, exact = false) =>
  layerPicture(LAYER, files, { places, exact, coarsenKm: 10 });
/** Pixels that have the ink of places. */
function inked(png: Uint8Array): readonly (readonly [number, number])[] {
  const { width, data } = decode(png);
  const out: [number, number][] = [];
  for (let i = 0; i < data.length; i += 3)
    if (data[i] === 200 && data[i + 1] === 30 && data[i + 2] === 60)
      out.push([(i / 3) % width, Math.floor(i / 3 / width)]);
  return out;
}

describe("a layer's picture", () => {
  test("six picture pixels a layer pixel here; the share of grey is the layer's share of missing pixels", async () => {
    const png = await picture(undefined);
    const { width, height, channels, data } = decode(png);
    expect([width, height, channels]).toEqual([570, 540, 3]);
    let grey = 0;
    for (let i = 0; i < data.length; i += 3)
      if (data[i] === data[i + 1] && data[i + 1] === data[i + 2] && data[i] >= 190) grey++;
    // gdalinfo -stats: 53.89 % of the pixels are valid.
    expect(grey / (width * height)).toBeCloseTo(0.4611, 3);
    expect(inked(png)).toEqual([]);
    expect(await picture(undefined)).toEqual(png);
  });

  test("a place is drawn as the square that holds it: two roosts of one cell give the same bytes", async () => {
    const one = await picture(point(6.13, 49.61));
    expect(await picture(point(6.131, 49.612))).toEqual(one);
    const [xs, ys] = [inked(one).map(([x]) => x), inked(one).map(([, y]) => y)];
    // 10 km of 926.9 m a pixel, six picture pixels each, and the line's own width.
    expect(Math.max(...ys) - Math.min(...ys)).toBeGreaterThan(60);
    expect(Math.max(...ys) - Math.min(...ys)).toBeLessThan(72);
    expect(Math.max(...xs) - Math.min(...xs)).toBeGreaterThan(95);
    const exact = inked(await picture(point(6.13, 49.61), true));
    // 6.13 E 49.61 N lies (6.13 − 5.7416667) × 120 × 6 pixels right of and 0.5816667 × 720 below the corner.
    const middle = [0, 1].map((k) => exact.reduce((sum, at) => sum + at[k], 0) / exact.length);
    expect(Math.abs(middle[0] - 279.6)).toBeLessThan(1);
    expect(Math.abs(middle[1] - 418.8)).toBeLessThan(1);
  });

  test("a place beyond the layer leaves it as it is", async () => {
    expect(inked(await picture(point(-120, 10)))).toEqual([]);
  });
});

describe("dates that a file seems to have", () => {
  test.each([
    ["a/green_2009_05.tif", [""], ["2009-05-01 to 2009-05-31"]],
    ["x.tif", ["green 2001-01 <R&D>", "2001-02"], ["2001-01-01 to 2001-01-31", "2001-02-01 to 2001-02-28"]],
    ["x.tif", ["elevation"], []],
    ["x.tif", ["2001-01", "none"], []],
  ] as const)("%s %j", (path, bands, expected) => expect(guessDates(path, bands)).toEqual(expected));
});
