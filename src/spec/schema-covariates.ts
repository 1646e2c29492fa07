import { z } from "zod";
import { unit } from "./schema-records.ts";
import { MONTH_DAY } from "./windows.ts";
import { choice, flag, keys, list, number, oneOf, shared, someOf, stated, text } from "./words.ts";

const SPAN_END = /^(?:start|end|[1-9]\d{0,3} days? (?:before|after) (?:start|end))$/;
const SEASON = new RegExp(`^${MONTH_DAY}(?: to ${MONTH_DAY})?$`);
const YEARS = /^\d{4} to \d{4}$/;

const lag = () => stated(number("how many years further back", 1, { min: 0, max: 50, whole: true }), 0);
const spanEnd = (which: string, example: string) =>
  text(`${which} of the span, counted from an occasion's mid-date`, example, SPAN_END);

const window = oneOf(
  "the window: { season: Nov to Feb }, { from: 60 days before end, to: end }, whole interval or calendar year",
  [
    choice("a window without settings", ["whole interval", "calendar year"]),
    keys("a season", {
      season: text("the season, months or day and month to day and month", "15 Nov to 10 Mar", SEASON),
      lag: lag(),
    }),
    keys("a span", {
      from: spanEnd("the beginning", "60 days before end"),
      to: spanEnd("the end (not included)", "end"),
      lag: lag(),
    }),
    keys("the whole interval or year", {
      whole: choice("what is taken as a whole", ["interval", "calendar year"]),
      lag: lag(),
    }),
  ],
  { season: "Nov to Feb" },
);

export const years = (what: string) => text(`${what}, first and last year`, "1991 to 2020", YEARS);

/** Statistics written as one word. */
export const PLAIN_STATISTICS = [
  "mean",
  "sum",
  "minimum",
  "maximum",
  "range",
  "sd",
  "median",
  "trend",
  "growing season",
] as const;
export const INDICES = [
  "frost days",
  "icing days",
  "summer days",
  "tropical nights",
  "growing-season length",
  "TXx",
  "TNn",
  "Rx1day",
  "Rx5day",
  "SDII",
  "R10mm",
  "R20mm",
  "CDD",
  "CWD",
  "PRCPTOT",
] as const;
/** Statistics of one threshold, which may count the threshold itself (`or equal`). */
export const THRESHOLD_STATISTICS = [
  "days below",
  "days above",
  "share below",
  "share above",
  "longest run below",
  "longest run above",
  "sum above",
  "mean above",
  "first day below",
  "first day above",
  "last day below",
  "last day above",
] as const;

const threshold = (name: string) =>
  keys(`${name} a threshold`, {
    [name]: number("the threshold, in the covariate's unit", 0),
    "or equal": stated(flag("whether the threshold itself counts, true or false"), false),
  });

const base = () => number("the base, in the covariate's unit", 5);
const cap = () => number("the upper cap, in the covariate's unit; none if left out", 30).optional();
const degreeDays = keys("degree-days with a base", { base: base(), cap: cap() }, { base: 5, cap: 30 });
const extremes = keys("degree-days of maximum and minimum", {
  base: base(),
  cap: cap(),
  method: stated(
    oneOf("1 clips the mean, 2 clips maximum and minimum first", [z.literal(1), z.literal(2)], 2),
    1,
  ),
});
const largest = keys("the largest over days in a row", {
  days: number("the number of days in a row", 5, { min: 1, max: 366, whole: true }),
  count: stated(number("how many of the largest are averaged", 1, { min: 1, max: 100, whole: true }), 1),
});
const overBase = keys("a base period", { base: years("the base period") }, { base: "1991 to 2020" });

const statistic = oneOf(
  "the statistic: a word such as mean, sum or maximum, or a mapping such as { days below: 0 } or { quantile: 0.9 }",
  [
    choice("a statistic without settings", [...PLAIN_STATISTICS, ...INDICES]),
    keys("a quantile (type 7)", {
      quantile: number("the probability of the quantile", 0.9, { min: 0, max: 1 }),
    }),
    ...THRESHOLD_STATISTICS.map(threshold),
    keys("degree-days", {
      "degree-days": oneOf("the base, or { base: …, cap: … }", [base(), degreeDays], 5),
    }),
    keys("degree-days below a base", { "degree-days below": base() }),
    keys("degree-days of maximum and minimum", { "degree-days of extremes": extremes }),
    keys("the largest sums", { "largest sums": largest }),
    keys("the largest means", { "largest means": largest }),
    keys("rain of very wet days", { R95pTOT: overBase }),
    keys("the standardised precipitation index", { SPI: overBase }),
  ],
  "mean",
);

export const completeness = stated(
  oneOf(
    "how complete a window must be: wmo, five-three or { share: … }",
    [
      choice("a rule by name", ["wmo", "five-three"]),
      keys("a share of the days", { share: number("the share of days needed", 0.95, { above: 0, max: 1 }) }),
    ],
    { share: 0.95 },
  ),
  "wmo",
);

const name = () => text("the covariate's name", "winter rain");
const theme = () => text("the covariate's theme, a word for what it is about", "rain");

export const windowValue = shared("window", window);
export const statisticValue = shared("statistic", statistic);

const values = {
  window: windowValue,
  statistic: statisticValue,
  complete: completeness,
  unit: unit("the values before the statistic; if left out, the unit they are read in").optional(),
  departures: keys(
    "a base from which daily or monthly departures are taken first",
    { by: choice("what a base mean belongs to", ["month", "day"]), base: years("the base period") },
    { by: "month", base: "1991 to 2020" },
  ).optional(),
  "allowed missing": number("the missing days that counts, runs and degree-days may have", 3, {
    min: 0,
    max: 366,
    whole: true,
  }).optional(),
};

const infill = keys(
  "how short gaps are filled from neighbouring stations, counted and told",
  {
    method: choice("how gaps are filled", ["neighbour regression", "normal ratio"]),
    "longest gap": text("the longest gap that is filled", "3 days", /^[1-9]\d{0,2} days?$/),
  },
  { method: "neighbour regression", "longest gap": "3 days" },
);

const stationCovariate = keys("a covariate from station records", {
  name: name(),
  theme: theme(),
  from: text("the name of a variable of the records", "rain"),
  second: text("the variable with the daily minima, for degree-days of extremes", "tmin").optional(),
  stations: stated(
    oneOf("the stations: all, or a list of names or identifiers", [
      choice("every station", ["all"]),
      someOf("a list of stations", text("a station's name or identifier", "Ash"), ["Ash", "Beck"]),
    ]),
    "all",
  ),
  join: stated(
    choice("how stations are joined", ["mean of windows", "mean of days", "apart"]),
    "mean of windows",
  ),
  weights: keys("weights of the stations by inverse distance to a place", {
    near: text("the name of a place that is a point", "roost"),
    power: stated(number("the power of the distance", 2, { above: 0, max: 10 }), 2),
  }).optional(),
  infill: infill.optional(),
  ...values,
});

const layerCovariate = keys("a covariate from a layer", {
  name: name(),
  theme: theme(),
  from: text("the name of a layer", "greenness"),
  at: text("the name of a place", "roost"),
  by: choice("how the layer is read at the place", ["nearest", "bilinear", "area", "radius"]),
  radius: text("the radius around a point", "2 km", /^\d+(?:\.\d+)? (?:m|km)$/).optional(),
  "valid area": number("the share of the area that must have values (0.8 if left out)", 0.8, {
    min: 0,
    max: 1,
  }).optional(),
  ...values,
});

const readyMadeCovariate = keys("a covariate from a ready-made table", {
  name: name(),
  theme: theme(),
  from: text("the table and column, with a dot between", "visits.disturbance", /^\S[^\n.]*\.[^\n]*\S$/),
});

export const covariate = oneOf("a covariate from station records, a layer or a ready-made table", [
  stationCovariate,
  layerCovariate,
  readyMadeCovariate,
]);

export const DERIVE_RULES = ["difference", "ratio", "product", "square", "mean"] as const;

function derivedFrom(rule: (typeof DERIVE_RULES)[number], count: number | undefined) {
  const operands = z.array(text("the name of a covariate", "winter rain"));
  const sized = count === undefined ? operands.min(2).max(100) : operands.length(count);
  const many =
    count === undefined ? "two or more covariates" : count === 1 ? "one covariate" : "two covariates";
  const example = ["hot spell", "last summer"].slice(0, count);
  return keys(`the ${rule} of ${many}`, {
    name: name(),
    theme: theme(),
    unit: unit("the derived covariate; worked out from its sources if left out").optional(),
    [rule]: sized.meta({ description: `a list of ${many}`, examples: [example] }),
  });
}

export const derived = oneOf("a covariate made of others: difference, ratio, product, square or mean", [
  derivedFrom("difference", 2),
  derivedFrom("ratio", 2),
  derivedFrom("product", 2),
  derivedFrom("square", 1),
  derivedFrom("mean", undefined),
]);

export const covariates = someOf("the covariates", covariate);
export const derive = stated(list("covariates made of others", derived), []);
