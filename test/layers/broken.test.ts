import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { pathToFileURL } from "node:url";
import { deflateSync, gzipSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import type { Where } from "../../src/data/place.ts";
import { InputError } from "../../src/errors.ts";
import { extractLayers } from "../../src/layers/extract.ts";
import type { LayerOptions } from "../../src/layers/options.ts";
import { planLayers } from "../../src/layers/plan.ts";
import { randomStream } from "../../src/math/random.ts";
import { builtFile, ensureBuilt } from "../pipeline/built.ts";
import { peakMemoryOf } from "../support/peak-memory.ts";
import { DATA, effectsOf, madeTiff } from "./effects.ts";

const OPTIONS: LayerOptions = {
  files: ["*.tif"],
  date: { first: "2001-01", step: "month" },
  covers: "month",
  unit: "1",
  kind: "mean",
  system: "EPSG:32632",
};
/** Larger than every fixture in UTM, so that each of their blocks is needed. */
const EVERYWHERE: Where = {
  type: "area",
  name: "everywhere",
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
const fixture = (name: string) => new Uint8Array(readFileSync(join(DATA, "layers", name)));
const extract = (bytes: Uint8Array) =>
  extractLayers(
    "x",
    OPTIONS,
    [{ place: EVERYWHERE, use: { by: "area", validArea: 0 } }],
    effectsOf({ "cut.tif": bytes }),
  );

/** The name of the error that the file gives; every error must name the file. */
async function errorName(bytes: Uint8Array): Promise<string> {
  try {
    await extract(bytes);
    return "none";
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    expect(error.facts.where?.file).toBe("cut.tif");
    return error.facts.name;
  }
}

/** A right little image of 4 × 4 bytes in one strip; parts of it are replaced by lies. */
function lying(tags: Readonly<Record<number, readonly number[]>>, block = new Uint8Array(16)): Uint8Array {
  return madeTiff(
    {
      256: [4],
      257: [4],
      258: [8],
      259: [1],
      273: [],
      277: [1],
      278: [4],
      279: [block.length],
      33550: [30, 30, 0],
      33922: [0, 0, 0, 500000, 5500000, 0],
      ...tags,
    },
    [block],
  );
}
const replaced = (bytes: Uint8Array, at: number, values: readonly number[]) => {
  const out = bytes.slice();
  out.set(values, at);
  return out;
};

describe("truncated, corrupt and lying files end in an InputError that names them", () => {
  test("the honest file reads", async () => expect(await errorName(lying({}))).toBe("none"));

  const zeros = deflateSync(new Uint8Array(64 * 1024 * 1024), { level: 9 });
  const cases: readonly (readonly [string, Uint8Array, string])[] = [
    ["an empty file", new Uint8Array(0), "layers.not-tiff"],
    ["a web page", new TextEncoder().encode("<!DOCTYPE html><html>404</html>"), "layers.not-tiff"],
    ["a gzip of a layer", new Uint8Array(gzipSync(fixture("c-none-int16.tif"))), "layers.not-tiff"],
    ["six bytes of header", fixture("c-none-int16.tif").slice(0, 6), "layers.not-tiff"],
    [
      "a header whose directory lies beyond the end",
      fixture("c-none-int16.tif").slice(0, 8),
      "layers.broken-file",
    ],
    ["a BigTIFF header cut short", fixture("bigtiff.tif").slice(0, 12), "layers.broken-file"],
    ["a directory that points to itself", circular(), "layers.broken-file"],
    ["no image", replaced(fixture("c-none-int16.tif"), 4, [0, 0, 0, 0]), "layers.broken-file"],
    ["uncompressed, cut short", cut("c-none-float32.tif"), "layers.broken-file"],
    ["deflate, cut short", cut("c-deflate-float32.tif"), "layers.broken-file"],
    ["LZW, cut short", cut("c-lzw-float32.tif"), "layers.broken-file"],
    ["Zstandard, cut short", cut("c-zstd-float32.tif"), "layers.broken-file"],
    ["LERC, cut short", cut("c-lerc-float32.tif"), "layers.broken-file"],
    ["PackBits, cut short", cut("c-packbits-int16.tif"), "layers.broken-file"],
    [
      "an absurd size with one strip",
      lying({ 256: [2 ** 31 - 1], 257: [2 ** 31 - 1], 278: [1] }),
      "layers.broken-file",
    ],
    [
      "an absurd size in one block",
      lying({ 256: [60000], 257: [60000], 278: [60000] }),
      "layers.unsupported-block-size",
    ],
    ["a width of 0", lying({ 256: [0] }), "layers.broken-file"],
    ["more bands than bytes", lying({ 277: [200] }), "layers.broken-file"],
    ["a strip beyond the end of the file", lying({ 273: [10_000_000] }), "layers.broken-file"],
    ["a strip of four gigabytes", lying({ 279: [4_294_967_295] }), "layers.broken-file"],
    ["a strip shorter than its pixels", lying({ 279: [15] }), "layers.broken-file"],
    [
      "deflate that unpacks to far more than the strip",
      lying({ 259: [8], 279: [zeros.length] }, new Uint8Array(zeros)),
      "layers.broken-file",
    ],
    [
      "deflate of the wrong bytes",
      lying(
        { 259: [8] },
        Uint8Array.from({ length: 16 }, (_, i) => i),
      ),
      "layers.broken-file",
    ],
    [
      "deflate that unpacks to too little",
      lying(
        { 259: [8], 279: [deflateSync(new Uint8Array(8)).length] },
        new Uint8Array(deflateSync(new Uint8Array(8))),
      ),
      "layers.broken-file",
    ],
    [
      "a few bytes said to hold megabytes",
      lying({ 256: [10000], 257: [10000], 278: [10000], 259: [8] }),
      "layers.broken-file",
    ],
    [
      "LZW with an impossible code",
      lying({ 259: [5], 279: [4] }, Uint8Array.of(0x80, 0x3f, 0xff, 0xff)),
      "layers.broken-file",
    ],
    [
      "Zstandard of the wrong bytes",
      lying(
        { 259: [50000] },
        Uint8Array.of(0x28, 0xb5, 0x2f, 0xfd, 0xff, 0xff, 0xff, 0xff, 9, 9, 9, 9, 9, 9, 9, 9),
      ),
      "layers.broken-file",
    ],
    ["pixels without size", lying({ 33550: [30, 0, 0] }), "layers.broken-file"],
    [
      "a matrix without numbers",
      lying({ 33550: [0, 0, 0], 34264: new Array(16).fill(Number.NaN) }),
      "layers.broken-file",
    ],
    ["no place", lying({ 33550: [], 33922: [] }), "layers.no-georeference"],
    ["an unknown compression", lying({ 259: [777] }), "layers.unsupported-compression"],
    ["an unknown predictor", lying({ 317: [9] }), "layers.unsupported-predictor"],
    ["bits in the other order", lying({ 266: [2] }), "layers.unsupported-bit-order"],
  ];
  test.each(cases)("%s", async (_, bytes, name) => {
    expect(await errorName(bytes)).toBe(name);
  });

  test("all of them together take less than 300 MB of a process of their own", { timeout: 60_000 }, () => {
    const folder = mkdtempSync(join(tmpdir(), "covey-broken-"));
    try {
      cases.forEach(([, bytes], i) => {
        writeFileSync(join(folder, `${i}.tif`), bytes);
      });
      const places = [{ place: EVERYWHERE, use: { by: "area", validArea: 0 } }];
      ensureBuilt("layers/extract.ts", "pipeline/effects/files.ts");
      const url = (source: string) => JSON.stringify(pathToFileURL(builtFile(source)).href);
      const script = `
        import { extractLayers } from ${url("layers/extract.ts")};
        import { filesBelow } from ${url("pipeline/effects/files.ts")};
        const effects = {
          files: filesBelow(${JSON.stringify(folder)}),
          progress: { start: () => ({ tick() {}, done() {} }) },
          reuse: { get: async () => undefined, put: async () => {} },
          checkInterrupted() {},
        };
        const names = [];
        const cases = ${JSON.stringify(cases.map(([title]) => title))};
        for (let i = 0; i < cases.length; i++) {
          const options = { ...${JSON.stringify(OPTIONS)}, files: [i + ".tif"] };
          await extractLayers("x", options, ${JSON.stringify(places)}, effects).then(
            () => names.push("none"),
            (error) => names.push(error.facts?.name ?? String(error)),
          );
          mark(cases[i]);
        }
        console.log(JSON.stringify(names));`;
      const { said, marks, kilobytes } = peakMemoryOf(script);
      expect(JSON.parse(said)).toEqual(cases.map(([, , name]) => name));
      // Which of them it was, should one take much: 35 files together take some 40 MB beside Node and the modules.
      const dearest = marks.filter(([, so], i) => i > 0 && so - marks[i - 1][1] > 100_000);
      expect(dearest).toEqual([]);
      expect(kilobytes).toBeLessThan(300_000);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });

  function cut(name: string): Uint8Array {
    const bytes = fixture(name);
    return bytes.slice(0, bytes.length - 40);
  }

  function circular(): Uint8Array {
    const bytes = lying({});
    const view = new DataView(bytes.buffer);
    view.setUint32(10 + 12 * view.getUint16(8, true), 8, true);
    return bytes;
  }
});

describe("what is not supported is refused by name before any block is read", () => {
  test.each([
    ["no-lzma.tif", "layers.unsupported-compression", "LZMA"],
    ["no-webp.tif", "layers.unsupported-compression", "WebP"],
    ["no-jpeg.tif", "layers.unsupported-compression", "JPEG"],
    ["no-ccittfax4.tif", "layers.unsupported-compression", "CCITT"],
    ["no-complex.tif", "layers.unsupported-type", "complex"],
    ["no-int64.tif", "layers.unsupported-type", "int64"],
    ["no-nbits.tif", "layers.unsupported-type", "uint12"],
    ["geo-none.tif", "layers.no-georeference", "none"],
  ])("%s", async (file, name, word) => {
    const effects = effectsOf({ [file]: fixture(file) });
    const facts = await planLayers("x", OPTIONS, effects.files).then(
      () => undefined,
      (error: InputError) => error.facts,
    );
    expect(facts?.name).toBe(name);
    expect(facts?.where?.file).toBe(file);
    expect(facts?.found).toContain(word);
  });
});

describe("random damage", () => {
  const names = [
    "c-none-int16.tif",
    "c-deflate-float32.tif",
    "c-lzw-int16.tif",
    "c-zstd-int16.tif",
    "c-lerc-float32.tif",
    "c-packbits-int16.tif",
    "mask-internal.tif",
    "bigtiff-big.tif",
    "p3-float32.tif",
    "meta-bands.tif",
  ];
  test.each(names)(
    "%s: flipped bits and cuts give values or an InputError, never anything else",
    async (name) => {
      const random = randomStream(1, name, 0);
      const whole = fixture(name);
      let errors = 0;
      for (let i = 0; i < 40; i++) {
        const bytes = random.uniform() < 0.2 ? whole.slice(0, random.below(whole.length)) : whole.slice();
        // Half of the flips go to the first bytes, where the headers stand.
        for (let flips = 0; flips < 3 && bytes.length > 0; flips++)
          bytes[random.below(random.uniform() < 0.5 ? Math.min(400, bytes.length) : bytes.length)] ^=
            1 << random.below(8);
        const name = await errorName(bytes).catch((error: unknown) => {
          if (error instanceof InputError) return "place";
          throw error;
        });
        if (name !== "none") errors++;
      }
      expect(errors).toBeGreaterThan(0);
    },
  );
});
