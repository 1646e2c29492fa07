import { execFileSync } from "node:child_process";
import { mkdtempSync, readdirSync, readFileSync, rmSync, statSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { fromArrayBuffer } from "geotiff";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { readCaptures } from "../../src/study/captures.ts";
import { readOccasions } from "../../src/study/occasions.ts";
import { readPlaces } from "../../src/study/places.ts";
import { readReadyMade } from "../../src/study/ready-made.ts";
import { inMemory } from "./support.ts";

const SHIPPED = fileURLToPath(new URL("../../sample-data", import.meta.url));
const text = (folder: string, name: string) => readFileSync(join(folder, name), "utf8");
let made = "";

beforeAll(() => {
  made = mkdtempSync(join(tmpdir(), "covey-sample-"));
  execFileSync(process.execPath, [join(SHIPPED, "make.mjs"), made]);
});
afterAll(() => rmSync(made, { recursive: true, force: true }));

const all = (folder: string): readonly string[] =>
  readdirSync(folder, { recursive: true, encoding: "utf8" })
    .filter((name) => statSync(join(folder, name)).isFile())
    .map((name) => name.split("\\").join("/"))
    .sort();

async function pixels(path: string): Promise<readonly unknown[]> {
  const bytes = readFileSync(path);
  const tiff = await fromArrayBuffer(
    bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength) as ArrayBuffer,
  );
  const image = await tiff.getImage();
  const [band] = await image.readRasters();
  return [image.getBoundingBox(), image.getGDALNoData(), Array.from(band as Int16Array)];
}

describe("the shipped sample study", () => {
  test("is what its generator makes: the same files, the same text, the same pixels", async () => {
    const names = all(made);
    expect(all(SHIPPED).filter((name) => !/\.(mjs|md)$/.test(name))).toEqual(names);
    for (const name of names.filter((one) => !one.endsWith(".tif")))
      expect(text(SHIPPED, name) === text(made, name), name).toBe(true);
    const layers = names.filter((one) => one.endsWith(".tif"));
    expect(layers.length).toBe(263 + 264);
    for (const name of layers.filter((_, i) => i % 40 === 0))
      expect(await pixels(join(SHIPPED, name))).toEqual(await pixels(join(made, name)));
  });

  test("is under 6 MB", () => {
    const bytes = all(SHIPPED).reduce((sum, name) => sum + statSync(join(SHIPPED, name)).size, 0);
    expect(bytes).toBeLessThan(6e6);
  });

  test("holds about 400 animals over 21 visits, with the faults its README tells of", async () => {
    const files = inMemory(
      Object.fromEntries(
        ["occasions.csv", "captures.csv", "intervals.csv", "places.geojson"].map((name) => [
          name,
          text(SHIPPED, name),
        ]),
      ),
    );
    const { occasions, intervals } = await readOccasions(
      {
        file: "occasions.csv",
        name: "visit",
        start: "from",
        end: "to",
        format: "yyyy-MM-dd",
        lengths: "whole years",
        effort: "net_hours",
      },
      files,
    );
    expect([occasions.length, intervals.map((one) => one.length)]).toEqual([21, Array(20).fill(1)]);
    const { counts, animals, findings, perOccasion } = await readCaptures(
      {
        layout: "dated",
        file: "captures.csv",
        animal: "ring",
        date: "date",
        format: "yyyy-MM-dd",
        strata: ["age_at_ringing"],
        lost: { column: "fate", values: ["died", "ring removed"] },
      },
      occasions,
      files,
    );
    expect(animals).toBe(397);
    expect(counts.map((one) => one.stratum)).toEqual(["age at ringing: adult", "age at ringing: young"]);
    const kinds = findings.map((one) => one.kind);
    expect(kinds.filter((one) => one === "capture-outside").length).toBe(6);
    expect(kinds.filter((one) => one === "capture-repeat").length).toBe(5);
    expect(kinds.length).toBe(11);
    expect(perOccasion.reduce((sum, one) => sum + one.lost, 0)).toBe(18);
    const { places } = await readPlaces(
      {
        roost: { file: "places.geojson", where: { name: "roost" } },
        range: { file: "places.geojson", where: { name: "winter range" } },
      },
      files,
    );
    expect(places.get("range")).toMatchObject({ type: "area", polygons: [{ length: 2 }] });
    const { columns } = await readReadyMade(
      { file: "intervals.csv", interval: "interval", columns: { disturbance: { unit: "1" } } },
      intervals,
      files,
    );
    expect(columns[0].values.some(Number.isNaN)).toBe(false);
  });
});
