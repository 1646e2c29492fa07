import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import type { Where } from "../../src/data/place.ts";
import { InputError, InterruptedError } from "../../src/errors.ts";
import { extractLayers } from "../../src/layers/extract.ts";
import { NO_KEYS } from "../../src/layers/keys.ts";
import type { LayerOptions, Wanted } from "../../src/layers/options.ts";
import { planLayers } from "../../src/layers/plan.ts";
import { resolveSystem } from "../../src/layers/system.ts";
import { DATA, effectsBelow, effectsOf, madeTiff } from "./effects.ts";

const FOLDER = join(DATA, "layers");
const expected = JSON.parse(readFileSync(join(FOLDER, "expected.json"), "utf8"));

/** A 4 × 3 layer of bytes in degrees, from `west` E 3 N, one strip, nodata by option. */
function image(values: readonly number[], west = 0): Uint8Array {
  return madeTiff(
    {
      256: [4],
      257: [3],
      258: [8],
      259: [1],
      273: [],
      277: [1],
      278: [3],
      279: [12],
      33550: [1, 1, 0],
      33922: [0, 0, 0, west, 3, 0],
    },
    [Uint8Array.from(values)],
  );
}
const filled = (value: number) => image(new Array(12).fill(value));
const OPTIONS: LayerOptions = {
  files: ["g_*.tif"],
  date: { name: "g_{yyyy}_{MM}" },
  covers: "month",
  unit: "1",
  kind: "mean",
  fill: 255,
  system: "EPSG:4326",
};
const POINT: Wanted = {
  place: { type: "point", name: "roost", position: [1.5, 1.5] },
  use: { by: "nearest" },
};
const square = (w: number, s: number, e: number, n: number): Where => ({
  type: "area",
  name: "range",
  polygons: [
    [
      [
        [w, s],
        [e, s],
        [e, n],
        [w, n],
        [w, s],
      ],
    ],
  ],
});
const AREA: Wanted = { place: square(0, 0, 4, 3), use: { by: "area", validArea: 0.8 } };

describe("a stack at places", () => {
  const stack = {
    "g_2001_01.tif": filled(10),
    "g_2001_02.tif": image([255, 255, 255, 20, 20, 20, 20, 20, 20, 20, 20, 20]),
    "g_2001_03.tif": filled(255),
    "g_2001_05.tif": image([0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11]),
  };

  test("values, periods, shares and findings", async () => {
    const effects = effectsOf(stack);
    const { series, validShares, findings, filesRead } = await extractLayers(
      "green",
      OPTIONS,
      [POINT, AREA],
      effects,
    );
    expect(series.map((one) => one.site)).toEqual(["roost", "range"]);
    expect(series[0]).toMatchObject({ variable: "green", unit: "1", kind: "mean" });
    expect([...series[0].values]).toEqual([10, 20, Number.NaN, 5]);
    expect([...series[0].starts].map(isoDay)).toEqual([
      "2001-01-01",
      "2001-02-01",
      "2001-03-01",
      "2001-05-01",
    ]);
    expect([...series[0].ends].map(isoDay)).toEqual(["2001-02-01", "2001-03-01", "2001-04-01", "2001-06-01"]);
    expect(series[0].files).toEqual(Object.keys(stack));
    // Rows weigh by the cosine of 2.5, 1.5 and 0.5 degrees.
    const w = [2.5, 1.5, 0.5].map((lat) => Math.cos((lat * Math.PI) / 180));
    const total = 4 * (w[0] + w[1] + w[2]);
    const share = (total - 3 * w[0]) / total;
    expect(validShares[1][1]).toBeCloseTo(share, 14);
    expect(share).toBeLessThan(0.8);
    expect([...series[1].values].map((one, i) => (i < 3 ? one : 0))).toEqual([10, Number.NaN, Number.NaN, 0]);
    expect(series[1].values[3]).toBeCloseTo((6 * w[0] + 22 * w[1] + 38 * w[2]) / total, 12);
    expect(findings.map((one) => [one.kind, one.subject, one.count])).toEqual([
      ["layer-gap", "green", 30],
      ["layer-valid-area", "green at roost", 1],
      ["layer-valid-area", "green at range", 2],
    ]);
    expect(effects.ticks.length).toBe(4);
    expect(filesRead).toBe(4);
  });

  test("a wholly valid place passes a valid area of 1, whatever its edges", async () => {
    const odd: Where = {
      type: "area",
      name: "odd",
      polygons: [
        [
          [
            [0.13, 0.21],
            [3.77, 0.4],
            [3.3, 2.91],
            [1.1, 2.2],
            [0.13, 0.21],
          ],
        ],
      ],
    };
    const { series, findings } = await extractLayers(
      "green",
      { ...OPTIONS, files: ["g_2001_01.tif"] },
      [{ place: odd, use: { by: "area", validArea: 1 } }],
      effectsOf(stack),
    );
    expect([...series[0].values]).toEqual([10]);
    expect(findings).toEqual([]);
  });

  test("each block is read once for all places, and each file opened once", async () => {
    const reads: number[] = [];
    const effects = effectsOf(stack);
    const open = effects.files.open;
    const files = {
      ...effects.files,
      open: (path: string) => {
        const file = open(path);
        return {
          ...file,
          read: (offset: number, length: number) => {
            if (length === 12 && offset > 200) reads.push(offset);
            return file.read(offset, length);
          },
        };
      },
    };
    const places = Array.from({ length: 5 }, () => [POINT, AREA]).flat();
    await extractLayers("green", OPTIONS, places, { ...effects, files });
    expect(reads.length).toBe(4);
    expect(effects.opened.length).toBe(4);
  });

  test("a reader that hands out unaligned pieces of a Buffer of its own is neither misread nor written to", async () => {
    for (const name of ["c-none-float32.tif", "big-none1-int16.tif", "c-lzw-float32.tif", "lerc-holes.tif"]) {
      const whole = readFileSync(join(FOLDER, name));
      const shifted = Buffer.alloc(whole.length + 1);
      whole.copy(shifted, 1);
      const base = effectsBelow(FOLDER);
      const lent: typeof base.files = {
        ...base.files,
        open: (path) => ({
          path,
          size: whole.length,
          read: (offset, length) => shifted.subarray(1 + offset, 1 + offset + length),
          close: () => {},
        }),
      };
      const options: LayerOptions = {
        files: [name],
        date: { first: "2001-01", step: "month" },
        covers: "month",
        unit: "1",
        kind: "mean",
      };
      const place: Where = { ...square(8.9, 49.5, 9.2, 49.7), name: "all" };
      const wanted: Wanted[] = [{ place, use: { by: "area", validArea: 0 } }];
      const [ours, usual] = [
        await extractLayers("x", options, wanted, { ...base, files: lent }),
        await extractLayers("x", options, wanted, base),
      ];
      expect(ours.series).toEqual(usual.series);
      expect(ours.series[0].values[0]).not.toBeNaN();
      expect(shifted.subarray(1).equals(whole)).toBe(true);
    }
  });

  test("scale, offset, valid range and fill, in that order of precedence", async () => {
    const options = { ...OPTIONS, scale: 0.5, offset: 1, valid: [1.5, 6] as const };
    const at = (x: number, y: number): Wanted => ({
      place: { type: "point", name: `${x}`, position: [x, y] },
      use: { by: "nearest" },
    });
    const { series } = await extractLayers(
      "green",
      { ...options, files: ["g_2001_05.tif"] },
      [at(0.5, 2.5), at(1.5, 2.5), at(2.5, 0.5), at(3.5, 0.5)],
      effectsOf(stack),
    );
    expect(series.map((one) => one.values[0])).toEqual([Number.NaN, 1.5, 6, Number.NaN]);
  });

  test("bilinear leaves missing neighbours out", async () => {
    const holed = { "g_2001_01.tif": image([1, 255, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12]) };
    const use = { by: "bilinear" } as const;
    const { series, validShares } = await extractLayers(
      "green",
      OPTIONS,
      [{ place: { type: "point", name: "p", position: [1, 2] }, use }],
      effectsOf(holed),
    );
    expect(series[0].values[0]).toBeCloseTo((1 + 5 + 6) / 3, 14);
    expect(validShares[0][0]).toBeCloseTo(0.75, 14);
  });

  test("places outside, partly outside and smaller than a pixel are said", async () => {
    const outside: Wanted = {
      place: { type: "point", name: "far", position: [50, 1] },
      use: { by: "nearest" },
    };
    const half: Wanted = {
      place: { ...square(2, 0, 6, 3), name: "half" },
      use: { by: "area", validArea: 0.3 },
    };
    const tiny: Wanted = {
      place: { ...square(1.2, 1.2, 1.3, 1.3), name: "tiny" },
      use: { by: "area", validArea: 0.8 },
    };
    const { series, findings, validShares } = await extractLayers(
      "green",
      { ...OPTIONS, files: ["g_2001_05.tif"] },
      [outside, half, tiny],
      effectsOf(stack),
    );
    expect([...series[0].values]).toEqual([Number.NaN]);
    expect(validShares[1][0]).toBeCloseTo(0.5, 10);
    expect(series[2].values[0]).toBe(5);
    expect(findings.map((one) => [one.kind, one.subject])).toEqual([
      ["place-outside", "green at far"],
      ["place-outside", "green at half"],
      ["layer-small-place", "green at tiny"],
    ]);
  });
});

test("a place outside one file of a layer is said of that file alone", async () => {
  const files = {
    "g_2001_01.tif": filled(10),
    "g_2001_02.tif": image(new Array(12).fill(20), 40),
    "g_2001_03.tif": filled(30),
  };
  const { series, findings } = await extractLayers("green", OPTIONS, [POINT, AREA], effectsOf(files));
  expect([...series[0].values]).toEqual([10, Number.NaN, 30]);
  const outside = findings.filter((one) => one.kind === "place-outside");
  expect(outside.map((one) => [one.subject, one.where?.file])).toEqual([
    ["green at roost", "g_2001_02.tif"],
    ["green at range", "g_2001_02.tif"],
  ]);
  for (const { message } of outside) expect(message).toContain("in the worst of 1 of its 3 files");
});

describe("kept results", () => {
  const year = (y: number) => ({ [`g_${y}_01.tif`]: filled(y - 2000), [`g_${y}_02.tif`]: filled(y - 1990) });

  test("a new year reads only its files, and values are the same as when all are read", async () => {
    const first = effectsOf(year(2001));
    await extractLayers("green", OPTIONS, [POINT, AREA], first);
    const both = { ...year(2001), ...year(2002) };
    const second = { ...effectsOf(both), reuse: first.reuse };
    const again = await extractLayers("green", OPTIONS, [POINT, AREA], second);
    const fresh = await extractLayers("green", OPTIONS, [POINT, AREA], effectsOf(both));
    expect([again.filesRead, fresh.filesRead]).toEqual([2, 4]);
    expect(again.series).toEqual(fresh.series);
    expect(again.validShares).toEqual(fresh.validShares);
    expect(again.findings).toEqual(fresh.findings);
  });

  test("a new threshold needs no file; a new place, scale or content does", async () => {
    const effects = effectsOf(year(2001));
    const run = (options: LayerOptions, wanted: readonly Wanted[], from = effects) =>
      extractLayers("green", options, wanted, from);
    expect((await run(OPTIONS, [POINT, AREA])).filesRead).toBe(2);
    expect((await run(OPTIONS, [POINT, { ...AREA, use: { by: "area", validArea: 0.1 } }])).filesRead).toBe(0);
    expect((await run(OPTIONS, [POINT, { ...AREA, place: square(0, 0, 2, 3) }])).filesRead).toBe(2);
    expect((await run(OPTIONS, [POINT, AREA])).filesRead).toBe(0);
    expect((await run({ ...OPTIONS, scale: 2 }, [POINT])).filesRead).toBe(2);
    const changed = { ...effectsOf({ ...year(2001), "g_2001_02.tif": filled(99) }), reuse: effects.reuse };
    const { series, filesRead } = await run(OPTIONS, [POINT], changed);
    expect(filesRead).toBe(1);
    expect([...series[0].values]).toEqual([1, 99]);
  });

  test("missing values survive being kept, and a damaged store is read anew", async () => {
    const effects = effectsOf({ "g_2001_01.tif": filled(255) });
    for (let i = 0; i < 2; i++) {
      const { series, filesRead } = await extractLayers("green", OPTIONS, [POINT], effects);
      expect([...series[0].values, filesRead]).toEqual([Number.NaN, 1 - i]);
    }
    for (const key of effects.kept.keys()) effects.kept.set(key, Uint8Array.of(1, 2, 3));
    expect((await extractLayers("green", OPTIONS, [POINT], effects)).filesRead).toBe(1);
  });

  test("an interrupted run keeps what it had", async () => {
    const effects = effectsOf({ ...year(2001), ...year(2002) });
    let asked = 0;
    const stopped = {
      ...effects,
      checkInterrupted: () => {
        if (++asked > 2) throw new InterruptedError();
      },
    };
    await expect(extractLayers("green", OPTIONS, [POINT], stopped)).rejects.toThrow(InterruptedError);
    expect((await extractLayers("green", OPTIONS, [POINT], effects)).filesRead).toBe(2);
  });
});

describe("fixtures read at points as GDAL reads them", () => {
  // The middle of a pixel through GDAL's own transform (expected.json) must give that pixel's value.
  const middle = (name: string, column: number) => {
    const [x0, a, b, y0, d, e] = expected[name].transform as readonly number[];
    const [x, y] = [x0 + (column + 0.5) * a + 0.5 * b, y0 + (column + 0.5) * d + 0.5 * e];
    if (Math.abs(y) <= 90) return [x, y] as const;
    return resolveSystem({ path: name, user: "EPSG:32632", keys: NO_KEYS, wkt: undefined }).toLonLat(x, y);
  };
  test.each(["geo-point.tif", "geo-southup.tif", "geo-rotated.tif", "geo-rotated-point.tif", "geo-tfw.tif"])(
    "%s",
    async (name) => {
      const first = expected[name].bands[0].first as readonly number[];
      const wanted: Wanted[] = first.map((_, i) => ({
        place: { type: "point", name: `p${i}`, position: middle(name, i) },
        use: { by: "nearest" },
      }));
      const { system: _, fill: __, ...rest } = OPTIONS;
      const options: LayerOptions = {
        ...rest,
        files: [name],
        date: { first: "2001-01", step: "month" },
        ...(name === "geo-tfw.tif" ? { system: "EPSG:32632" } : {}),
      };
      const { series } = await extractLayers("x", options, wanted, effectsBelow(FOLDER));
      expect(series.map((one) => one.values[0])).toEqual(first);
    },
  );

  test("bands dated by description, with their own scale and offset", async () => {
    const options: LayerOptions = {
      files: ["meta-bands.tif"],
      date: { band: "{yyyy}-{MM}" },
      covers: "month",
      unit: "K",
      kind: "mean",
    };
    const bands = expected["meta-bands.tif"].bands as { first: number[]; scale: number; offset: number }[];
    const wanted: Wanted = {
      place: { type: "point", name: "p", position: middle("meta-bands.tif", 0) },
      use: { by: "nearest" },
    };
    const { series } = await extractLayers("x", options, [wanted], effectsBelow(FOLDER));
    expect([...series[0].values]).toEqual(bands.map((band) => band.first[0] * band.scale + band.offset));
    expect([...series[0].starts].map(isoDay)).toEqual(["2001-01-01", "2001-02-01", "2001-03-01"]);
  });
});

describe("plans and refusals", () => {
  test("a plan reads headers only and tells files, dates, systems and gaps", async () => {
    const effects = effectsOf({ "g_2001_01.tif": filled(1), "g_2001_03.tif": filled(1).slice(0, -5) });
    const plan = await planLayers("green", OPTIONS, effects.files);
    expect(plan.files.map((one) => [one.path, one.width, one.height, one.type, one.compression])).toEqual([
      ["g_2001_01.tif", 4, 3, "uint8", "none"],
      ["g_2001_03.tif", 4, 3, "uint8", "none"],
    ]);
    expect(plan.systems).toEqual(["EPSG:4326"]);
    expect(plan.images.map((one) => isoDay(one.start))).toEqual(["2001-01-01", "2001-03-01"]);
    expect(plan.findings.map((one) => one.kind)).toEqual(["layer-gap"]);
  });

  const failing = async (options: Partial<LayerOptions>, files: Record<string, Uint8Array>) =>
    planLayers("green", { ...OPTIONS, ...options }, effectsOf(files).files).then(
      () => "none",
      (error: unknown) => (error instanceof InputError ? error.facts.name : String(error)),
    );
  test("no files", async () => expect(await failing({ files: ["h_*.tif"] }, {})).toBe("layers.no-files"));
  test("no system", async () => {
    const { system: _, ...rest } = OPTIONS;
    const error = await planLayers("green", rest, effectsOf({ "g_2001_01.tif": filled(1) }).files).catch(
      (one) => one,
    );
    expect(error.facts.name).toBe("layers.system-unknown");
    expect(error.facts.where.file).toBe("g_2001_01.tif");
    expect(error.facts.remedy).toContain("system: EPSG:");
  });
  test.each([
    ["EPSG:99999", "layers.system-unknown"],
    ["+proj=nonsense", "layers.system-unknown"],
    ["+proj=longlat +ellps=clrk66 +nadgrids=conus", "layers.system-unknown"],
    ["UTM 32", "layers.system-unknown"],
  ])("system %s", async (system, name) =>
    expect(await failing({ system }, { "g_2001_01.tif": filled(1) })).toBe(name),
  );
  test("metres read as degrees", async () => {
    const bytes = madeTiff(
      {
        256: [4],
        257: [3],
        258: [8],
        259: [1],
        273: [],
        277: [1],
        278: [3],
        279: [12],
        33550: [30, 30, 0],
        33922: [0, 0, 0, 500000, 5500000, 0],
      },
      [new Uint8Array(12)],
    );
    expect(await failing({}, { "g_2001_01.tif": bytes })).toBe("layers.system-does-not-fit");
  });
  test("a user-defined system of the file that is not built is refused, with its text named", async () => {
    const bytes = new Uint8Array(readFileSync(join(FOLDER, "sys-igh.tif")));
    const { system: _, ...rest } = OPTIONS;
    const error = await planLayers("green", rest, effectsOf({ "g_2001_01.tif": bytes }).files).catch(
      (one) => one,
    );
    expect(error.facts.name).toBe("layers.system-unknown");
  });
});
