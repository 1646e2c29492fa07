import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Position } from "../../src/data/place.ts";
import { coarsen } from "../../src/study/coarsen.ts";

/** Great-circle distance, km, by the haversine formula. */
function apart([lon1, lat1]: Position, [lon2, lat2]: Position): number {
  const rad = Math.PI / 180;
  const h =
    Math.sin(((lat2 - lat1) * rad) / 2) ** 2 +
    Math.cos(lat1 * rad) * Math.cos(lat2 * rad) * Math.sin(((lon2 - lon1) * rad) / 2) ** 2;
  return 2 * 6371.0088 * Math.asin(Math.min(1, Math.sqrt(h)));
}

const position = fc.tuple(
  fc.double({ min: -180, max: 180, noNaN: true }),
  fc.double({ min: -89, max: 89, noNaN: true }),
);

describe("coarsened positions", () => {
  test("lie within about half a diagonal of the true one, and not always near it", () => {
    fc.assert(
      fc.property(position, fc.constantFrom(1, 5, 10, 50), (where, km) => {
        // 0.16 km for the three decimals; near the poles a row is a little wider at one of its edges.
        expect(apart(where, coarsen(where, km))).toBeLessThan(km * Math.SQRT1_2 * 1.25 + 0.16);
      }),
    );
    const row = Array.from({ length: 400 }, (_, i): Position => [8 + i / 1000, 50]);
    const moved = row.map((one) => apart(one, coarsen(one, 10)));
    expect(Math.max(...moved)).toBeGreaterThan(4.9);
  });

  test("tell the cell and nothing more: the centre's own answer is the centre", () => {
    fc.assert(
      fc.property(position, fc.constantFrom(5, 10, 50), (where, km) => {
        const centre = coarsen(where, km);
        expect(coarsen(centre, km)).toEqual(centre);
      }),
    );
    const cells = new Set(
      Array.from({ length: 10_000 }, (_, i) => String(coarsen([8 + (i % 100) / 1000, 50 + i / 100_000], 10))),
    );
    expect(cells.size).toBeLessThanOrEqual(6);
  });

  test("stay on the globe", () => {
    for (const one of [
      [180, 90],
      [-180, -90],
      [180, 0],
    ] as const) {
      const [longitude, latitude] = coarsen(one, 10);
      expect(Math.abs(longitude)).toBeLessThanOrEqual(180);
      expect(Math.abs(latitude)).toBeLessThanOrEqual(90);
    }
  });
});
