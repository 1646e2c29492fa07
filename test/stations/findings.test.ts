import { describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import type { Site } from "../../src/data/series.ts";
import { placeText } from "../../src/errors.ts";
import type { DuplicateRule, LongRecords, SeriesColumn } from "../../src/stations/options.ts";
import { readRecords } from "../../src/stations/read-records.ts";
import { folder } from "./memory-files.ts";

const column = (name: string, unit: string, kind: SeriesColumn["kind"]): SeriesColumn => ({
  column: name,
  unit,
  kind,
  day: 0,
  scale: 1,
});
const RAIN = { rain: column("rain", "mm", "total") };
const TEMPERATURES = { tmin: column("tn", "degC", "minimum"), tmax: column("tx", "degC", "maximum") };
const records = (series: Readonly<Record<string, SeriesColumn>>, files = ["*.csv"]): LongRecords => ({
  layout: "long",
  files,
  station: { column: "site" },
  date: { column: "day", format: "yyyy-MM-dd", covers: "day" },
  missing: [],
  series,
});
const FIRST: DuplicateRule = { keep: "first", except: [] };

function read(
  files: Readonly<Record<string, string>>,
  series: Readonly<Record<string, SeriesColumn>>,
  rule = FIRST,
  sites?: readonly Site[],
) {
  return readRecords([records(series)], sites, rule, folder(files));
}

const day = (i: number) => isoDay(11_323 + i);
const daily = (n: number, value: (i: number) => string, site = "Ash") =>
  Array.from({ length: n }, (_, i) => `${site},${day(i)},${value(i)}\n`).join("");
const short = (finding: { kind: string; subject: string; where?: object; count?: number; value?: string }) =>
  `${finding.kind} | ${finding.subject} | ${placeText(finding.where)} | ${finding.count} | ${finding.value}`;

describe("rows that repeat a station and day", () => {
  const FILES = {
    "a.csv":
      "site,day,rain\nAsh,2001-01-01,1\nAsh,2001-01-02,2\nAsh,2001-01-02,2\nAsh,2001-01-03,3\nAsh,2001-01-03,4\n",
    "b.csv": "site,day,rain\nAsh,2001-01-01,\nAsh,2001-01-04,5\n",
  };
  const values = async (rule: DuplicateRule) => Array.from((await read(FILES, RAIN, rule)).series[0].values);

  test("first, last and none decide between contradicting values only", async () => {
    expect(await values({ keep: "first", except: [] })).toEqual([1, 2, 3, 5]);
    expect(await values({ keep: "last", except: [] })).toEqual([1, 2, 4, 5]);
    expect(await values({ keep: "none", except: [] })).toEqual([1, 2, Number.NaN, 5]);
  });

  test("same and contradicting ones are told apart, with the second row's line", async () => {
    const { findings, series } = await read(FILES, RAIN);
    expect(series[0].files).toEqual(["a.csv", "b.csv"]);
    expect(findings.map(short)).toEqual([
      "duplicate | rain at Ash | b.csv:2 | 2 | 2001-01-01: 1",
      "duplicate | rain at Ash | a.csv:6 | 1 | 2001-01-03: 3 and 4",
    ]);
    expect(findings[1].message).toBe(
      "1 period of rain at Ash stands in more than one row with contradicting values; the first value stands.",
    );
  });

  test("an exception for a file applies its own rule, and is told with its note", async () => {
    const rule: DuplicateRule = {
      keep: "none",
      except: [{ file: "a.csv", keep: "last", note: "typed twice" }],
    };
    const { findings, series } = await read(FILES, RAIN, rule);
    expect(Array.from(series[0].values)).toEqual([1, 2, 4, 5]);
    expect(findings.map(({ kind }) => kind)).toEqual(["excepted"]);
    expect(findings[0].message).toContain("(typed twice)");
  });
});

describe("values a person should look at", () => {
  test("undeclared sentinels: impossible once, or far off and repeated; real extremes are left alone", async () => {
    const rain = (i: number) =>
      i === 7 ? "-9999" : i % 10 === 3 ? "999.9" : i === 8 ? "99.9" : String(i % 20);
    const { findings, series } = await read({ "a.csv": `site,day,rain\n${daily(60, rain)}` }, RAIN);
    expect(findings.map(short)).toEqual([
      "sentinel | rain | a.csv:9 | 1 | -9999",
      "sentinel | rain | a.csv:5 | 6 | 999.9",
    ]);
    // Nothing is taken away in silence.
    expect(series[0].values[7]).toBe(-9999);
  });

  test("limits: negative rain; temperatures outside −90 to 60 degC, also if declared in degF", async () => {
    const rain = await read({ "a.csv": `site,day,rain\n${daily(5, (i) => (i === 2 ? "-0.4" : "1"))}` }, RAIN);
    expect(rain.findings.map(short)).toEqual(["bad-value | rain at Ash | a.csv:4 | 1 | -0.4"]);
    const hot = { tmax: column("tx", "degF", "maximum") };
    // 140 degF is 60 degC.
    const text = `site,day,tx\n${daily(5, (i) => (i === 2 ? "141" : i === 3 ? "140" : "70"))}`;
    expect((await read({ "a.csv": text }, hot)).findings.map(short)).toEqual([
      "bad-value | tmax at Ash | a.csv:4 | 1 | 141",
    ]);
  });

  test("the minimum above the maximum, counted, with the first line", async () => {
    const text = `site,day,tn,tx\n${daily(6, (i) => (i === 2 || i === 4 ? "9,3" : "3,9"))}`;
    const { findings } = await read({ "a.csv": text }, TEMPERATURES);
    expect(findings.map(short)).toEqual([
      "bad-value | tmin and tmax at Ash | a.csv:4 | 2 | tmin 9 degC, tmax 3 degC",
    ]);
  });

  test("stated limits take the place of the usual ones", async () => {
    const text = `site,day,rain\n${daily(5, (i) => (i === 2 ? "250" : "1"))}`;
    const narrow = { rain: { ...RAIN.rain, limits: [0, 200] as const } };
    const { findings } = await read({ "a.csv": text }, narrow);
    expect(findings.map(short)).toEqual(["bad-value | rain at Ash | a.csv:4 | 1 | 250"]);
    expect(findings[0].message).toContain("outside the stated limits 0 to 200");
  });

  // Twenty equal days and 25 degC for one day: Durre et al. (2010), from memory.
  test("flat runs of 20 days, not of 19, and not of dry days; spikes of 25 degC, not of 24.9", async () => {
    const one = { t: column("t", "degC", "mean") };
    const wave = (i: number) => (10 + Math.sin(i)).toFixed(2);
    const at = async (value: (i: number) => string, series = one as Record<string, SeriesColumn>) => {
      const name = Object.values(series)[0].column;
      const { findings } = await read({ "a.csv": `site,day,${name}\n${daily(60, value)}` }, series);
      return findings.map(short);
    };
    expect(await at((i) => (i >= 10 && i < 30 ? "7.5" : wave(i)))).toEqual([
      "flat-run | t at Ash | a.csv:12 | 20 | 7.5",
    ]);
    expect(await at((i) => (i >= 10 && i < 29 ? "7.5" : wave(i)))).toEqual([]);
    expect(await at(() => "0", RAIN)).toEqual([]);
    expect(await at((i) => (i < 20 ? "3" : "0"), RAIN)).toEqual([
      "flat-run | rain at Ash | a.csv:2 | 20 | 3",
    ]);
    expect(await at((i) => (i === 10 ? "-15" : i % 2 ? "10" : "10.1"))).toEqual([
      "spike | t at Ash | a.csv:12 | 1 | -15",
    ]);
    expect(await at((i) => (i === 10 ? "-14.9" : i % 2 ? "10" : "10.1"))).toEqual([]);
  });

  test("a suspected unit: Fahrenheit, Kelvin, tenths; none where the values fit", async () => {
    const season = (i: number) => 10 - 15 * Math.cos((2 * Math.PI * i) / 365);
    const one = { t: column("t", "degC", "mean") };
    const guess = async (value: (i: number) => number) => {
      const { findings } = await read(
        { "a.csv": `site,day,t\n${daily(730, (i) => value(i).toFixed(1))}` },
        one,
      );
      return findings.filter(({ kind }) => kind === "unit").map(({ message }) => message.split(": ")[1]);
    };
    expect(await guess(season)).toEqual([]);
    expect(await guess((i) => season(i) * 1.8 + 32)).toEqual(["they look like degF."]);
    expect(await guess((i) => season(i) + 273.15)).toEqual(["they look like K."]);
    expect(await guess((i) => season(i) * 10)).toEqual(["they look like tenths."]);
  });

  test("daily rain in tenths", async () => {
    const text = `site,day,rain\n${daily(200, (i) => String((i * 37) % 500))}`;
    const { findings } = await read({ "a.csv": text }, RAIN);
    expect(findings.map(({ kind, remedy }) => [kind, remedy])).toEqual([
      ["unit", "write `scale: 0.1` if the file holds tenths"],
    ]);
  });

  test("stations missing from the list, with the near id; rows without a station", async () => {
    const text = "site,day,rain\n00114,2001-01-01,1\nBeck,2001-01-01,1\n,2001-01-01,1\nBeck,2001-01-02,1\n";
    const site = (id: string): Site => ({ id, name: id, longitude: 8, latitude: 50, elevation: 1 });
    const { findings, series } = await read({ "a.csv": text }, RAIN, FIRST, [site("114"), site("Clay")]);
    expect(findings.map(short)).toEqual([
      "unknown-station | rows without a station | a.csv:4 | 1 | ",
      "unknown-station | 00114 | a.csv:2 | 1 | 00114",
      "unknown-station | Beck | a.csv:3 | 2 | Beck",
    ]);
    expect(findings[1].message).toContain('The list has "114".');
    expect(series.map((one) => one.site)).toEqual(["00114", "Beck"]);
  });

  test("many different odd texts become twenty findings, the last for all others", async () => {
    const { findings } = await read(
      { "a.csv": `site,day,rain\n${daily(50, (i) => (i < 2 ? "1" : `x${i}`))}` },
      RAIN,
    );
    expect(findings.length).toBe(20);
    expect(findings[19].message).toContain("29 rows more");
  });

  test("a column without any value is a finding, not a crash", async () => {
    const { findings, series } = await read({ "a.csv": "site,day,rain\nAsh,2001-01-01,\n" }, RAIN);
    expect(findings.map(short)).toEqual(["gap | rain at Ash | a.csv:2 | 1 | undefined"]);
    expect(series[0].values.length).toBe(1);
  });
});

describe("several entries", () => {
  test("one station from two entries, other column names and units, becomes one series in the first unit", async () => {
    const effects = folder({
      "a.csv": "site,day,rain\nAsh,2001-01-01,10\n",
      "b.csv": "datum;RR\n02.01.2001;2,5\n",
    });
    const { series } = await readRecords(
      [
        records(RAIN, ["a.csv"]),
        {
          ...records({ rain: column("RR", "cm", "total") }, ["b.csv"]),
          station: { always: "Ash" },
          date: { column: "datum", format: "dd.MM.yyyy", covers: "day" },
        },
      ],
      undefined,
      FIRST,
      effects,
    );
    expect(series.length).toBe(1);
    expect([series[0].unit, Array.from(series[0].values), series[0].files]).toEqual([
      "mm",
      [10, 25],
      ["a.csv", "b.csv"],
    ]);
  });

  test("monthly inside daily, and kinds that differ, are refused", async () => {
    const effects = folder({
      "a.csv": "site,day,rain\nAsh,2001-01-05,1\n",
      "b.csv": "site,day,rain\nAsh,2001-01-01,30\n",
    });
    const monthly = {
      ...records(RAIN, ["b.csv"]),
      date: { column: "day", format: "yyyy-MM-dd", covers: "month" as const },
    };
    await expect(readRecords([records(RAIN, ["a.csv"]), monthly], undefined, FIRST, effects)).rejects.toThrow(
      "expected periods of rain at Ash that do not overlap, found one from 2001-01-05 inside one from 2001-01-01 to 2001-01-31",
    );
    const other = records({ rain: column("rain", "mm", "mean") }, ["b.csv"]);
    await expect(readRecords([records(RAIN, ["a.csv"]), other], undefined, FIRST, effects)).rejects.toThrow(
      "expected rain to be a total in every records entry, as in the first, found mean in b.csv",
    );
  });
});
