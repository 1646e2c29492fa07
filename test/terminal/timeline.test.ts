import { describe, expect, test } from "vitest";
import { dayOf } from "../../src/data/day.ts";
import { styleOf } from "../../src/terminal/style.ts";
import { timelineLines } from "../../src/terminal/timeline.ts";

const look = { style: styleOf(false), width: 80 };
const span = { name: "2001 to 2002", start: dayOf(2001, 7, 25), end: dayOf(2002, 7, 25) };
const windows = [
  { covariate: "winter rain", firstDay: "2001-11-01", lastDay: "2002-02-28" },
  { covariate: "one day", firstDay: "2002-03-01", lastDay: "2002-03-01" },
  { covariate: "no window", firstDay: "", lastDay: "" },
];

describe("the windows of an interval as a calendar", () => {
  test("months, the interval and a bar for each window, all in step", () => {
    const [head, months, interval, rain, day, ...rest] = timelineLines(windows, span, look);
    expect(rest).toEqual([]);
    expect(head).toBe("windows of 2001 to 2002");
    // the last days of July have begun before; then August to July
    expect(months.replace(/ /g, "")).toBe("ASONDJFMAMJJ");
    expect(interval).toMatch(/^interval +─+$/);
    const november = months.indexOf("N");
    expect(rain.indexOf("█")).toBe(november);
    // four months of twelve, within a column
    const share = (rain.split("█").length - 1) / (interval.split("─").length - 1);
    expect(Math.abs(share - 120 / 365)).toBeLessThan(0.03);
    expect(day.split("█").length - 1).toBe(1);
    expect(day.indexOf("█")).toBe(months.indexOf("M"));
  });

  test("a window that begins before its interval widens the calendar", () => {
    const before = [{ covariate: "summer before", firstDay: "2001-05-01", lastDay: "2001-06-30" }];
    const [, months, interval, bar] = timelineLines(before, span, look);
    expect(months.trim()[0]).toBe("M");
    expect(interval.indexOf("─")).toBeGreaterThan(bar.indexOf("█"));
  });

  test("fits the terminal, and is not there where there are no dates", () => {
    for (const line of timelineLines(windows, { ...span, end: dayOf(2011, 7, 25) }, look))
      expect(line.length).toBeLessThanOrEqual(80);
    expect(timelineLines([windows[2]], span, look)).toEqual([]);
    expect(timelineLines(windows, { ...span, start: Number.NaN }, look)).toEqual([]);
  });
});
