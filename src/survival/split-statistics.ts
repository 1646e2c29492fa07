import type { SufficientStatistics } from "./statistics.ts";

/**
 * The same statistics over the years that intervals are split into, `yearsOf[t]` the interval of year t: animals known
 * to be alive over an interval are so in each of its years, they are seen or passed over where its last year ends, and
 * released where its first begins. Years inside an interval end at no occasion (`closedYears`).
 */
export function splitStatistics(one: SufficientStatistics, yearsOf: Int32Array): SufficientStatistics {
  const last = (t: number) => yearsOf[t + 1] !== yearsOf[t];
  const first = (t: number) => yearsOf[t - 1] !== yearsOf[t];
  const over = (values: Float64Array, where: (t: number) => boolean) =>
    Float64Array.from(yearsOf, (interval, t) => (where(t) ? values[interval] : 0));
  return {
    ...one,
    alive: over(one.alive, () => true),
    seen: over(one.seen, last),
    passed: over(one.passed, last),
    lastSeen: over(one.lastSeen, first),
  };
}
