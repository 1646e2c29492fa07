import { isoDay } from "../data/day.ts";
import type { Interval } from "../data/occasion.ts";
import { periodDays } from "../data/period.ts";
import type { Window } from "./options.ts";
import { windowPeriod } from "./window.ts";

/** One line of the plan: which days a covariate asks for in one interval. */
export interface PlannedWindow {
  readonly covariate: string;
  readonly interval: string;
  /** ISO dates, both included; empty where there is no such period. */
  readonly firstDay: string;
  readonly lastDay: string;
  readonly daysDue: number;
  /** Yearly periods the interval holds. */
  readonly years: number;
  readonly problem?: "window-empty" | "window-leak";
  readonly words?: string;
}

/** Covariate × interval → first day, last day and days due, before any data are read. */
export function planWindows(
  windows: readonly { readonly name: string; readonly window: Window }[],
  intervals: readonly Interval[],
): PlannedWindow[] {
  return windows.flatMap(({ name, window }) =>
    intervals.map((interval) => {
      const { periods, period, problem, words } = windowPeriod(window, interval);
      return {
        covariate: name,
        interval: interval.name,
        firstDay: period === undefined ? "" : isoDay(period.start),
        lastDay: period === undefined ? "" : isoDay(period.end - 1),
        daysDue: periods.reduce((sum, one) => sum + periodDays(one), 0),
        years: periods.length,
        ...(problem === undefined ? {} : { problem }),
        ...(words === undefined ? {} : { words }),
      };
    }),
  );
}
