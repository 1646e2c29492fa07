import { describe, expect, test } from "vitest";
import type { CovariateDefinition, Statistic } from "../../src/aggregate/options.ts";
import { completenessText, definitionText, statisticUnit } from "../../src/aggregate/words.ts";
import { daily } from "./made.ts";

const base = { from: 1961, to: 1990 };
const past = { threshold: 2, orEqual: false } as const;
const cap = Number.POSITIVE_INFINITY;

/** Statistic, its words before "of x", its unit for values in degC. */
const CASES: [Statistic, string, string][] = [
  [{ type: "mean" }, "mean", "degC"],
  [{ type: "sd" }, "standard deviation (n − 1)", "degC"],
  [{ type: "quantile", probability: 0.9 }, "0.9 quantile (type 7)", "degC"],
  [{ type: "days below", ...past }, "days below 2 degC", "days"],
  [{ type: "days above", ...past, orEqual: true }, "days at or above 2 degC", "days"],
  [{ type: "share below", ...past }, "share of days below 2 degC", "1"],
  [{ type: "longest run above", ...past }, "longest run above 2 degC", "days"],
  [{ type: "first day above", ...past }, "first day above 2 degC", "days"],
  [{ type: "sum above", ...past }, "sum above 2 degC", "degC"],
  [{ type: "degree-days", base: 5, cap }, "degree-days above 5 degC", "degC days"],
  [{ type: "degree-days", base: 5, cap: 30 }, "degree-days above 5 degC, capped at 30 degC,", "degC days"],
  [{ type: "degree-days below", base: 15 }, "degree-days below 15 degC", "degC days"],
  [
    { type: "degree-days of extremes", base: 5, cap, method: 1 },
    "degree-days above 5 degC (method 1)",
    "degC days",
  ],
  [{ type: "trend" }, "linear trend per day", "degC per day"],
  [{ type: "largest means", days: 7, count: 1 }, "largest mean over 7 days", "degC"],
  [{ type: "largest sums", days: 1, count: 3 }, "mean of the 3 largest sums over 1 day", "degC"],
  [{ type: "growing season" }, "growing-season length (ETCCDI)", "days"],
  [{ type: "index", index: "TXx" }, "TXx (ETCCDI)", "degC"],
  [{ type: "index", index: "CDD" }, "CDD (ETCCDI)", "days"],
  [{ type: "R95pTOT", base }, "R95pTOT (ETCCDI, base 1961 to 1990)", "degC"],
  [{ type: "SPI", base }, "standardised precipitation index (base 1961 to 1990)", "1"],
];

function definition(statistic: Statistic): CovariateDefinition {
  return {
    name: "n",
    theme: "t",
    unit: "degC",
    window: { type: "season", from: { month: 12, day: 1 }, to: { month: 2, day: 0 }, lag: 0 },
    statistic,
    complete: { type: "wmo" },
    join: "mean of windows",
    series: [daily("2001-01-01", [1])],
  };
}

describe("a covariate in words", () => {
  test.each(CASES)("%o", (statistic, words, unit) => {
    expect(definitionText(definition(statistic), ["Ash"])).toBe(`${words} of x over Dec to Feb, at Ash`);
    expect(statisticUnit(statistic, "degC")).toBe(unit);
  });

  test("departures and several stations are said", () => {
    const text = definitionText({ ...definition({ type: "mean" }), anomaly: { by: "month", base } }, [
      "A",
      "B",
    ]);
    expect(text).toBe(
      "mean of departures of x from the month's mean of 1961 to 1990 over Dec to Feb, mean of 2 stations",
    );
  });

  test("each rule of completeness has its name", () => {
    const mean = definition({ type: "mean" });
    expect(completenessText(mean)).toBe("WMO-No. 1203 (2017)");
    expect(completenessText({ ...mean, complete: { type: "five-three" } })).toBe("the 5/3 rule");
    const share = { ...mean, complete: { type: "share", share: 0.9 } } as const;
    expect(completenessText({ ...share, allowedMissing: 2 })).toBe(
      "a share of 0.9 of the days; 2 missing days allowed",
    );
  });
});
