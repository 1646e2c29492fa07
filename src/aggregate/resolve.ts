import type { RawFinding } from "../data/finding.ts";
import type { Period } from "../data/period.ts";
import type { Series } from "../data/series.ts";
import { InputError } from "../errors.ts";
import { departures } from "./anomaly.ts";
import { judge } from "./completeness.ts";
import { dailyFromExtremes } from "./degree-days.ts";
import { indexStatistic, veryWetStatistic } from "./etccdi.ts";
import { infillFindings, infillSeries } from "./infill.ts";
import type { CovariateDefinition, WindowStatistic, YearRange } from "./options.ts";
import type { InfilledValue } from "./result.ts";
import { bySite } from "./sites.ts";
import { cut } from "./slice.ts";
import { fitGamma, LEAST_BASE, standardisedIndex } from "./spi.ts";
import { windowSum } from "./spread.ts";
import { seasonEnding } from "./window.ts";

/** One site's series with a statistic that needs nothing more than a window. */
export interface Resolved {
  readonly series: Series;
  readonly statistic: WindowStatistic;
  /** Applied to each window's statistic, e.g. a sum → its standardised index. */
  readonly after?: (value: number) => number;
  /** Why this site can give no value at all. */
  readonly failed?: string;
}

/** The sites' series, ready for windows, and what was infilled in them. */
interface Sites {
  readonly series: readonly Series[];
  /** Periods of each site whose value was infilled (in either series, where there are two); empty without infilling. */
  readonly filled: readonly (readonly Period[])[];
  /** The filled values one by one. */
  readonly listed: readonly InfilledValue[];
  readonly findings: readonly RawFinding[];
}

/** Sites with their gaps filled, where the definition asks for it. */
function filledSites(
  { name, infill, unit }: CovariateDefinition,
  series: readonly Series[],
  neighbours: readonly Series[],
): Sites {
  const sites = bySite(series);
  if (infill === undefined || sites.length === 0)
    return { series: sites, filled: [], listed: [], findings: [] };
  const done = infillSeries(sites, infill, bySite(neighbours));
  const filled = done.series.map(({ starts, ends }, s) =>
    Array.from(done.filled[s].keys())
      .filter((i) => done.filled[s][i] === 1)
      .map((i) => ({ start: starts[i], end: ends[i] })),
  );
  const listed = done.series.flatMap((one, s) =>
    Array.from(done.filled[s].keys()).flatMap((i): InfilledValue[] => {
      if (done.filled[s][i] !== 1) return [];
      const period = { start: one.starts[i], end: one.ends[i] };
      return [{ station: one.site, variable: one.variable, unit, period, value: one.values[i] }];
    }),
  );
  return { series: done.series, filled, listed, findings: infillFindings(name, infill, unit, done.sites) };
}

/** Periods of both lists, each once, in order of time. */
function together(a: readonly Period[], b: readonly Period[]): Period[] {
  const known = new Set(a.map((one) => one.start));
  return [...a, ...b.filter((one) => !known.has(one.start))].sort((x, y) => x.start - y.start);
}

/**
 * The sites' series put end to end, then infilled, paired with their minima, and made departures, in this order, as
 * the definition asks. Throws `aggregate.no-series` and what the steps throw.
 */
export function siteSeries(definition: CovariateDefinition): Sites {
  const { name, statistic, series, second, anomaly, neighbours, secondNeighbours } = definition;
  if (series.length === 0)
    throw new InputError({
      name: "aggregate.no-series",
      expected: "at least one station or place with values",
      found: "none",
      where: { cell: name },
      remedy: "name stations that have the variable, or a place inside the layer",
    });
  const first = filledSites(definition, series, neighbours ?? []);
  const other = filledSites(definition, second ?? [], secondNeighbours ?? []);
  const paired =
    statistic.type === "degree-days of extremes"
      ? pair(definition, first.series, other.series)
      : first.series;
  return {
    series: anomaly === undefined ? paired : paired.map((one) => departures(one, anomaly.by, anomaly.base)),
    filled: first.filled.map((one, s) => {
      const beside = other.series.findIndex(({ site }) => site === first.series[s].site);
      return together(one, other.filled[beside] ?? []);
    }),
    listed: [...first.listed, ...other.listed],
    findings: [...first.findings, ...other.findings],
  };
}

function pair(
  definition: CovariateDefinition,
  maxima: readonly Series[],
  second: readonly Series[],
): Series[] {
  const { name, statistic } = definition;
  if (statistic.type !== "degree-days of extremes") return [...maxima];
  const minima = new Map(second.map((one) => [one.site, one]));
  return maxima.map((max) => {
    const min = minima.get(max.site);
    if (min !== undefined)
      return dailyFromExtremes(max, min, statistic.base, statistic.cap, statistic.method);
    throw new InputError({
      name: "aggregate.second-missing",
      expected: "daily minima beside the maxima of every station",
      found: `no minima at ${max.site}`,
      where: { cell: name },
      remedy: "leave the station out, or use degree-days of the daily mean",
    });
  });
}

/** The sums of the same season in the base years that are complete. */
function baseSums(definition: CovariateDefinition, series: Series, { from, to }: YearRange): number[] {
  const sums: number[] = [];
  for (let year = from; year <= to; year++) {
    const period = seasonEnding(definition.window, year);
    if (period === undefined)
      throw new InputError({
        name: "aggregate.spi-window",
        expected: "a season or calendar year, which every base year has",
        found: `a window of type ${definition.window.type}`,
        where: { cell: definition.name },
        remedy: "give the standardised index a season, e.g. Nov to Feb",
      });
    const slice = cut(series, period);
    const { failed, scale } = judge(slice, "sum", definition.complete, true, undefined);
    if (failed === undefined) sums.push(windowSum(slice) * scale);
  }
  return sums;
}

/** The definition's statistic for one site: what needs base years is fitted to the site's own here. */
export function resolve(definition: CovariateDefinition, series: Series): Resolved {
  const { statistic, unit, name } = definition;
  switch (statistic.type) {
    case "index":
      return { series, statistic: indexStatistic(statistic.index, unit, name) };
    case "degree-days of extremes": {
      const { base, cap } = statistic;
      return { series, statistic: { type: "degree-days", base, cap } };
    }
    case "R95pTOT": {
      const { from, to } = statistic.base;
      const found = veryWetStatistic(series, statistic.base);
      if (found !== undefined) return { series, statistic: found };
      return { series, statistic: { type: "sum" }, failed: `no wet day in the base years ${from} to ${to}` };
    }
    case "SPI": {
      const sums = baseSums(definition, series, statistic.base);
      const fit = fitGamma(sums);
      const resolved: Resolved = { series, statistic: { type: "sum" } };
      if (sums.length < LEAST_BASE)
        return { ...resolved, failed: `${sums.length} complete base years (${LEAST_BASE} needed)` };
      if (Number.isNaN(fit.shape)) return { ...resolved, failed: "base sums that do not differ" };
      return { ...resolved, after: (sum) => standardisedIndex(sum, fit) };
    }
    default:
      return { series, statistic };
  }
}
