import { given } from "./given.ts";
import type { Problem } from "./problems.ts";
import { readStandardise } from "./read-model.ts";
import { readStatistic, readWindow } from "./read-values.ts";
import type { RawPipeline } from "./schema.ts";
import type { Alternative, SensitivityOptions } from "./spec.ts";

/** The alternatives of a pipeline file; undefined where it states none. */
export function readSensitivity(
  raw: RawPipeline["sensitivity"],
  problems: Problem[],
): SensitivityOptions | undefined {
  if (raw === undefined) return undefined;
  return {
    permutations: raw.permutations,
    alternatives: raw.alternatives.map((one, i): Alternative => {
      const window = one.window === undefined ? undefined : readWindow(one.window);
      if (one.window !== undefined && window === undefined)
        problems.push({
          name: "spec.format",
          path: ["sensitivity", "alternatives", i, "window"],
          expected: "days that the months have",
          found: JSON.stringify(one.window),
          remedy: "write a month without a day for its first or last day",
        });
      return given({
        name: one.name,
        of: one.of,
        window,
        lag: one.lag,
        statistic: one.statistic === undefined ? undefined : readStatistic(one.statistic),
        standardise: one.standardise === undefined ? undefined : readStandardise(one.standardise),
        detrend: one.detrend,
        chooseBy: one["choose by"],
        sampleSize: one["sample size"],
        recapture: one.recapture,
        yearTrend: one["year trend"],
      });
    }),
  };
}
