import type { Period } from "../data/period.ts";
import { judge } from "./completeness.ts";
import type { CovariateDefinition } from "./options.ts";
import type { Resolved } from "./resolve.ts";
import { cut } from "./slice.ts";
import { familyOf, growsWithDays, windowStatistic } from "./statistic.ts";
import type { WindowPeriods } from "./window.ts";

/** One site's value in one interval, with what it rests on. */
export interface SiteWindow {
  /** NaN if missing. */
  readonly value: number;
  readonly daysCovered: number;
  readonly longestGap: number;
  readonly failed: string | undefined;
  readonly scaled: boolean;
}

function oneWindow(definition: CovariateDefinition, resolved: Resolved, period: Period): SiteWindow {
  const { window, complete, allowedMissing } = definition;
  const { statistic, after } = resolved;
  const slice = cut(resolved.series, period);
  const byMonths = window.type === "season" || window.type === "year";
  const { failed, scale } = judge(slice, familyOf(statistic), complete, byMonths, allowedMissing);
  const days = { daysCovered: slice.covered, longestGap: slice.longestGap };
  const missing = (why: string): SiteWindow => ({ ...days, value: Number.NaN, failed: why, scaled: false });
  if (resolved.failed !== undefined) return missing(resolved.failed);
  if (failed !== undefined) return missing(failed);
  const plain = windowStatistic(slice, statistic) * scale;
  const value = after === undefined ? plain : after(plain);
  if (Number.isNaN(value)) return missing(`nothing to take the ${statistic.type} of`);
  return { ...days, value, failed: undefined, scaled: scale !== 1 };
}

/**
 * One site's value for an interval: of its one period, or the mean of its yearly values, every one of which must
 * be complete (a mean over the years that happen to be would compare different years).
 */
export function siteWindow(
  definition: CovariateDefinition,
  resolved: Resolved,
  windows: WindowPeriods,
): SiteWindow {
  const { periods, perYear } = windows;
  if (periods.length === 1) return oneWindow(definition, resolved, periods[0]);
  const years = periods.map((period) => oneWindow(definition, resolved, period));
  const bad = years.filter((one) => one.failed !== undefined);
  const factor = growsWithDays(resolved.statistic) ? perYear : 1;
  return {
    value: (years.reduce((sum, one) => sum + one.value, 0) / years.length) * factor,
    daysCovered: years.reduce((sum, one) => sum + one.daysCovered, 0),
    longestGap: years.reduce((most, one) => Math.max(most, one.longestGap), 0),
    failed:
      bad.length === 0 ? undefined : `${bad.length} of ${years.length} years incomplete; ${bad[0].failed}`,
    scaled: years.some((one) => one.scaled),
  };
}
