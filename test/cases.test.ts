import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { parse } from "csv-parse/sync";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { nodeDisk } from "../src/pipeline/effects.ts";
import { verifyOutput } from "../src/publish/verify.ts";
import { pipelineIn, ROOT, type Row, readRows, runHere, tableOf, temporaryFolder } from "./pipeline/covey.ts";
import { type Cells, near, tableDifference } from "./pipeline/table-difference.ts";
import { reference } from "./support/reference.ts";

// One folder per case: pipeline.yaml with its data, expected/ with a few of the tables it must give, and the script
// that made them apart from covey (expected.py; the two dipper cases share one).
const CASES = join(ROOT, "test/cases");
const NAMES = readdirSync(CASES).sort();
/** Fits are converged to about 1e-11; the references were made to 1e-9 or better (their own `tolerance`). */
const TOLERANCE = 1e-8;

const temporary = NAMES.map((name) => ({ name, folder: temporaryFolder() }));
afterAll(() => {
  for (const { folder } of temporary) folder.remove();
});
const outputOf = (name: string) => join(temporary.find((one) => one.name === name)?.folder.path ?? "", "out");

beforeAll(async () => {
  for (const { name, folder } of temporary)
    await runHere(pipelineIn(folder.path, join(CASES, name, "pipeline.yaml")));
});

const cells = (file: string): Cells => parse(readFileSync(file, "utf8")) as string[][];

describe.each(NAMES)("case %s", (name) => {
  const expected = join(CASES, name, "expected");

  test.each(readdirSync(expected).sort())(`%s, numbers to a relative ${TOLERANCE}`, (file) => {
    const found = cells(join(outputOf(name), "tables", file));
    expect(tableDifference(cells(join(expected, file)), found, TOLERANCE)).toEqual([]);
  });

  test("the output agrees with its record", () => {
    expect(verifyOutput(nodeDisk(), outputOf(name)).departures).toEqual([]);
  });
});

test("the comparison of tables sees a digit, a word, a column and a row", () => {
  const head = ["a", "b"];
  const table = [head, ["x", "1.5"]];
  const against = (...found: string[][]) => tableDifference(table, found, 1e-8);
  expect(against(["c", "b", "a"], ["more", "1.50000001", "x"])).toEqual([]);
  expect(against(head, ["x", "1.5000001"])).toEqual(['row 1 "x", b: expected 1.5, found 1.5000001']);
  expect(against(head, ["y", ""])).toEqual([
    'row 1 "x", a: expected x, found y',
    'row 1 "x", b: expected 1.5, found nothing',
  ]);
  expect(against(["a", "c"], ["x", "1.5"])).toEqual(["columns: expected b, found a,c"]);
  expect(against(head)).toEqual(["row 1: expected x,1.5, found the end of the table"]);
  expect(against(head, ["x", "1.5"], ["y", "2"])).toEqual(["one row more than expected: y,2"]);
});

/** Rows of the comparison by candidate. */
const candidates = (name: string): ReadonlyMap<string, Row> =>
  new Map(tableOf(outputOf(name), "comparison").map((row) => [row.candidate, row]));

// Lebreton, Burnham, Clobert & Anderson (1992) Ecol. Monogr. 62:67-118; test/reference/A_dipper.json.
describe("dippers, against the published analysis", () => {
  const { data } = reference<{
    data: { releases: number[]; m_array_rows: number[][]; flood_covariate_by_interval: number[] };
  }>("A_dipper");

  test("the case holds the published counts and floods", () => {
    const rows = readRows(join(CASES, "dipper/counts.csv"));
    expect(rows.map((row) => Number(row.released))).toEqual(data.releases);
    const later = ["1982", "1983", "1984", "1985", "1986", "1987"];
    const seen = rows.map((row) => later.flatMap((year) => (row[year] === "" ? [] : [Number(row[year])])));
    expect(seen).toEqual(data.m_array_rows);
    const floods = readRows(join(CASES, "dipper/floods.csv"));
    expect(floods.map((row) => Number(row.flood))).toEqual(data.flood_covariate_by_interval);
  });

  test.each([
    ["dipper", [666.83766, 660.10277, 659.73009], 72.284, 0.00105, "4"],
    ["dipper-each-occasion", [664.48017, 657.68854, 656.95021], 27.594, 0.0134, "3"],
  ] as const)("%s: −2 log L, and the analysis of deviance of the flood", (name, deviances, f, p, left) => {
    const by = candidates(name);
    const found = ["constant", "all covariates", "each interval"].map((key) =>
      Number(by.get(key)?.minus_2_log_l),
    );
    found.forEach((value, i) => {
      expect(Math.abs(value - deviances[i])).toBeLessThan(5e-6);
    });
    const flood = by.get("all covariates");
    // F(1,3) is printed as 27.594 and is 27.5959 at full precision of the same deviances.
    expect(near(Number(flood?.f), f, 1e-4)).toBe(true);
    expect(Number(Number(flood?.p).toPrecision(3))).toBe(p);
    expect([flood?.df_1, flood?.df_2]).toEqual(["1", left]);
  });

  test("no F and no p stand beside what these data chose, in any case", () => {
    for (const name of ["dipper", "dipper-each-occasion", "two-strata"]) {
      const chosen = tableOf(outputOf(name), "comparison").filter((row) => row.chosen_on_data === "true");
      expect(chosen.map((row) => row.candidate)).toEqual(
        expect.arrayContaining(["chosen by animals", "chosen by years"]),
      );
      for (const row of chosen)
        expect([row.candidate, row.f, row.df_1, row.df_2, row.p]).toEqual([row.candidate, "", "", "", ""]);
    }
  });

  test("with recapture by occasion the last product cannot be taken apart, and that is a finding", () => {
    const rows = tableOf(outputOf("dipper-each-occasion"), "findings").filter(
      (row) => row.kind === "not-separable",
    );
    expect(rows.map((row) => row.message)).toEqual([
      "the data cannot tell apart: survival of interval 6 and recapture at occasion 7",
    ]);
  });
});

describe("Colorado, monthly records with real gaps", () => {
  /** Missing months between the first and last value of each series, counted here from the bare file. */
  function missingMonths(): Map<string, number> {
    const columns = { precipitation_cm: "rain", tmax_c: "tmax", tmin_c: "tmin" };
    const series = new Map<string, boolean[]>();
    for (const row of readRows(join(ROOT, "test/data/colorado-monthly.csv")))
      for (const [column, variable] of Object.entries(columns)) {
        const key = `${variable} at ${row.station}`;
        series.set(key, [...(series.get(key) ?? []), row[column] !== ""]);
      }
    const counts = [...series].map(([key, has]): [string, number] => {
      const inside = has.slice(has.indexOf(true), has.lastIndexOf(true) + 1);
      return [key, inside.filter((one) => !one).length];
    });
    return new Map(counts.filter(([, missing]) => missing > 0));
  }

  test("every gap is listed, with the number of months that an independent count gives", () => {
    const listed = tableOf(outputOf("colorado"), "findings").filter((row) => row.kind === "gap");
    const counted = missingMonths();
    expect(counted.size).toBeGreaterThan(30);
    expect(new Map(listed.map((row) => [row.subject, Number(row.count)]))).toEqual(counted);
  });

  test("what cannot be complete leaves the matrix and says why", () => {
    const left = tableOf(outputOf("colorado"), "covariate-dictionary").filter(
      (row) => row.left_out_because !== "",
    );
    expect(left.map((row) => [row.covariate, row.column, row.intervals_with_value])).toEqual([
      ["high summer", "", "0"],
      ["nights at Cherry Creek", "", "25"],
    ]);
    const kinds = tableOf(outputOf("colorado"), "findings").map((row) => `${row.kind}: ${row.subject}`);
    expect(kinds).toContain("window-empty: high summer");
    expect(kinds).toContain("incomplete: nights at Cherry Creek");
  });

  test("without captures nothing is fitted, and the page is there all the same", () => {
    const tables = readdirSync(join(outputOf("colorado"), "tables"));
    expect(tables).not.toContain("comparison.csv");
    expect(tables).toContain("inflation.csv");
    expect(readFileSync(join(outputOf("colorado"), "report.html"), "utf8")).toContain(
      "Monthly records of Colorado",
    );
  });
});

test("two sexes: the interval that nobody visited has a length of two years", () => {
  const lengths = tableOf(outputOf("two-strata"), "intervals").map((row) => [row.interval, row.length]);
  expect(lengths).toEqual([
    ["2001 to 2002", "1"],
    ["2002 to 2004", "2"],
    ["2004 to 2005", "1"],
    ["2005 to 2006", "1"],
  ]);
});
