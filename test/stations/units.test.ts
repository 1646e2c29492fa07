import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { convertUnit, knownUnit, sameDimension } from "../../src/stations/units.ts";

const one = (value: number, from: string, to: string, use: "reading" | "difference" = "reading") =>
  convertUnit([value], from, to, use)[0];

describe("units", () => {
  // Exact by definition: The International System of Units (BIPM brochure, 9th edition) and NIST SP 811 (2008), appendix B.
  test.each([
    [25.4, "mm", 1, "in"],
    [1, "in", 2.54, "cm"],
    [36, "km/h", 10, "m/s"],
    [1, "kt", 1852 / 3600, "m/s"],
    [1, "hPa", 100, "Pa"],
    [760, "mmHg", 1013.2501443540001, "hPa"],
    [30, "mph", 13.4112, "m/s"],
    [1, "mbar", 1, "hPa"],
    [50, "percent", 0.5, "1"],
    [0.25, "1", 25, "%"],
    [1, "MJ/m2", 1e6, "J/m2"],
    [1, "MJ m-2 day-1", 1e6 / 86_400, "W/m2"],
    [86.4, "mm/day", 0.001, "mm/s"],
    [3, "cm", 30, "mm"],
  ])("%d %s = %d %s", (value, from, expected, to) => {
    expect(one(value, from, to)).toBeCloseTo(expected, 12);
    expect(one(expected, to, from)).toBeCloseTo(value, 11);
  });

  // ITS-90 fixes 0 degC = 273.15 K; degF by definition 9/5 degC + 32.
  test.each([
    [0, "degC", 273.15, "K"],
    [212, "degF", 100, "degC"],
    [-40, "°C", -40, "°F"],
    [0, "K", -459.67, "degF"],
  ])("readings: %d %s = %d %s", (value, from, expected, to) => {
    expect(one(value, from, to)).toBeCloseTo(expected, 10);
  });

  test("differences and degree-days have no zero point", () => {
    expect(one(10, "degC", "degF", "difference")).toBe(18);
    expect(one(10, "K", "degC", "difference")).toBe(10);
    expect(one(10, "degC days", "degF days")).toBeCloseTo(18, 12);
    expect(one(1, "degC/day", "K/day")).toBe(1);
  });

  test("there and back again; NaN stays", () => {
    const units = fc.constantFrom(
      ["degC", "degF"],
      ["degC", "K"],
      ["mm", "in"],
      ["m/s", "kt"],
      ["hPa", "mmHg"],
    );
    fc.assert(
      fc.property(units, fc.double({ min: -1e4, max: 1e4, noNaN: true }), ([a, b], value) => {
        expect(Math.abs(one(one(value, a, b), b, a) - value)).toBeLessThan(1e-9);
      }),
    );
    expect(one(Number.NaN, "degC", "degF")).toBeNaN();
  });

  test("unknown units and other dimensions say what can be written", () => {
    expect([knownUnit("mm"), knownUnit("1"), knownUnit("W/m2"), knownUnit("buckets")]).toEqual([
      true,
      true,
      true,
      false,
    ]);
    expect([sameDimension("degC", "K"), sameDimension("mm", "degC"), sameDimension("mm", "buckets")]).toEqual(
      [true, false, false],
    );
    expect(() => one(1, "mm", "degC")).toThrow('expected a unit that "mm" can be converted to, found "degC"');
    expect(() => one(1, "buckets", "mm")).toThrow('found "buckets"; write a unit such as degC, degF');
  });
});
