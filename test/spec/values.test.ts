import { expect, test } from "vitest";
import { statisticUnit } from "../../src/aggregate/words.ts";
import { parsePipeline } from "../../src/spec/parse.ts";
import { derivedUnit, unitAfter } from "../../src/spec/units.ts";
import { edited } from "./good.ts";

function covariate(window: string, statistic: string, more = "") {
  const text = edited(
    "window: whole interval, statistic: { days below: 0 } }",
    `window: ${window}, statistic: ${statistic}${more} }`,
  );
  const found = parsePipeline(text, "p.yaml").covariates[1];
  if (found.source === "ready-made") throw new Error("another covariate stands second");
  return found;
}

const date = (month: number, day: number) => ({ month, day });

test.each([
  ["{ season: Nov to Feb }", { type: "season", from: date(11, 1), to: date(2, 0), lag: 0 }],
  ["{ season: 15 Nov to 10 Mar }", { type: "season", from: date(11, 15), to: date(3, 10), lag: 0 }],
  ["{ season: 15 Nov to Mar, lag: 2 }", { type: "season", from: date(11, 15), to: date(3, 0), lag: 2 }],
  ["{ season: Jul }", { type: "season", from: date(7, 1), to: date(7, 0), lag: 0 }],
  ["{ season: 5 Jul }", { type: "season", from: date(7, 5), to: date(7, 5), lag: 0 }],
  ["{ season: 1 Feb to 29 Feb }", { type: "season", from: date(2, 1), to: date(2, 29), lag: 0 }],
  [
    "{ from: 60 days before end, to: end }",
    { type: "span", from: { days: -60, of: "end" }, to: { days: 0, of: "end" }, lag: 0 },
  ],
  [
    "{ from: start, to: 30 days after start, lag: 1 }",
    { type: "span", from: { days: 0, of: "start" }, to: { days: 30, of: "start" }, lag: 1 },
  ],
  [
    "{ from: 1 day after start, to: 1 day before end }",
    { type: "span", from: { days: 1, of: "start" }, to: { days: -1, of: "end" }, lag: 0 },
  ],
  ["whole interval", { type: "interval", lag: 0 }],
  ["{ whole: interval, lag: 1 }", { type: "interval", lag: 1 }],
  ["calendar year", { type: "year", lag: 0 }],
  ["{ whole: calendar year, lag: 3 }", { type: "year", lag: 3 }],
])("window %s", (text, window) => {
  expect(covariate(text, "mean").window).toEqual(window);
});

const past = (type: string, threshold: number, orEqual = false) => ({ type, threshold, orEqual });

test.each([
  ["mean", { type: "mean" }],
  ["sd", { type: "sd" }],
  ["growing season", { type: "growing season" }],
  ["tropical nights", { type: "index", index: "tropical nights" }],
  ["Rx5day", { type: "index", index: "Rx5day" }],
  ["{ quantile: 0.9 }", { type: "quantile", probability: 0.9 }],
  ["{ days below: 0 }", past("days below", 0)],
  ["{ days above: 25, or equal: true }", past("days above", 25, true)],
  ["{ share above: 1.5 }", past("share above", 1.5)],
  ["{ longest run below: -5 }", past("longest run below", -5)],
  ["{ last day below: 0 }", past("last day below", 0)],
  ["{ sum above: 1 }", past("sum above", 1)],
  ["{ degree-days: 5 }", { type: "degree-days", base: 5, cap: Number.POSITIVE_INFINITY }],
  ["{ degree-days: { base: 5, cap: 30 } }", { type: "degree-days", base: 5, cap: 30 }],
  ["{ degree-days below: 18 }", { type: "degree-days below", base: 18 }],
  ["{ largest sums: { days: 5 } }", { type: "largest sums", days: 5, count: 1 }],
  ["{ largest means: { days: 3, count: 2 } }", { type: "largest means", days: 3, count: 2 }],
  ["{ SPI: { base: 1991 to 2020 } }", { type: "SPI", base: { from: 1991, to: 2020 } }],
])("statistic %s", (text, statistic) => {
  const read = covariate("{ season: Nov to Feb }", text).statistic;
  expect(read).toEqual(statistic);
  // The unit that derived columns are told is the one the aggregate room gives.
  expect(unitAfter(read, "degC")).toBe(statisticUnit(read, "degC"));
});

test("degree-days of extremes need the minima beside the maxima", () => {
  const read = covariate(
    "whole interval",
    "{ degree-days of extremes: { base: 10, cap: 30, method: 2 } }",
    ", second: rain",
  );
  expect(read.statistic).toEqual({ type: "degree-days of extremes", base: 10, cap: 30, method: 2 });
  expect(read).toMatchObject({ variable: "tmin", second: "rain" });
});

test("completeness, unit, departures and allowed gaps", () => {
  expect(covariate("calendar year", "mean").complete).toEqual({ type: "wmo" });
  const read = covariate(
    "calendar year",
    "mean",
    ", complete: { share: 0.9 }, unit: K, departures: { by: month, base: 1991 to 2020 }, allowed missing: 3",
  );
  expect(read).toMatchObject({
    complete: { type: "share", share: 0.9 },
    unit: "K",
    anomaly: { by: "month", base: { from: 1991, to: 2020 } },
    allowedMissing: 3,
  });
  expect(covariate("calendar year", "mean", ", complete: five-three").complete).toEqual({
    type: "five-three",
  });
});

test("infilling", () => {
  const more = ", infill: { method: neighbour regression, longest gap: 3 days }";
  expect(covariate("calendar year", "mean", more)).toMatchObject({
    infill: { method: "regression", longest: 3 },
  });
  expect(covariate("calendar year", "mean")).not.toHaveProperty("infill");
});

test("base period", () => {
  const text = edited("prepare:", "prepare:\n  standardise: { base: 1991 to 2020 }").replace(
    "window: whole interval",
    "window: calendar year",
  );
  expect(parsePipeline(text, "p.yaml").prepare.standardise).toEqual({ type: "base", from: 1991, to: 2020 });
});

test.each([
  ["difference", ["mm", "mm"], "mm"],
  ["ratio", ["mm", "mm"], "1"],
  ["ratio", ["mm", "days"], "mm/days"],
  ["product", ["mm", "1"], "mm"],
  ["product", ["mm", "degC"], "mm*degC"],
  ["square", ["mm"], "mm^2"],
  ["mean", ["mm", "mm", "mm"], "mm"],
] as const)("the unit of a %s of %j is %s", (rule, of, unit) => {
  expect(derivedUnit(rule, of)).toBe(unit);
});
