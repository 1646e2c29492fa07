import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { meanOfDays } from "../../src/aggregate/days.ts";
import { meanOfWindows } from "../../src/aggregate/join.ts";
import { distanceKm, inverseDistance } from "../../src/aggregate/weights.ts";
import { daily } from "./made.ts";

const site = (id: string, longitude: number, latitude: number) => ({
  id,
  name: id,
  longitude,
  latitude,
  elevation: 0,
});
const floats = (...rows: number[][]) => rows.map((row) => Float64Array.from(row));

describe("weights by distance", () => {
  test("a quarter of a meridian on the sphere of radius 6371.0088 km is 10007.557 km", () => {
    expect(distanceKm([0, 0], [0, 90])).toBeCloseTo((Math.PI / 2) * 6371.0088, 6);
    expect(distanceKm([179.5, 0], [-179.5, 0])).toBeCloseTo(distanceKm([0, 0], [1, 0]), 6);
  });

  test("distance agrees with the angle between unit vectors", () => {
    const place = fc.tuple(
      fc.double({ min: -180, max: 180, noNaN: true }),
      fc.double({ min: -90, max: 90, noNaN: true }),
    );
    const vector = ([x, y]: readonly [number, number]) => {
      const [l, p] = [(x * Math.PI) / 180, (y * Math.PI) / 180];
      return [Math.cos(p) * Math.cos(l), Math.cos(p) * Math.sin(l), Math.sin(p)];
    };
    fc.assert(
      fc.property(place, place, (a, b) => {
        const [u, v] = [vector(a), vector(b)];
        const cross = [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
        const angle = Math.atan2(Math.hypot(...cross), u[0] * v[0] + u[1] * v[1] + u[2] * v[2]);
        // The haversine loses digits near the antipode.
        fc.pre(angle < 3.1);
        expect(distanceKm(a, b)).toBeCloseTo(6371.0088 * angle, 5);
      }),
    );
  });

  test("at distances 1 : 2 the squares weigh 4 : 1; a station at the place counts as 100 m away", () => {
    const sites = [site("a", 0, 0.1), site("b", 0, -0.2), site("c", 5, 5)];
    const weights = inverseDistance(["a", "b"], sites, [0, 0], 2, "x");
    expect(weights.get("a")).toBeCloseTo(0.8, 12);
    expect(weights.get("b")).toBeCloseTo(0.2, 12);
    const here = inverseDistance(["a", "c"], sites, [0, 0.1], 1, "x");
    expect((here.get("a") ?? 0) / (here.get("c") ?? 1)).toBeCloseTo(distanceKm([5, 5], [0, 0.1]) / 0.1, 6);
  });

  test("a station without coordinates is refused by name", () => {
    const sites = [site("a", 0, 0.1), site("b", Number.NaN, Number.NaN)];
    expect(() => inverseDistance(["a", "b"], sites, [0, 0], 2, "rain")).toThrow(
      "rain: expected longitude and latitude of station b, to weight it by its distance, found none",
    );
  });
});

describe("joining with weights", () => {
  test("all there: the weighted mean; a warm station that drops out invents no trend", () => {
    const weather = [0, 1, -1, 2, 0.5, -0.5];
    const hill = weather.map((x) => 4 + x);
    const valley = weather.map((x, t) => (t < 3 ? 10 + x : Number.NaN));
    const joined = meanOfWindows(floats(hill, valley), 6, [1, 3]);
    joined.values.forEach((value, t) => {
      expect(value).toBeCloseTo((4 + 3 * 10) / 4 + weather[t], 12);
    });
  });

  test("equal weights of any size change nothing", () => {
    const cell = fc.oneof(fc.integer({ min: -50, max: 50 }), fc.constant(Number.NaN));
    fc.assert(
      fc.property(
        fc.array(fc.array(cell, { minLength: 6, maxLength: 6 }), { minLength: 2, maxLength: 4 }),
        fc.double({ min: 0.1, max: 10, noNaN: true }),
        (rows, w) => {
          const plain = meanOfWindows(floats(...rows), 6);
          const weighted = meanOfWindows(
            floats(...rows),
            6,
            rows.map(() => w),
          );
          plain.values.forEach((value, t) => {
            if (Number.isNaN(value)) expect(weighted.values[t]).toBeNaN();
            else expect(weighted.values[t]).toBeCloseTo(value, 9);
          });
        },
      ),
    );
  });

  test("mean of days: the weighted mean where all are there, no step where one is away", () => {
    const days = Array.from({ length: 20 }, (_, i) => Math.sin(i));
    const hill = daily(
      "2001-07-01",
      days.map((x) => 4 + x),
      { site: "hill" },
    );
    const valley = daily(
      "2001-07-01",
      days.map((x, i) => (i > 9 && i < 15 ? null : 10 + x)),
      { site: "valley" },
    );
    const { series } = meanOfDays([hill, valley], [1, 3]);
    series.values.forEach((value, i) => {
      expect(value).toBeCloseTo(8.5 + days[i], 10);
    });
  });
});
