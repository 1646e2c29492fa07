import { describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import { InputError } from "../../src/errors.ts";
import { settleDates } from "../../src/layers/date-table.ts";
import { periodsOf } from "../../src/layers/dates.ts";
import type { ImageCover, ImageDates, LayerOptions } from "../../src/layers/options.ts";
import { orderImages } from "../../src/layers/series.ts";

const periods = (
  path: string,
  date: ImageDates,
  covers: ImageCover,
  bands: readonly string[] = [""],
  band?: number,
) =>
  periodsOf(path, bands, { date, covers, ...(band === undefined ? {} : { band }) }).map(
    (one) => `${one.band}: ${isoDay(one.start)} to ${isoDay(one.end - 1)}`,
  );
const named = (path: string, name: string, covers: ImageCover) => periods(path, { name }, covers)[0];
const refused = (work: () => unknown) => {
  try {
    work();
  } catch (error) {
    return error instanceof InputError ? error.facts.name : String(error);
  }
  return "none";
};

describe("dates in file names", () => {
  test.each([
    ["layers/green_2001_02.tif", "green_{yyyy}_{MM}", "month", "0: 2001-02-01 to 2001-02-28"],
    ["green_2004_02.tif", "{yyyy}_{MM}", "month", "0: 2004-02-01 to 2004-02-29"],
    ["MX.A2004033.h18.tif", "A{yyyy}{DDD}", { days: 16 }, "0: 2004-02-02 to 2004-02-17"],
    ["A2004366.tif", "A{yyyy}{DDD}", "day", "0: 2004-12-31 to 2004-12-31"],
    ["rain-1999.tif", "rain-{yyyy}", "year", "0: 1999-01-01 to 1999-12-31"],
    ["d_20010221.tif", "{yyyy}{MM}{dd}", "dekad", "0: 2001-02-21 to 2001-02-28"],
    ["d_20010301.tif", "{yyyy}{MM}{dd}", "dekad", "0: 2001-03-01 to 2001-03-10"],
    ["d_2001_36.tif", "{yyyy}_{dekad}", "dekad", "0: 2001-12-21 to 2001-12-31"],
    ["d_2001_02_2.tif", "{yyyy}_{MM}_{dekad}", "dekad", "0: 2001-02-11 to 2001-02-20"],
    ["d_20010221.tif", "{yyyy}{MM}{dd}", "month", "0: 2001-02-01 to 2001-02-28"],
    ["mod_20010101_20010108.tif", "mod_{yyyy}{MM}{dd}_", { days: 8 }, "0: 2001-01-01 to 2001-01-08"],
  ] as const)("%s by %s", (path, name, covers, expected) => expect(named(path, name, covers)).toBe(expected));

  test.each([
    ["green_2001.tif", "green_{yyyy}_{MM}", "month", "layers.date-not-found"],
    ["green_2001_2002.tif", "{yyyy}", "year", "layers.date-ambiguous"],
    ["tile_12345678.tif", "{yyyy}", "year", "layers.date-not-found"],
    ["green_2001_13.tif", "green_{yyyy}_{MM}", "month", "layers.bad-date"],
    ["A2001366.tif", "A{yyyy}{DDD}", "day", "layers.bad-date"],
    ["green_2001.tif", "green_{yyyy}", "month", "layers.date-too-coarse"],
    ["green_2001_02.tif", "green_{yyyy}_{MM}", "day", "layers.date-too-coarse"],
    ["green_2001.tif", "green_{YYYY}", "year", "layers.date-pattern"],
    ["green_2001.tif", "green", "year", "layers.date-pattern"],
    ["g.tif", "{yyyy}{yyyy}", "year", "layers.date-pattern"],
    ["g.tif", "{yyyy}{dd}", "day", "layers.date-pattern"],
    ["g.tif", "{yyyy}{MM}{DDD}", "day", "layers.date-pattern"],
  ] as const)("%s by %s: %s", (path, name, covers, expected) =>
    expect(refused(() => named(path, name, covers))).toBe(expected),
  );

  test("several bands need to be told apart", () => {
    expect(refused(() => periods("g_2001.tif", { name: "{yyyy}" }, "year", ["", ""]))).toBe(
      "layers.several-bands",
    );
    expect(periods("g_2001.tif", { name: "{yyyy}" }, "year", ["", ""], 2)).toEqual([
      "1: 2001-01-01 to 2001-12-31",
    ]);
    expect(refused(() => periods("g_2001.tif", { name: "{yyyy}" }, "year", ["", ""], 3))).toBe(
      "layers.several-bands",
    );
  });
});

describe("dates of bands", () => {
  test("by description", () => {
    expect(periods("x.tif", { band: "{yyyy}-{MM}" }, "month", ["snow 2001-12", "snow 2002-01"])).toEqual([
      "0: 2001-12-01 to 2001-12-31",
      "1: 2002-01-01 to 2002-01-31",
    ]);
    expect(refused(() => periods("x.tif", { band: "{yyyy}-{MM}" }, "month", ["2001-12", ""]))).toBe(
      "layers.date-not-found",
    );
  });

  test("by first and step", () => {
    const bands = ["", "", ""];
    expect(periods("x.tif", { first: "2001-12", step: "month" }, "month", bands)[2]).toBe(
      "2: 2002-02-01 to 2002-02-28",
    );
    expect(periods("x.tif", { first: "2000-02-28", step: "day" }, "day", bands)[2]).toBe(
      "2: 2000-03-01 to 2000-03-01",
    );
    expect(periods("x.tif", { first: "1999", step: "year" }, "year", bands)[2]).toBe(
      "2: 2001-01-01 to 2001-12-31",
    );
    expect(refused(() => periods("x.tif", { first: "12/1999", step: "year" }, "year", bands))).toBe(
      "layers.bad-date",
    );
  });
});

describe("images in order of time", () => {
  const file = (path: string, ...spans: [number, number][]) => ({
    path,
    periods: spans.map(([start, end], band) => ({ band, start, end })),
  });
  test("out of order, a gap, a repeat and an overlap", () => {
    const { images, findings } = orderImages("x", [
      file("a.tif", [30, 40]),
      file("b.tif", [0, 10], [10, 22]),
      file("c.tif", [20, 28]),
      file("d.tif", [30, 35]),
    ]);
    expect(images.map((one) => [one.start, one.end, one.path])).toEqual([
      [0, 10, "b.tif"],
      [10, 20, "b.tif"],
      [20, 28, "c.tif"],
      [30, 40, "a.tif"],
    ]);
    expect(findings.map((one) => [one.kind, one.count, one.where?.file])).toEqual([
      ["layer-gap", 2, "a.tif"],
      ["layer-overlap", undefined, "d.tif"],
      ["layer-overlap", 1, "b.tif"],
    ]);
  });

  test("16-day composites that start anew each year: the last of the year is cut at the first of the next", () => {
    const name = (year: number) =>
      Array.from({ length: 23 }, (_, i) => `A${year}${String(1 + 16 * i).padStart(3, "0")}.tif`);
    const { images, findings } = orderImages(
      "x",
      [...name(2003), ...name(2004)].map((path) => ({
        path,
        periods: periodsOf(path, [""], { date: { name: "A{yyyy}{DDD}" }, covers: { days: 16 } }),
      })),
    );
    expect(images.length).toBe(46);
    expect(images[22].end - images[22].start).toBe(13);
    expect(findings.map((one) => [one.kind, one.count])).toEqual([["layer-overlap", 1]]);
  });
});

describe("composites that are counted anew each year", () => {
  const spans = (year: number, step: number, count: number) =>
    Array.from({ length: count }, (_, i) =>
      named(`A${year}${String(1 + step * i).padStart(3, "0")}.tif`, "A{yyyy}{DDD}", {
        days: step,
        anew: true,
      }),
    );
  test("16 days: 23 in a year, the last of 13 days, or 14 in a leap year", () => {
    expect(spans(2003, 16, 23).at(-1)).toBe("0: 2003-12-19 to 2003-12-31");
    expect(spans(2004, 16, 23).at(-1)).toBe("0: 2004-12-18 to 2004-12-31");
  });

  test("8 days: 46 in a year, the last of 5 days, or 6", () => {
    expect(spans(2003, 8, 46).at(-1)).toBe("0: 2003-12-27 to 2003-12-31");
    expect(spans(2004, 8, 46).at(-1)).toBe("0: 2004-12-26 to 2004-12-31");
  });

  test("two whole years have neither gap nor overlap, and a missing composite is a gap", () => {
    const stack = [2003, 2004].flatMap((year) =>
      Array.from({ length: 23 }, (_, i) => `A${year}${String(1 + 16 * i).padStart(3, "0")}.tif`),
    );
    const found = (paths: readonly string[]) =>
      orderImages(
        "x",
        paths.map((path) => ({
          path,
          periods: periodsOf(path, [""], {
            date: { name: "A{yyyy}{DDD}" },
            covers: { days: 16, anew: true },
          }),
        })),
      ).findings.map((one) => [one.kind, one.count]);
    expect(found(stack)).toEqual([]);
    expect(found(stack.filter((path) => path !== "A2003353.tif"))).toEqual([["layer-gap", 13]]);
  });

  test("dekads: 36 in a year without gap or overlap, the last of February of 8 or 9 days", () => {
    const paths = [2003, 2004].flatMap((year) =>
      Array.from({ length: 36 }, (_, i) => `d_${year}_${i + 1}.tif`),
    );
    const { images, findings } = orderImages(
      "x",
      paths.map((path) => ({
        path,
        periods: periodsOf(path, [""], { date: { name: "d_{yyyy}_{dekad}" }, covers: "dekad" }),
      })),
    );
    expect(findings).toEqual([]);
    expect([images[5], images[41]].map((one) => one.end - one.start)).toEqual([8, 9]);
  });
});

describe("dates in a table", () => {
  const OPTIONS: LayerOptions = {
    files: ["s/*.tif"],
    date: { table: "dates.csv", file: "image", first: "from", last: "to" },
    covers: "month",
    unit: "1",
    kind: "mean",
  };
  const settled = (csv: string, options = OPTIONS) => settleDates(options, { readText: async () => csv });
  const failure = async (work: Promise<unknown>) =>
    work.then(
      () => undefined,
      (error: unknown) => {
        if (!(error instanceof InputError)) throw error;
        return [error.facts.name, error.facts.where?.line, error.facts.where?.column];
      },
    );
  const CSV =
    "image,from,to\ns/a.tif,2001-01-05,2001-01-20\nb.tif,2001-01-21,2001-01-21\nc,2001-02-01,2001-03-31\n";

  test("whole path, name, or name without ending; the last day is included; covers is not asked", async () => {
    const options = await settled(CSV);
    const texts = ["s/a.tif", "s/b.tif", "s/c.tif"].map((path) => {
      const [one] = periodsOf(path, [""], options);
      return `${isoDay(one.start)} to ${isoDay(one.end - 1)}`;
    });
    expect(texts).toEqual([
      "2001-01-05 to 2001-01-20",
      "2001-01-21 to 2001-01-21",
      "2001-02-01 to 2001-03-31",
    ]);
    expect(refused(() => periodsOf("s/d.tif", [""], options))).toBe("layers.date-not-found");
  });

  test("without last days, covers says how long each image counts", async () => {
    const date = { table: "dates.csv", file: "image", first: "from" };
    const options = await settled(CSV, { ...OPTIONS, date });
    const [one] = periodsOf("s/a.tif", [""], options);
    expect([isoDay(one.start), isoDay(one.end)]).toEqual(["2001-01-01", "2001-02-01"]);
  });

  test("what is wrong is told by line and column", async () => {
    expect(await failure(settled("image,from,to\na,2001-1-5,2001-01-20\n"))).toEqual([
      "layers.bad-date",
      2,
      2,
    ]);
    expect(await failure(settled("image,from,to\na,2001-01-05,2001-01-04\n"))).toEqual([
      "layers.bad-date",
      2,
      3,
    ]);
    const twice = "image,from,to\na,2001-01-05,2001-01-06\na,2001-02-05,2001-02-06\n";
    expect(await failure(settled(twice))).toEqual(["layers.date-repeated", 3, 1]);
    expect(await failure(settled("image,from\na,2001-01-05\n"))).toEqual([
      "table.column-missing",
      1,
      undefined,
    ]);
  });
});
