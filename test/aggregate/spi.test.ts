import { describe, expect, test } from "vitest";
import { aggregateCovariate } from "../../src/aggregate/aggregate.ts";
import type { CovariateDefinition } from "../../src/aggregate/options.ts";
import { fitGamma, probabilityOf, standardisedIndex } from "../../src/aggregate/spi.ts";
import { dayOf } from "../../src/data/day.ts";
import type { Series } from "../../src/data/series.ts";
import { InputError } from "../../src/errors.ts";
import { daily, yearly } from "./made.ts";

// Wilks, Statistical Methods in the Atmospheric Sciences: January precipitation at Ithaca, 1933–82, inches; the
// fifty values and results as recalled in methods §2.
const ITHACA =
  `0.44 1.18 2.69 2.08 3.66 1.72 2.82 0.72 1.46 1.30 1.35 0.54 2.74 1.13 2.50 1.72 2.27 2.82 1.98 2.44
  2.53 2.00 1.12 2.13 1.36 4.90 2.94 1.75 1.69 1.88 1.31 1.76 2.17 2.38 1.16 1.39 1.36 1.03 1.11 1.35 1.44 1.84
  1.69 3.00 1.36 6.37 4.55 0.52 0.87 1.51`
    .split(/\s+/)
    .map(Number);

/** Daily rain whose January sums are given: all of it on the 15th. */
function januaries(first: number, sums: readonly number[]): Series {
  const start = dayOf(first, 1, 1);
  const days = dayOf(first + sums.length, 1, 1) - start;
  const values = new Array(days).fill(0);
  sums.forEach((sum, k) => {
    values[dayOf(first + k, 1, 15) - start] = sum;
  });
  return daily(`${first}-01-01`, values, { kind: "total", variable: "rain" });
}

const january: CovariateDefinition = {
  name: "wet January",
  theme: "rain",
  unit: "in",
  window: { type: "season", from: { month: 1, day: 1 }, to: { month: 1, day: 0 }, lag: 0 },
  statistic: { type: "SPI", base: { from: 1933, to: 1982 } },
  complete: { type: "wmo" },
  join: "mean of windows",
  series: [januaries(1933, ITHACA)],
};

describe("standardised precipitation index", () => {
  test("Ithaca: α 3.76497, β 0.520747; 3.15 in gives F 0.8779 and z 1.164", () => {
    const fit = fitGamma(ITHACA);
    expect(ITHACA).toHaveLength(50);
    expect(fit.shape).toBeCloseTo(3.76497, 5);
    expect(fit.scale).toBeCloseTo(0.520747, 6);
    expect(probabilityOf(3.15, fit)).toBeCloseTo(0.8779, 4);
    expect(standardisedIndex(3.15, fit)).toBeCloseTo(1.164, 3);
    // With the rounded parameters of the book: F = 0.879, z = +1.17.
    const rounded = { shape: 3.76, scale: 0.52, zeros: 0 };
    expect(probabilityOf(3.15, rounded)).toBeCloseTo(0.879, 3);
    expect(standardisedIndex(3.15, rounded)).toBeCloseTo(1.17, 2);
  });

  test("zeros are mixed in: H = q + (1 − q) G, and no rain at all lies at q", () => {
    const wet = fitGamma(ITHACA);
    const fit = fitGamma([...ITHACA, ...new Array(50).fill(0)]);
    expect(fit).toEqual({ ...wet, zeros: 0.5 });
    expect(probabilityOf(0, fit)).toBe(0.5);
    expect(probabilityOf(3.15, fit)).toBeCloseTo(0.5 + 0.5 * probabilityOf(3.15, wet), 14);
  });

  test("as a covariate: the sum of each interval's January against the station's base years", () => {
    const { covariate } = aggregateCovariate(january, yearly("07-20", 1940, 5));
    const fit = fitGamma(ITHACA);
    expect(covariate.unit).toBe("1");
    covariate.values.forEach((one, t) => {
      expect(one.value).toBeCloseTo(standardisedIndex(ITHACA[8 + t], fit), 12); // January 1941 is the ninth
    });
  });

  test("19 base years are too few, and spans have no base years", () => {
    const short = { ...january, statistic: { type: "SPI", base: { from: 1933, to: 1951 } } } as const;
    const { covariate } = aggregateCovariate(short, yearly("07-20", 1940, 1));
    expect(covariate.values[0].failed).toBe("19 complete base years (20 needed)");
    const enough = { ...january, statistic: { type: "SPI", base: { from: 1933, to: 1952 } } } as const;
    expect(aggregateCovariate(enough, yearly("07-20", 1940, 1)).covariate.values[0].failed).toBeUndefined();
    try {
      aggregateCovariate({ ...january, window: { type: "interval", lag: 0 } }, yearly("07-20", 1940, 1));
      expect.unreachable();
    } catch (error) {
      expect(error).toBeInstanceOf(InputError);
      expect((error as InputError).facts.name).toBe("aggregate.spi-window");
    }
  });
});
