import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parse } from "yaml";
import type { Position } from "../../src/data/place.ts";
import { redactPipeline, WITHHELD } from "../../src/publish/redact.ts";
import { coarsen } from "../../src/study/coarsen.ts";

/** Great-circle distance in metres (haversine formula; common knowledge, no source), mean radius of GRS 80. */
function distance([lon1, lat1]: readonly number[], [lon2, lat2]: readonly number[]): number {
  const rad = Math.PI / 180;
  const h =
    Math.sin(((lat2 - lat1) * rad) / 2) ** 2 +
    Math.cos(lat1 * rad) * Math.cos(lat2 * rad) * Math.sin(((lon2 - lon1) * rad) / 2) ** 2;
  return 2 * 6_371_008.8 * Math.asin(Math.min(1, Math.sqrt(h)));
}

const anywhere = fc.tuple(
  fc.double({ min: -180, max: 180, noNaN: true }),
  fc.double({ min: -85, max: 85, noNaN: true }),
);

describe("coarsen", () => {
  test("moves a place by at most half the diagonal of its cell", () => {
    fc.assert(
      fc.property(anywhere, fc.constantFrom(1, 10, 50), (place, km) => {
        // Cells are a whole number to a row, so up to 1 % wider than asked; written digits add a tenth of a cell.
        expect(distance(place, coarsen(place, km))).toBeLessThan(1000 * km * (Math.SQRT1_2 * 1.03 + 0.1));
      }),
    );
  });

  test("gives the same answer all over a cell: nothing finer leaks, and coarsening again changes nothing", () => {
    fc.assert(
      fc.property(anywhere, (place) => {
        const once = coarsen(place, 10);
        expect(coarsen(once, 10)).toEqual(once);
      }),
    );
    const answers = new Set<string>();
    for (let i = 0; i < 40; i++)
      for (let j = 0; j < 40; j++) answers.add(coarsen([6.1 + i / 1000, 49.8 + j / 1000], 10).join());
    // 2.9 km × 4.4 km touches at most 4 cells of 10 km.
    expect(answers.size).toBeLessThanOrEqual(4);
  });
});

const byTen = (position: Position) => coarsen(position, 10);

const PIPELINE = `# roost at 49.61234, 6.12345
covey: 1
study: { title: "Roost near 49.61234 N, 6.12345 E", sensitive: true, coarsen: 10 km } # in the old mill
places:
  roost: { longitude: 6.12345, latitude: 49.61234 }
  text roost: { longitude: "6.12345", latitude: "49.61234" }
  half: { latitude: 49.61234 }
  lettered: { longitude: 6.12345 E, latitude: "N 49,61234" }
  far: { longitude: 612345.678, latitude: 5496123.4 }
  ring: [[6.12345, 49.61234], [6.22345, 49.71234]]
  range: { file: places.geojson, where: { name: winter range } }
stations: { file: stations/list.csv, id: id, longitude: lon, latitude: lat }
note: 49° 36′ 44″ N
records:
  - series: { rain: { column: precip, unit: mm, day: -1 } }
layers:
  greenness: { files: ["layers/green_*.tif"], scale: 0.0001, fill: -3000, valid: [-0.2, 1] }
screen: { steps: 100, down to: 0.001 }
`;

describe("redactPipeline", () => {
  const shown = redactPipeline(PIPELINE, byTen);

  test("no coordinate of a place is left, in numbers, texts or comments", () => {
    for (const leak of [
      "6.12345",
      "49.61234",
      "6.22345",
      "49.71234",
      "612345",
      "5496123",
      "49° 36",
      "old mill",
    ])
      expect(shown).not.toContain(leak);
    const read = parse(shown);
    const [longitude, latitude] = coarsen([6.12345, 49.61234], 10);
    expect(read.places.roost).toEqual({ longitude, latitude });
    expect(read.places["text roost"]).toEqual({ longitude, latitude });
    expect(read.places.half).toEqual({ latitude: WITHHELD });
    expect(read.places.far).toEqual({ longitude: WITHHELD, latitude: WITHHELD });
    expect(read.places.lettered).toEqual({ longitude: WITHHELD, latitude: WITHHELD });
    expect(read.note).toBe(WITHHELD);
    expect(distance([longitude, latitude], [6.12345, 49.61234])).toBeGreaterThan(100);
  });

  test("everything else stays as it was", () => {
    const [before, after] = [parse(PIPELINE), parse(shown)];
    for (const key of ["covey", "stations", "records", "layers", "screen"])
      expect(after[key]).toEqual(before[key]);
    expect(after.places.range).toEqual(before.places.range);
    expect(after.study).toEqual({ ...before.study, title: WITHHELD });
  });

  test("the pipeline of this project's sketch keeps its meaning", () => {
    const redacted = parse(
      redactPipeline('a: { date: { format: yyyy-MM-dd }, lags: [1, 2.5], q: 0.975 }\nid: "050114"\n', byTen),
    );
    expect(redacted).toEqual({
      a: { date: { format: "yyyy-MM-dd" }, lags: [1, 2.5], q: 0.975 },
      id: "050114",
    });
  });

  test("publish.redact-unreadable for text that is not YAML", () => {
    expect(() => redactPipeline("a: [1", byTen)).toThrowError(
      expect.objectContaining({ facts: expect.objectContaining({ name: "publish.redact-unreadable" }) }),
    );
  });
});
