import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { WithinDay } from "../../src/stations/options.ts";
import { dayOfReading } from "../../src/stations/within-day.ts";

const rule = (ends: number, stamped: "start" | "end"): WithinDay => ({
  ends,
  stamped,
  shift: 0,
  readings: 24,
  least: 24,
});

describe("the day of a reading", () => {
  test.each([
    // 07:00 on day 1, by the end of the day, the meaning of the time, and the day it belongs to.
    [1440 + 420, 420, "end", 0],
    [1440 + 420, 420, "start", 1],
    [1440 + 419, 420, "start", 0],
    [1440 + 421, 420, "end", 1],
    [1440, 0, "start", 1],
    [1440, 0, "end", 0],
    [1440, 1440, "end", 0],
    // A day that ends at 18:00 is named after the date on which it ends.
    [1440 + 1079, 1080, "start", 1],
    [1440 + 1080, 1080, "start", 2],
    [1440 + 1080, 1080, "end", 1],
    // Of equal halves the first: 12:00 to 12:00 is named after its morning's eve.
    [1440 + 719, 720, "start", 0],
  ] as const)("minute %i, day ends at %i, stamped %s: day %i", (minutes, ends, stamped, day) => {
    expect(dayOfReading(minutes, rule(ends, stamped))).toBe(day);
  });

  test("every reading lies within 24 hours of its day's noon, 1440 minutes make each day", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 0, max: 1440 }),
        fc.constantFrom("start" as const, "end" as const),
        (ends, stamped) => {
          const counts = new Map<number, number>();
          for (let minute = -4320; minute < 4320; minute++) {
            const day = dayOfReading(minute, rule(ends, stamped));
            expect(Math.abs(minute - (day * 1440 + 720))).toBeLessThanOrEqual(1440);
            counts.set(day, (counts.get(day) ?? 0) + 1);
          }
          for (const day of [-1, 0, 1]) expect(counts.get(day)).toBe(1440);
        },
      ),
      { numRuns: 20 },
    );
  });
});
