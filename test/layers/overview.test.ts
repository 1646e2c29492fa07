import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { readOverview } from "../../src/layers/overview.ts";
import { DATA, filesBelow } from "./effects.ts";

const files = filesBelow(DATA);

describe("overviews for maps", () => {
  test("the full image, then means of blocks of pixels", async () => {
    const full = await readOverview("luxembourg-elevation.tif", {}, 95 * 90, files);
    expect([full.width, full.height]).toEqual([95, 90]);
    const quarter = await readOverview("luxembourg-elevation.tif", {}, 2500, files);
    expect([quarter.width, quarter.height]).toEqual([48, 45]);
    const cells = [0, 1, 95, 96].map((i) => full.values[40 * 95 + 40 + i]);
    const valid = cells.filter((one) => !Number.isNaN(one));
    const mean = valid.reduce((sum, one) => sum + one, 0) / valid.length;
    expect(quarter.values[20 * 48 + 20]).toBeCloseTo(mean, 10);
    // K_layers.json: the elevation at 6.13 E 49.61 N is 300 m.
    const [x, y] = full.toPixel([6.13, 49.61]);
    expect(full.values[Math.floor(y) * 95 + Math.floor(x)]).toBe(300);
    const [lon, lat] = quarter.toLonLat(...quarter.toPixel([6.13, 49.61]));
    expect(lon).toBeCloseTo(6.13, 12);
    expect(lat).toBeCloseTo(49.61, 12);
    expect(full.bounds[0]).toBeCloseTo(5.7416667, 6);
  });

  test("a reduced image is used where it is large enough; same grid, same ground", async () => {
    const name = "layers/overviews.tif";
    const full = await readOverview(name, {}, 96 * 64, files);
    const half = await readOverview(name, {}, 48 * 32, files);
    expect([full.width, half.width, half.height]).toEqual([96, 48, 32]);
    expect(half.affine.a).toBe(2 * full.affine.a);
    // GDAL made it by averaging 2 × 2 pixels; none is missing.
    half.values.forEach((value, i) => {
      const [r, c] = [Math.floor(i / 48) * 2, (i % 48) * 2];
      const four = [0, 1, 96, 97].map((step) => full.values[r * 96 + c + step]);
      expect(value).toBeCloseTo(four.reduce((sum, one) => sum + one, 0) / 4, 5);
    });
  });

  test("scale, fill and valid range are those of the pipeline", async () => {
    const plain = await readOverview(join("layers", "nd-int16.tif"), {}, 77, files);
    const scaled = await readOverview(
      join("layers", "nd-int16.tif"),
      { scale: 2, valid: [0, 1e9] },
      77,
      files,
    );
    expect(plain.values.filter((one) => Number.isNaN(one)).length).toBe(6);
    scaled.values.forEach((value, i) => {
      expect(value).toBe(plain.values[i] * 2 >= 0 ? plain.values[i] * 2 : Number.NaN);
    });
  });
});
