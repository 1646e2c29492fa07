import { describe, expect, test } from "vitest";
import { isWholeMonths, judge } from "../../src/aggregate/completeness.ts";
import type { Completeness } from "../../src/aggregate/options.ts";
import { cut } from "../../src/aggregate/slice.ts";
import type { Family } from "../../src/aggregate/statistic.ts";
import type { Series } from "../../src/data/series.ts";
import { daily, on } from "./made.ts";

const WMO: Completeness = { type: "wmo" };
const OLD: Completeness = { type: "five-three" };

/** Daily values of 1 from first to last day, with some days (1 = the first) missing. */
function withGaps(first: string, last: string, missing: readonly number[]): Series {
  const days = on(last) - on(first) + 1;
  return daily(
    first,
    Array.from({ length: days }, (_, k) => (missing.includes(k + 1) ? null : 1)),
  );
}

/** Every other day from the first, so that none are in a row. */
const apart = (count: number) => Array.from({ length: count }, (_, k) => 1 + 2 * k);
const inARow = (count: number, from = 3) => Array.from({ length: count }, (_, k) => from + k);

function verdict(
  first: string,
  last: string,
  missing: readonly number[],
  family: Family,
  rule: Completeness,
  more: { readonly byMonths?: boolean; readonly allowed?: number } = {},
) {
  const slice = cut(withGaps(first, last, missing), { start: on(first), end: on(last) + 1 });
  return judge(slice, family, rule, more.byMonths ?? true, more.allowed);
}
const january = (missing: readonly number[], family: Family, rule: Completeness) =>
  verdict("2001-01-01", "2001-01-31", missing, family, rule);

test("a share lets days be missing from a count without scaling it up; a sum it does scale", () => {
  const share = { type: "share", share: 0.9 } as const;
  expect(january([5], "daily", share)).toEqual({ failed: undefined, scale: 1 });
  expect(january([5], "sum", share)).toEqual({ failed: undefined, scale: 31 / 30 });
});

test("a window of one day without a value", () => {
  expect(verdict("2001-01-01", "2001-01-01", [1], "mean", WMO).failed).toBe("none of 1 day covered");
});

describe("WMO-No. 1203 (2017)", () => {
  test("a month's mean stands 10 days missing, not 11; 4 in a row, not 5", () => {
    expect(january(apart(10), "mean", WMO).failed).toBeUndefined();
    expect(january(apart(11), "mean", WMO).failed).toBe("Jan 2001: 11 of 31 days missing (11 or more)");
    expect(january(inARow(4), "mean", WMO).failed).toBeUndefined();
    expect(january(inARow(5), "mean", WMO).failed).toBe("Jan 2001: 5 days missing in a row (5 or more)");
  });

  test("a sum needs all days", () => {
    expect(january([], "sum", WMO)).toEqual({ failed: undefined, scale: 1 });
    expect(january([7], "sum", WMO).failed).toBe("1 of 31 days missing (a sum needs all days)");
  });

  test("a season is missing if any of its months is; the season's share does not save it", () => {
    const season = (missing: readonly number[]) =>
      verdict("2000-12-01", "2001-02-28", missing, "mean", WMO).failed;
    // 10 days missing in each month, never two in a row: a third of the season, and it stands.
    expect(
      season([...apart(10), ...apart(10).map((d) => d + 31), ...apart(10).map((d) => d + 62)]),
    ).toBeUndefined();
    expect(season(apart(11).map((d) => d + 31))).toBe("Jan 2001: 11 of 31 days missing (11 or more)");
  });

  test("days missing in a row are counted within a month: 4 and 4 across its end stand", () => {
    const missing = inARow(8, 28); // 28–31 December, 1–4 January
    expect(verdict("2000-12-01", "2001-01-31", missing, "mean", WMO).failed).toBeUndefined();
  });

  test("a month cut by the window is judged on its due days", () => {
    const cut20 = (missing: readonly number[]) =>
      verdict("2001-01-12", "2001-02-28", missing, "mean", WMO).failed;
    expect(cut20(apart(10))).toBeUndefined();
    expect(cut20(apart(10).concat(20))).toBe("Jan 2001: 11 of 20 days missing (11 or more)");
    // Three due days of a month, all missing, are neither 11 nor 5 in a row; the month has nothing all the same.
    expect(verdict("2001-01-29", "2001-02-28", [1, 2, 3], "mean", WMO).failed).toBe(
      "Jan 2001: none of 3 days covered",
    );
  });

  test("missing is missing whether the row is empty, absent, or the records end", () => {
    const period = { start: on("2001-01-01"), end: on("2001-02-01") };
    const short = daily("2001-01-06", Array(26).fill(1));
    expect(judge(cut(short, period), "mean", WMO, true, undefined).failed).toContain(
      "5 days missing in a row",
    );
  });

  test("monthly values: every month, or the season is missing", () => {
    const months = (values: readonly number[]): Series => ({
      ...daily("2000-12-01", []),
      starts: Int32Array.of(on("2000-12-01"), on("2001-01-01"), on("2001-02-01")),
      ends: Int32Array.of(on("2001-01-01"), on("2001-02-01"), on("2001-03-01")),
      values: Float64Array.from(values),
    });
    const period = { start: on("2000-12-01"), end: on("2001-03-01") };
    const judged = (values: readonly number[]) =>
      judge(cut(months(values), period), "mean", WMO, true, undefined);
    expect(judged([1, 2, 3]).failed).toBeUndefined();
    expect(judged([1, Number.NaN, 3]).failed).toContain("31 of 90 days missing");
  });

  test("a span that is no whole months needs a share of 0.9, and no gap of 5 days", () => {
    const span = (missing: readonly number[]) =>
      verdict("2001-05-22", "2001-07-20", missing, "mean", WMO, { byMonths: false }).failed;
    expect(span(apart(6))).toBeUndefined(); // 54 of 60
    expect(span(apart(7))).toBe("0.883 of 60 days covered (a share of 0.9 needed)");
    expect(span(inARow(5))).toBe("5 days missing in a row (5 or more)");
    // A span that happens to be whole months is judged by them.
    expect(
      verdict("2001-05-01", "2001-05-31", apart(10), "mean", WMO, { byMonths: false }).failed,
    ).toBeUndefined();
    expect(isWholeMonths({ start: on("2001-05-01"), end: on("2001-07-01") })).toBe(true);
    expect(isWholeMonths({ start: on("2001-05-01"), end: on("2001-06-30") })).toBe(false);
  });
});

describe("other rules", () => {
  test("5/3: 5 missing stand, 6 do not; 3 in a row stand, 4 do not", () => {
    expect(january(apart(5), "mean", OLD).failed).toBeUndefined();
    expect(january(apart(6), "mean", OLD).failed).toBe("Jan 2001: 6 of 31 days missing (6 or more)");
    expect(january(inARow(3), "mean", OLD).failed).toBeUndefined();
    expect(january(inARow(4), "mean", OLD).failed).toBe("Jan 2001: 4 days missing in a row (4 or more)");
  });

  test("a share: reached exactly it stands; a sum is scaled by due/covered, a mean is not", () => {
    const of120 = (missing: number, family: Family) =>
      verdict("2001-11-01", "2002-02-28", apart(missing), family, { type: "share", share: 0.95 });
    expect(of120(6, "sum")).toEqual({ failed: undefined, scale: 120 / 114 });
    expect(of120(6, "mean")).toEqual({ failed: undefined, scale: 1 });
    expect(of120(7, "sum").failed).toBe("0.941 of 120 days covered (a share of 0.95 needed)");
  });

  test("counts, runs, degree-days: daily values, none missing unless allowed", () => {
    const judged = (missing: number, rule: Completeness, allowed?: number) =>
      verdict(
        "2001-01-01",
        "2001-01-31",
        apart(missing),
        "daily",
        rule,
        allowed === undefined ? {} : { allowed },
      );
    expect(judged(0, WMO).failed).toBeUndefined();
    expect(judged(1, WMO).failed).toBe("1 of 31 days missing (none allowed)");
    expect(judged(2, WMO, 2).failed).toBeUndefined();
    expect(judged(3, WMO, 2).failed).toBe("3 of 31 days missing (2 allowed)");
    expect(judged(1, { type: "share", share: 0.9 }).failed).toBeUndefined();
    expect(judged(1, { type: "share", share: 0.9 }, 0).failed).toContain("(0 allowed)");
    const week: Series = {
      ...daily("2001-01-01", [3]),
      ends: Int32Array.of(on("2001-01-08")),
    };
    const slice = cut(week, { start: on("2001-01-01"), end: on("2001-01-08") });
    expect(judge(slice, "daily", WMO, true, undefined).failed).toBe("needs daily values, found longer ones");
  });

  test("a window without any value fails under every rule and family", () => {
    for (const rule of [WMO, OLD, { type: "share", share: 0 } as const])
      for (const family of ["mean", "sum", "daily"] as const)
        expect(january(inARow(31, 1), family, rule).failed).toBe("none of 31 days covered");
  });
});
