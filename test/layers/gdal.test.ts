import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { blockRows, type Image, readBlock, samplesPerPixel } from "../../src/layers/image.ts";
import { describeLayer, type Layer } from "../../src/layers/layer.ts";
import { maskReader } from "../../src/layers/mask.ts";
import type { Samples } from "../../src/layers/samples.ts";
import { findSideFiles } from "../../src/layers/side.ts";
import { readyFor } from "../../src/layers/unpack.ts";
import { unpacked, valueRule } from "../../src/layers/values.ts";
import { DATA, filesBelow } from "./effects.ts";

// What GDAL 3.6.2 reads of each fixture; the script that made both is test/data/layers/make.py.
const FOLDER = join(DATA, "layers");
interface Band {
  readonly dtype: string;
  readonly sha256: string;
  readonly first: readonly (number | null)[];
  readonly valid: number;
  readonly mask: string;
  readonly nodata: string | null;
  readonly scale: number | null;
  readonly offset: number | null;
  readonly description: string;
  readonly unit: string;
}
interface Expected {
  readonly width: number;
  readonly height: number;
  readonly transform: readonly number[];
  readonly bands: readonly Band[];
}
const EXPECTED = JSON.parse(readFileSync(join(FOLDER, "expected.json"), "utf8")) as Record<string, Expected>;
const FILES = Object.entries(EXPECTED).filter(([, one]) => one.bands !== undefined);

const ARRAYS = {
  int8: Int8Array,
  uint8: Uint8Array,
  int16: Int16Array,
  uint16: Uint16Array,
  int32: Int32Array,
  uint32: Uint32Array,
  float32: Float32Array,
  float64: Float64Array,
};

/** All raw samples of a band, block by block; `never` stands for blocks that were never written. */
function wholeBand(
  file: Parameters<typeof readBlock>[0],
  image: Image,
  band: number,
  never: number,
): number[] {
  const out = new Array<number>(image.width * image.height).fill(Number.NaN);
  const step = samplesPerPixel(image);
  for (let row = 0; row < image.down; row++)
    for (let column = 0; column < image.across; column++) {
      const samples: Samples | undefined = readBlock(file, image, column, row, band);
      for (let r = 0; r < blockRows(image, row); r++)
        for (let c = 0; c < image.blockWidth; c++) {
          const [x, y] = [column * image.blockWidth + c, row * image.blockHeight + r];
          if (x >= image.width || y >= image.height) continue;
          const at = (r * image.blockWidth + c) * step + (image.planar ? 0 : band);
          out[y * image.width + x] = samples === undefined ? never : samples[at];
        }
    }
  return out;
}

async function opened<Result>(
  name: string,
  use: (layer: Layer, file: ReturnType<ReturnType<typeof filesBelow>["open"]>) => Promise<Result>,
): Promise<Result> {
  const files = filesBelow(FOLDER);
  const side = (await findSideFiles([name], files))(name);
  const file = files.open(name);
  try {
    const layer = await describeLayer(file, files, side);
    await readyFor(layer.image.compression);
    return await use(layer, file);
  } finally {
    file.close();
  }
}

describe("every fixture reads bit for bit as GDAL reads it", () => {
  test("there are more than sixty", () => expect(FILES.length).toBeGreaterThan(60));

  test.each(FILES)("%s: samples", async (name, expected) => {
    await opened(name, async (layer, file) => {
      expect([layer.image.width, layer.image.height, layer.image.bands]).toEqual([
        expected.width,
        expected.height,
        expected.bands.length,
      ]);
      expected.bands.forEach((band, index) => {
        const values = wholeBand(file, layer.image, index, Number(band.nodata));
        band.first.forEach((value, i) => {
          if (value !== null && band.dtype !== "uint8") expect(values[i]).toBe(value);
        });
        // GDAL before 3.7 hands int8 out as uint8; the bytes are the same.
        const Type = ARRAYS[band.dtype as keyof typeof ARRAYS];
        const bytes = new Uint8Array(Type.from(values).buffer);
        expect(createHash("sha256").update(bytes).digest("hex")).toBe(band.sha256);
      });
    });
  });

  test.each(FILES)("%s: where it lies", async (name, expected) => {
    const { affine } = await opened(name, async (layer) => layer.grid);
    const ours = [affine.x0, affine.a, affine.b, affine.y0, affine.d, affine.e];
    ours.forEach((value, i) => {
      expect(Math.abs(value - expected.transform[i])).toBeLessThanOrEqual(
        1e-9 * Math.abs(expected.transform[i]),
      );
    });
  });

  test.each(FILES)("%s: missing values, scale, offset, description, unit", async (name, expected) => {
    await opened(name, async (layer, file) => {
      expected.bands.forEach((band, index) => {
        const said = layer.bands[index];
        expect(said.scale).toBe(band.scale ?? 1);
        expect(said.offset).toBe(band.offset ?? 0);
        expect(said.description).toBe(band.description);
        expect(said.unit).toBe(band.unit);
        const rule = { ...valueRule(layer, index, {}), scale: 1, offset: 0 };
        const mask = layer.mask && filesBelow(FOLDER).open(layer.mask.path);
        const reader = layer.mask && mask ? maskReader(mask, layer.mask.image) : undefined;
        const values = wholeBand(file, layer.image, index, Number.NaN);
        const valid = values.map((value, i) => {
          const shown = reader?.(i % layer.grid.width, Math.floor(i / layer.grid.width), index) ?? true;
          return shown && !Number.isNaN(unpacked(value, rule)) ? 1 : 0;
        });
        mask?.close();
        // GDAL's mask calls NaN valid where no nodata is declared; a NaN is never a value here.
        const nans = values.filter((value, i) => Number.isNaN(value) && valid[i] === 0).length;
        const declared = band.nodata !== null;
        expect(valid.reduce((sum: number, one) => sum + one, 0)).toBe(band.valid - (declared ? 0 : nans));
        if (declared || nans === 0)
          expect(createHash("sha256").update(Uint8Array.from(valid)).digest("hex")).toBe(band.mask);
      });
    });
  });
});
