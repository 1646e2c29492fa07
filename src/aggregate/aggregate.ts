import type { RawFinding } from "../data/finding.ts";
import type { Interval } from "../data/occasion.ts";
import { overlapDays, type Period, periodDays } from "../data/period.ts";
import type { Series } from "../data/series.ts";
import { meanOfDays } from "./days.ts";
import { findingsOf, type SiteRow } from "./findings.ts";
import { meanOfWindows } from "./join.ts";
import type { CovariateDefinition, YearRange } from "./options.ts";
import { resolve, siteSeries } from "./resolve.ts";
import type { IntervalCovariate, WindowValue } from "./result.ts";
import { type SiteWindow, siteWindow } from "./site-window.ts";
import { filesOf } from "./sites.ts";
import { cut } from "./slice.ts";
import { seasonEnding, type WindowPeriods, windowPeriod, windowText } from "./window.ts";
import { completenessText, definitionText, statisticText, statisticUnit } from "./words.ts";

/** One covariate over all intervals, and what a person should know of how it came about. */
export interface Aggregated {
  readonly covariate: IntervalCovariate;
  readonly findings: readonly RawFinding[];
}

/** Values of all sites, before they are joined: rows[s].windows[t] is undefined where the interval has no window. */
function siteRows(
  definition: CovariateDefinition,
  sites: readonly Series[],
  windows: readonly WindowPeriods[],
): SiteRow[] {
  return sites.map((series) => {
    const resolved = resolve(definition, series);
    return {
      site: series.site,
      windows: windows.map((one) =>
        one.periods.length === 0 ? undefined : siteWindow(definition, resolved, one),
      ),
    };
  });
}

/** The joined window of interval t: the days of the least covered station used; without one, of the best there is. */
function joinWindow(
  windows: WindowPeriods,
  value: number,
  rows: readonly (readonly [string, SiteWindow])[],
  stations: readonly string[],
  failed: string | undefined,
): WindowValue {
  const { periods, period } = windows;
  const complete = rows.filter(([, one]) => one.failed === undefined).map(([, one]) => one);
  const all = rows.map(([, one]) => one);
  const covered = (list: readonly SiteWindow[]) => list.map((one) => one.daysCovered);
  const gaps = (list: readonly SiteWindow[]) => list.map((one) => one.longestGap);
  const several = periods.length > 1 ? { periods } : {};
  return {
    value,
    period,
    daysDue: periods.reduce((sum, one) => sum + periodDays(one), 0),
    daysCovered: complete.length > 0 ? Math.min(...covered(complete)) : Math.max(0, ...covered(all)),
    longestGap: complete.length > 0 ? Math.max(...gaps(complete)) : Math.min(...gaps(all)),
    failed,
    scaled: complete.some((one) => one.scaled),
    stations,
    years: periods.length,
    ...several,
  };
}

function emptyWindow(words: string | undefined): WindowValue {
  return {
    value: Number.NaN,
    period: undefined,
    daysDue: 0,
    daysCovered: 0,
    longestGap: 0,
    failed: `the interval ${words ?? "holds no window"}`,
    scaled: false,
    stations: [],
    years: 0,
  };
}

/** Days in the periods whose values were infilled. */
function filledDays(filled: readonly Period[], { periods }: WindowPeriods): number {
  return periods.reduce(
    (sum, period) => sum + filled.reduce((days, one) => days + overlapDays(one, period), 0),
    0,
  );
}

/** True if the series has a value in any of the periods. */
function hasValue(series: Series, windows: WindowPeriods): boolean {
  return windows.periods.some((period) => cut(series, period).observed > 0);
}

/**
 * One covariate: windows × statistic × completeness per site, then joined (methods §1 and §2). The values' unit
 * is that of the statistic (`days`, `degC days`, …). Missing values are NaN with the reason in words. Throws
 * InputErrors `aggregate.no-series`, `.series-overlap`, `.periods-differ`, `.second-missing`, `.index-unit`,
 * `.spi-window`.
 */
export function aggregateCovariate(
  definition: CovariateDefinition,
  intervals: readonly Interval[],
): Aggregated {
  const windows = intervals.map((interval) => windowPeriod(definition.window, interval));
  const { series: sites, filled, listed, findings: before } = siteSeries(definition);
  const names = sites.map((one) => one.site);
  const weights = sites.map((one) => definition.weights?.bySite.get(one.site) ?? 1);
  const pooled =
    definition.join === "mean of days" && sites.length > 1 ? meanOfDays(sites, weights) : undefined;
  const rows = siteRows(definition, pooled === undefined ? sites : [pooled.series], windows);
  const cells = rows.map((row) => Float64Array.from(row.windows, (one) => one?.value ?? Number.NaN));
  const joined = meanOfWindows(cells, intervals.length, pooled === undefined ? weights : undefined);

  const values = windows.map((one, t): WindowValue => {
    if (one.periods.length === 0) return emptyWindow(one.words);
    const here = rows.flatMap((row): (readonly [string, SiteWindow])[] => {
      const window = row.windows[t];
      return window === undefined ? [] : [[row.site, window]];
    });
    const value = joined.values[t];
    const missing = Number.isNaN(value);
    const reasons = here.flatMap(([site, w]) =>
      w.failed === undefined ? [] : [rows.length === 1 ? w.failed : `${site}, ${w.failed}`],
    );
    const apart = "its stations share no interval with the other stations";
    const failed = missing ? (joined.adrift.includes(t) ? apart : reasons.join("; ")) : undefined;
    const gave =
      pooled === undefined
        ? here.flatMap(([site, w]) => (w.failed === undefined ? [site] : []))
        : sites.filter((series) => hasValue(series, one)).map((series) => series.site);
    const window = joinWindow(one, value, here, missing ? [] : gave, failed);
    if (filled.length === 0 || missing) return window;
    const used = sites.flatMap((series, s) =>
      gave.includes(series.site) ? [filledDays(filled[s], one)] : [],
    );
    return { ...window, daysInfilled: used.reduce((sum, days) => sum + days, 0) };
  });

  const partialDays = (t: number) =>
    windows[t].periods.reduce((sum, period) => {
      if (pooled === undefined) return 0;
      const { lo, hi } = cut(pooled.series, period);
      return sum + pooled.partial.subarray(lo, hi).reduce((count, one) => count + one, 0);
    }, 0);
  const covariate: IntervalCovariate = {
    name: definition.name,
    theme: definition.theme,
    unit: statisticUnit(definition.statistic, definition.unit),
    definition: definitionText(definition, names),
    window: windowText(definition.window),
    statistic: statisticText(definition.statistic, definition.unit),
    complete: completenessText(definition),
    ...(definition.infill === undefined ? {} : { infilled: listed }),
    files: filesOf([...definition.series, ...(definition.second ?? [])]),
    values,
  };
  const findings = findingsOf(
    definition.name,
    intervals,
    windows,
    values,
    rows,
    joined,
    intervals.map((_, t) => partialDays(t)),
  );
  return { covariate, findings: [...before, ...findings] };
}

/**
 * The same covariate for the season, or calendar year, that ends in each base year, both ends included: what
 * standardisation by a base period needs. Undefined for windows counted from occasions, which have no base.
 */
export function baseValues(
  definition: CovariateDefinition,
  { from, to }: YearRange,
): Float64Array | undefined {
  const periods = Array.from({ length: Math.max(0, to - from + 1) }, (_, k) =>
    seasonEnding(definition.window, from + k),
  );
  const seasons = periods.flatMap((period, k): Interval[] =>
    period === undefined ? [] : [{ index: k, name: String(from + k), ...period, length: 1 }],
  );
  if (seasons.length < periods.length || seasons.length === 0) return undefined;
  const unlagged = { ...definition, window: { ...definition.window, lag: 0 } };
  return Float64Array.from(aggregateCovariate(unlagged, seasons).covariate.values, (one) => one.value);
}
