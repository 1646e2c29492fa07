import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { FINDING_KINDS, type Finding } from "../../src/data/finding.ts";
import { InputError, InterruptedError, MachineError } from "../../src/errors.ts";
import { errorLines } from "../../src/terminal/error.ts";
import { findingLines, wholeFindingLines } from "../../src/terminal/findings.ts";
import { styleOf, widthOf } from "../../src/terminal/style.ts";
import { summaryLines } from "../../src/terminal/summary.ts";

const style = styleOf(false);
const ESC = String.fromCharCode(27);

describe("errors", () => {
  test("say their name, expected, found, where and what to do", () => {
    const error = new InputError({
      name: "stations.column-missing",
      expected: 'a column named "precip"',
      found: 'the columns "day", "rain"',
      where: { file: "stations/lowland_1.csv", line: 1, cell: "records[0].series.rain" },
      remedy: "name one of the columns that are there",
    });
    expect(errorLines(error, style)).toEqual([
      "input  stations.column-missing",
      "  where       stations/lowland_1.csv:1 (records[0].series.rain)",
      '  expected    a column named "precip"',
      '  found       the columns "day", "rain"',
      "  what to do  name one of the columns that are there",
    ]);
  });

  test("long texts are filled, unknown places left out, control characters shown", () => {
    const facts = { name: "x.y", expected: "word ".repeat(30), found: `${ESC}[31m`, remedy: "r" };
    const lines = errorLines(new MachineError(facts), style, 40);
    expect(lines[0]).toBe("machine  x.y");
    expect(lines.every((line) => widthOf(line) <= 40)).toBe(true);
    expect(lines.join("")).not.toContain(ESC);
    expect(lines.join("")).not.toContain("where");
    expect(errorLines(new InterruptedError(), style)[0]).toBe("stopped  run.interrupted");
    expect(errorLines(new MachineError(facts), styleOf(true)).join("")).toContain(`${ESC}[35mmachine`);
  });
});

const finding = (
  kind: Finding["kind"],
  severity: Finding["severity"],
  more: Partial<Finding> = {},
): Finding => ({
  kind,
  severity,
  subject: "Ash",
  message: "31 days without a value",
  remedy: "",
  ...more,
});

describe("findings", () => {
  test("grouped by severity and kind, stops first, with counts and the first example", () => {
    const where = { file: "stations/lowland_1.csv", line: 12 };
    const lines = findingLines(
      [
        finding("gap", "warn", { where, count: 31 }),
        finding("sentinel", "accept"),
        finding("gap", "warn", { count: 2 }),
        finding("duplicate", "stop", { message: "2001-03-04 twice: 3.1 and 4.0" }),
      ],
      { style },
    );
    expect(lines).toEqual([
      "findings: 1 that stop the run, 2 to look at, 1 accepted",
      "stop  duplicate       1  2001-03-04 twice: 3.1 and 4.0",
      "warn  gap        2 (33)  stations/lowland_1.csv:12: 31 days without a value",
    ]);
    expect(findingLines([], { style })).toEqual(["findings: none"]);
  });

  test("the head says where each of them stands whole", () => {
    expect(findingLines([finding("gap", "warn")], { style, whole: "tables/findings.csv" })[0]).toBe(
      "findings: 1 to look at; all of them: tables/findings.csv",
    );
  });

  test("whole: each with its place and words, stops first, advice once where it is the same", () => {
    const where = { file: "a.csv", line: 3 };
    const long = "word ".repeat(30).trim();
    const lines = wholeFindingLines(
      [
        finding("gap", "warn", { message: "1 day", where, remedy: "fill it" }),
        finding("gap", "warn", { message: long, remedy: "fill it" }),
        finding("gap", "accept", { message: "2 days", remedy: "" }),
        finding("duplicate", "stop", { message: "twice", remedy: "drop one" }),
      ],
      style,
    );
    expect(lines.slice(0, 4)).toEqual([
      "stop  duplicate  1",
      "      twice",
      "      what to do: drop one",
      "warn  gap  2",
    ]);
    expect(lines[4]).toBe("      a.csv:3: 1 day");
    expect(lines.filter((line) => line.includes("what to do: fill it"))).toHaveLength(1);
    expect(lines.join(" ").replace(/ +/g, " ")).toContain(long);
    expect(lines.slice(-2)).toEqual(["accept  gap  1", "      2 days"]);
    for (const line of lines) expect(widthOf(line)).toBeLessThanOrEqual(80);
  });

  test("never more lines or columns than given, and every finding is counted", () => {
    const one = fc.record({
      kind: fc.constantFrom(...FINDING_KINDS),
      severity: fc.constantFrom("stop", "warn", "accept"),
      message: fc.string({ unit: "grapheme", maxLength: 120 }),
      count: fc.integer({ min: 1, max: 1e6 }),
    });
    fc.assert(
      fc.property(fc.array(one, { maxLength: 80 }), fc.integer({ min: 2, max: 14 }), (given, most) => {
        const all = given.map((part) => finding(part.kind, part.severity as Finding["severity"], part));
        const lines = findingLines(all, { style, lines: most, width: 80 });
        expect(lines.length).toBeLessThanOrEqual(most);
        for (const line of lines) expect(widthOf(line)).toBeLessThanOrEqual(80);
        const told = lines.slice(1).reduce((sum, line) => {
          const n = /^(?:stop|warn) {2}[a-z-]+ +(\d+)/.exec(line) ?? /^ {2}… (\d+) more/.exec(line);
          return sum + Number(n?.[1] ?? Number.NaN);
        }, 0);
        expect(told).toBe(all.filter((part) => part.severity !== "accept").length);
      }),
    );
  });
});

describe("the summary", () => {
  test("a small one as it stands", () => {
    const lines = summaryLines(
      {
        title: "An invented roost",
        sections: [
          {
            title: "Data",
            rows: [
              ["occasions", "21"],
              ["animals", "400"],
            ],
          },
          { title: "Nothing", rows: [] },
          { title: "Screen", rows: [["chosen", "winter rain"]] },
        ],
        closing: ["page: out/roost/index.html"],
      },
      style,
    );
    expect(lines).toEqual([
      "An invented roost",
      "Data",
      "  occasions  21",
      "  animals    400",
      "Screen",
      "  chosen     winter rain",
      "page: out/roost/index.html",
    ]);
  });

  test("fits 24 lines of 80 columns whatever it holds, and says how many rows it left out", () => {
    const words = fc.string({ unit: "grapheme", maxLength: 150 });
    const section = fc.record({
      title: words,
      rows: fc.array(fc.tuple(words, words), { minLength: 1, maxLength: 30 }),
    });
    fc.assert(
      fc.property(words, fc.array(section, { maxLength: 6 }), (title, sections) => {
        const lines = summaryLines({ title, sections, closing: ["page: x"] }, style);
        expect(lines.length).toBeLessThanOrEqual(24);
        for (const line of lines) expect(widthOf(line)).toBeLessThanOrEqual(80);
        expect(lines.at(-1)).toBe("page: x");
      }),
    );
    const rows = Array.from({ length: 40 }, (_, i) => [`row ${i}`, String(i)] as const);
    const lines = summaryLines({ title: "t", sections: [{ title: "s", rows }] }, style);
    expect(lines).toHaveLength(24);
    expect(lines.at(-1)).toBe("  … and 19 more");
  });
});
