import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { meanOfDays } from "../../src/aggregate/days.ts";
import { meanOfWindows } from "../../src/aggregate/join.ts";
import { bySite } from "../../src/aggregate/sites.ts";
import { InputError } from "../../src/errors.ts";
import { daily } from "./made.ts";

const NaNs = Number.NaN;
const rows = (...list: number[][]) => list.map((row) => Float64Array.from(row));
const slope = (values: ArrayLike<number>) => {
  const n = values.length;
  const mid = (n - 1) / 2;
  let [top, bottom] = [0, 0];
  for (let t = 0; t < n; t++) {
    top += (t - mid) * values[t];
    bottom += (t - mid) ** 2;
  }
  return top / bottom;
};

describe("mean of windows", () => {
  test("stations that are all there: the plain mean, to the last digit", () => {
    const joined = meanOfWindows(rows([1, 2.5], [4, 0.1], [0.7, 9]), 2);
    expect(Array.from(joined.values)).toEqual([(1 + 4 + 0.7) / 3, (2.5 + 0.1 + 9) / 3]);
    expect(joined.changing).toEqual([]);
  });

  test("a warm station that drops out would have invented a trend and does not", () => {
    // Three stations see the same weather; the valley, 6 degrees warmer, closes after interval 9 of 18.
    const weather = [1, -1, 0.5, 0, -0.5, 2, -2, 1, -1, 0, 0.5, -0.5, 1, -1, 2, -2, 0, 0];
    const hill = weather.map((x) => 4 + x);
    const wood = weather.map((x) => 5 + x);
    const valley = weather.map((x, t) => (t < 9 ? 10.5 + x : NaNs));
    const plain = weather.map((_, t) =>
      t < 9 ? (hill[t] + wood[t] + valley[t]) / 3 : (hill[t] + wood[t]) / 2,
    );
    const joined = meanOfWindows(rows(hill, wood, valley), 18);
    const truth = slope(weather);
    expect(slope(plain) - truth).toBeLessThan(-0.1); // the trend that a plain mean invents: −0.17 per interval
    expect(slope(joined.values)).toBeCloseTo(truth, 12);
    joined.values.forEach((value, t) => {
      expect(value).toBeCloseTo(6.5 + weather[t], 12);
    });
    expect(joined.changing).toEqual([9, 10, 11, 12, 13, 14, 15, 16, 17]);
  });

  test("a station that is only there in the warm years is not taken for a warm station", () => {
    const weather = [0, 0, 0, 5, 5, 5];
    const joined = meanOfWindows(
      rows(
        weather,
        weather.map((x, t) => (t > 2 ? x : NaNs)),
      ),
      6,
    );
    joined.values.forEach((value, t) => {
      expect(value).toBeCloseTo(weather[t], 12);
    });
  });

  test("additive stations come back whatever cells are missing, as long as they hang together", () => {
    const cells = fc.record({
      levels: fc.array(fc.integer({ min: -20, max: 20 }), { minLength: 2, maxLength: 5 }),
      weather: fc.array(fc.integer({ min: -20, max: 20 }), { minLength: 2, maxLength: 12 }),
      holes: fc.array(fc.boolean(), { minLength: 60, maxLength: 60 }),
    });
    fc.assert(
      fc.property(cells, ({ levels, weather, holes }) => {
        // The first station is always there, which links all intervals.
        const values = levels.map((level, s) =>
          Float64Array.from(weather, (x, t) => (s > 0 && holes[s * 12 + t] ? NaNs : level + x)),
        );
        const joined = meanOfWindows(values, weather.length);
        const taking = levels.filter((_, s) => !joined.absent.includes(s));
        const level = taking.reduce((a, b) => a + b, 0) / taking.length;
        joined.values.forEach((value, t) => {
          expect(Math.abs(value - level - weather[t])).toBeLessThan(1e-9);
        });
      }),
    );
  });

  test("agrees with the additive fit reached by sweeping rows and columns in turn", () => {
    const values = [
      [3.1, NaNs, 2.2, 4.8, NaNs, 1.0],
      [5.0, 4.1, NaNs, 7.3, 3.3, NaNs],
      [NaNs, 1.2, 0.4, 2.9, 0.1, -1.5],
    ];
    const a = [0, 0, 0];
    const b = [0, 0, 0, 0, 0, 0];
    const average = (list: number[]) => list.reduce((x, y) => x + y, 0) / list.length;
    for (let round = 0; round < 2000; round++) {
      for (let s = 0; s < 3; s++)
        a[s] = average(values[s].map((v, t) => v - b[t]).filter((v) => !Number.isNaN(v)));
      for (let t = 0; t < 6; t++)
        b[t] = average(values.map((row, s) => row[t] - a[s]).filter((v) => !Number.isNaN(v)));
    }
    const joined = meanOfWindows(rows(...values), 6);
    joined.values.forEach((value, t) => {
      expect(value).toBeCloseTo(average(a) + b[t], 10);
    });
  });

  test("a station without a single window takes no part; nobody there is missing", () => {
    const joined = meanOfWindows(rows([1, NaNs, 3], [NaNs, NaNs, NaNs]), 3);
    expect(joined.absent).toEqual([1]);
    expect(joined.changing).toEqual([]);
    expect(Array.from(joined.values)).toEqual([1, NaNs, 3]);
  });

  test("intervals that share no station with the rest have no common base", () => {
    const joined = meanOfWindows(rows([1, 2, 3, NaNs, NaNs], [NaNs, NaNs, NaNs, 8, 9]), 5);
    expect(joined.adrift).toEqual([3, 4]);
    expect(Array.from(joined.values)).toEqual([1, 2, 3, NaNs, NaNs]);
  });
});

describe("mean of days", () => {
  const ash = [1, 2, 3, 4, 5, 6];
  test("the plain mean where all have a value", () => {
    const { series, partial } = meanOfDays([
      daily("2001-01-01", ash),
      daily(
        "2001-01-01",
        ash.map((x) => x + 4),
      ),
    ]);
    expect(Array.from(series.values)).toEqual([3, 4, 5, 6, 7, 8]);
    expect(Array.from(partial)).toEqual([0, 0, 0, 0, 0, 0]);
  });

  test("a station away for some days makes no step", () => {
    const beck = ash.map((x, k) => (k === 2 || k === 3 ? null : x + 4));
    const { series, partial } = meanOfDays([daily("2001-01-01", ash), daily("2001-01-01", beck)]);
    series.values.forEach((value, k) => {
      expect(value).toBeCloseTo(ash[k] + 2, 12);
    });
    expect(Array.from(partial)).toEqual([0, 0, 1, 1, 0, 0]);
  });

  test("how far a station stands above the mean is taken by calendar month", () => {
    // Beck is 4 above Ash in January, level in February.
    const days = 59;
    const a = Array.from({ length: days }, (_, k) => k % 7);
    const b = a.map((x, k) => (k === 10 || k === 40 ? null : k < 31 ? x + 4 : x));
    const { series } = meanOfDays([daily("2001-01-01", a), daily("2001-01-01", b)]);
    expect(series.values[10]).toBeCloseTo(a[10] + 2, 12);
    expect(series.values[40]).toBeCloseTo(a[40], 12);
  });

  test("a month without a common day takes the offset of all common days", () => {
    const a = Array.from({ length: 59 }, (_, k) => k % 7);
    const b = a.map((x, k) => (k >= 31 ? null : x + 4));
    const { series } = meanOfDays([daily("2001-01-01", a), daily("2001-01-01", b)]);
    for (let k = 31; k < 59; k++) expect(series.values[k]).toBeCloseTo(a[k] + 2, 12);
  });

  test("records that begin and end apart; days nobody has stay missing", () => {
    const { series } = meanOfDays([
      daily("2001-01-01", [1, 2, 3, null, 5]),
      daily("2001-01-03", [7, null, 9, 10], { site: "Beck" }),
    ]);
    // Common days: the 3rd and 5th, Beck 4 above Ash.
    expect(Array.from(series.values)).toEqual([3, 4, 5, NaNs, 7, 8]);
    expect(series.site).toBe("Ash, Beck");
  });

  test("no common day at all: missing, not a step", () => {
    const { series } = meanOfDays([daily("2001-01-01", [1, 2]), daily("2001-01-03", [7, 8])]);
    expect(Array.from(series.values)).toEqual([NaNs, NaNs, NaNs, NaNs]);
  });

  test("values over different periods are refused", () => {
    const week = daily("2001-01-01", [3]);
    week.ends[0] += 6;
    let error: unknown;
    try {
      meanOfDays([daily("2001-01-01", [1]), week]);
    } catch (caught) {
      error = caught;
    }
    expect(error).toBeInstanceOf(InputError);
    expect((error as InputError).facts.name).toBe("aggregate.periods-differ");
    expect((error as InputError).message).toContain("values of 1 and of 7 days from 2001-01-01");
  });
});

describe("one series per site", () => {
  test("parts are put end to end, sites sorted by code unit", () => {
    const joined = bySite([
      daily("2001-01-03", [3, 4], { site: "b" }),
      daily("2001-01-01", [9], { site: "B" }),
      daily("2001-01-01", [1, 2], { site: "b" }),
    ]);
    expect(joined.map((one) => one.site)).toEqual(["B", "b"]);
    expect(Array.from(joined[1].values)).toEqual([1, 2, 3, 4]);
  });

  test("parts that cover the same day are refused with the day", () => {
    expect(() => bySite([daily("2001-01-01", [1, 2]), daily("2001-01-02", [1])])).toThrow(
      "expected one value of x at Ash per day, found two that cover 2001-01-02",
    );
  });
});
