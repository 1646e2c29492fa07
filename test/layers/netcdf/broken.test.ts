import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { NetCDFReader } from "netcdfjs";
import { describe, expect, test } from "vitest";
import { InputError } from "../../../src/errors.ts";
import { extractLayers } from "../../../src/layers/extract.ts";
import { allOf } from "../../../src/layers/netcdf/dataset.ts";
import { openNetcdf } from "../../../src/layers/netcdf/open.ts";
import { effectsOf, inMemory } from "../effects.ts";

const FOLDER = fileURLToPath(new URL("../../data/netcdf", import.meta.url));
const bytesOf = (name: string) => new Uint8Array(readFileSync(`${FOLDER}/${name}`));
const read = (bytes: Uint8Array, variable = "x") =>
  extractLayers(
    "x",
    { files: ["a.nc"], date: { axis: "time" }, covers: "month", variable, unit: "1", kind: "mean" },
    [
      {
        place: {
          type: "area",
          name: "p",
          polygons: [
            [
              [
                [7, 50],
                [10, 50],
                [10, 52],
                [7, 52],
                [7, 50],
              ],
            ],
          ],
        },
        use: { by: "area", validArea: 0 },
      },
    ],
    effectsOf({ "a.nc": bytes }),
  );
const errorOf = async (work: Promise<unknown>): Promise<unknown> =>
  work.then(
    () => "nothing was thrown",
    (error: unknown) => error,
  );

describe("files that are cut off or corrupt: a clean error that names the file", () => {
  test.each(["cdf1.nc", "cdf5.nc", "nc4.nc", "chunks-odd.nc"])("%s, cut anywhere", async (name) => {
    const whole = bytesOf(name);
    const variable =
      name.startsWith("c") && name !== "chunks-odd.nc" ? "rain" : name === "nc4.nc" ? "rain" : "x";
    for (const share of [0, 0.01, 0.1, 0.3, 0.5, 0.7, 0.9]) {
      const error = await errorOf(read(whole.slice(0, Math.floor(whole.length * share)), variable));
      expect(error, `${share} of the file`).toBeInstanceOf(InputError);
      expect((error as InputError).facts.where?.file).toBe("a.nc");
    }
  });
  // Without its throwing error handler the library gives zeros for a chunk it cannot unpack, and says nothing.
  test("a corrupt chunk is an error, not zeros", async () => {
    const bytes = bytesOf("chunks-map.nc");
    // A deflate stream begins with 0x78; the last one in the file is a chunk of the variable.
    let at = -1;
    for (let i = 0; i + 1 < bytes.length; i++)
      if (bytes[i] === 0x78 && [0x01, 0x5e, 0x9c].includes(bytes[i + 1])) at = i;
    expect(at).toBeGreaterThan(0);
    bytes.fill(0xff, at + 2, at + 40);
    const error = await errorOf(read(bytes));
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).facts.name).toBe("layers.broken-file");
    expect((error as InputError).message.length).toBeLessThan(500);
  });
  test("a checksum that does not hold is an error", async () => {
    const bytes = bytesOf("chunks-odd.nc");
    let at = -1;
    for (let i = 0; i + 1 < bytes.length; i++)
      if (bytes[i] === 0x78 && [0x01, 0x5e, 0x9c].includes(bytes[i + 1])) at = i;
    bytes[at + 30] ^= 0xff;
    expect(await errorOf(read(bytes))).toBeInstanceOf(InputError);
  });
  test("a filter that HDF5 does not have is named", async () => {
    expect(await errorOf(read(bytesOf("h5py.nc"), "y"))).toMatchObject({
      facts: { name: "layers.unsupported-compression" },
    });
  });
  test("a format number that is none, and what is no NetCDF at all", async () => {
    const bytes = bytesOf("cdf1.nc");
    bytes[3] = 9;
    expect(await errorOf(read(bytes, "rain"))).toMatchObject({ facts: { name: "layers.broken-file" } });
    await expect(
      openNetcdf(inMemory(new TextEncoder().encode("<html>no such file</html>"))),
    ).rejects.toMatchObject({
      facts: { name: "layers.not-netcdf" },
    });
  });
});

describe("what the library and the format leave to the reader", () => {
  test("64-bit integers and 1-element attributes are numbers", async () => {
    const dataset = await openNetcdf(inMemory(bytesOf("type-i8.nc"), "a.nc"));
    const x = dataset.variables.get("x");
    if (x === undefined) throw new Error("no x");
    expect(Array.from(allOf(dataset, x)).every(Number.isSafeInteger)).toBe(true);
    dataset.close();
    const packed = await openNetcdf(inMemory(bytesOf("pack-missing.nc"), "a.nc"));
    expect(packed.variables.get("x")?.attributes.get("scale_factor")).toEqual({
      type: "float64",
      numbers: [0.01],
    });
    packed.close();
  });
  test("names of dimensions come from the scales", async () => {
    const dataset = await openNetcdf(inMemory(bytesOf("h5py.nc"), "a.nc"));
    expect(dataset.variables.get("x")?.dimensions).toEqual(["time", "lat", "lon"]);
    dataset.close();
  });
  test("the number of records of a file left open while streaming is worked out", async () => {
    const bytes = bytesOf("cdf1.nc");
    bytes.fill(0xff, 4, 8);
    const dataset = await openNetcdf(inMemory(bytes, "a.nc"));
    expect(dataset.variables.get("rain")?.shape).toEqual([4, 6, 8]);
  });
});

test("a variable that holds fewer steps than the times beside it is named with both numbers", async () => {
  const dataset = await openNetcdf(inMemory(bytesOf("lagging.nc"), "lagging.nc"));
  const x = dataset.variables.get("x");
  if (x === undefined) throw new Error("no x");
  expect(x.shape).toEqual([3, 2, 2]);
  expect(Array.from(dataset.read(x, [0, 0, 0], [3, 1, 1]))).toEqual([1, 1, 1]);
  expect(() => dataset.read(x, [0, 0, 0], [5, 1, 1])).toThrow(/lagging\.nc.*x of 3 steps along time, not 5/);
  dataset.close();
});

// The general-purpose package netcdfjs reads CDF-1 and 2 (whole variables only, and no CDF-5).
describe("the header as another reader has it", () => {
  test.each(["cdf1.nc", "cdf2.nc", "one-record.nc"])("%s", async (name) => {
    const other = new NetCDFReader(bytesOf(name));
    const dataset = await openNetcdf(inMemory(bytesOf(name), name));
    expect([...dataset.variables.keys()]).toEqual(other.variables.map((one) => one.name));
    for (const one of dataset.variables.values()) {
      // It takes the padding between records of bytes for values.
      if (one.name === "odd") continue;
      const values = other.getDataVariable(one.name).flat();
      expect(Array.from(allOf(dataset, one))).toEqual(values);
    }
  });
});
