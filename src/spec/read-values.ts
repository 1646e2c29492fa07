import type { Completeness, Statistic, Window } from "../aggregate/options.ts";
import type { RawPipeline } from "./schema.ts";
import { INDICES, PLAIN_STATISTICS, THRESHOLD_STATISTICS } from "./schema-covariates.ts";
import { readSeason, readSpanEnd, readYears } from "./windows.ts";

type RawCovariate = RawPipeline["covariates"][number];
type RawValues = Extract<RawCovariate, { window: unknown }>;
export type RawWindow = RawValues["window"];
export type RawStatistic = RawValues["statistic"];

/** Undefined for a season with a day that its month does not have. */
export function readWindow(raw: RawWindow): Window | undefined {
  if (raw === "whole interval") return { type: "interval", lag: 0 };
  if (raw === "calendar year") return { type: "year", lag: 0 };
  if ("season" in raw) {
    const season = readSeason(raw.season);
    return season === undefined ? undefined : { type: "season", ...season, lag: raw.lag };
  }
  if ("whole" in raw) return { type: raw.whole === "interval" ? "interval" : "year", lag: raw.lag };
  return { type: "span", from: readSpanEnd(raw.from), to: readSpanEnd(raw.to), lag: raw.lag };
}

export function readComplete(raw: "wmo" | "five-three" | { readonly share: number }): Completeness {
  return typeof raw === "string" ? { type: raw } : { type: "share", share: raw.share };
}

interface RawDegreeDays {
  readonly base: number;
  readonly cap?: number | undefined;
}

interface RawLargest {
  readonly days: number;
  readonly count: number;
}

/** What the mappings of the schema's `statistic` may hold; exactly one of the first keys is there. */
interface StatisticKeys {
  readonly quantile?: number;
  readonly "degree-days"?: number | RawDegreeDays;
  readonly "degree-days below"?: number;
  readonly "degree-days of extremes"?: RawDegreeDays & { readonly method: 1 | 2 };
  readonly "largest sums"?: RawLargest;
  readonly "largest means"?: RawLargest;
  readonly R95pTOT?: { readonly base: string };
  readonly SPI?: { readonly base: string };
  readonly "or equal"?: boolean;
}

/** A degree-day sum without a cap has none: the cap is infinite. */
const cap = (value: number | undefined) => value ?? Number.POSITIVE_INFINITY;

export function readStatistic(raw: RawStatistic): Statistic {
  if (typeof raw === "string") {
    const index = INDICES.find((name) => name === raw);
    if (index !== undefined) return { type: "index", index };
    const plain = PLAIN_STATISTICS.find((name) => name === raw);
    return { type: plain ?? "mean" };
  }
  const threshold = THRESHOLD_STATISTICS.find((name) => Object.hasOwn(raw, name));
  // The schema has checked which keys stand together; its inferred type cannot say that for computed keys.
  const keys = raw as StatisticKeys & Readonly<Record<string, unknown>>;
  if (threshold !== undefined)
    return { type: threshold, threshold: Number(keys[threshold]), orEqual: keys["or equal"] === true };
  const degreeDays = keys["degree-days"];
  if (typeof degreeDays === "number") return { type: "degree-days", base: degreeDays, cap: cap(undefined) };
  if (degreeDays !== undefined)
    return { type: "degree-days", base: degreeDays.base, cap: cap(degreeDays.cap) };
  const below = keys["degree-days below"];
  if (below !== undefined) return { type: "degree-days below", base: below };
  const extremes = keys["degree-days of extremes"];
  if (extremes !== undefined)
    return {
      type: "degree-days of extremes",
      base: extremes.base,
      cap: cap(extremes.cap),
      method: extremes.method,
    };
  for (const type of ["largest sums", "largest means"] as const) {
    const largest = keys[type];
    if (largest !== undefined) return { type, days: largest.days, count: largest.count };
  }
  for (const type of ["R95pTOT", "SPI"] as const) {
    const index = keys[type];
    if (index !== undefined) return { type, base: readYears(index.base) };
  }
  return { type: "quantile", probability: keys.quantile ?? Number.NaN };
}
