import { gzipSync } from "node:zlib";
import iconv from "iconv-lite";
import { describe, expect, test } from "vitest";
import { type Case, holdCase, long, MM, wide } from "./dialect-case.ts";

const PLAIN = "site,day,rain\nAsh,2001-01-01,1.5\nAsh,2001-01-02,0\nBeck,2001-01-01,2\n";
const ROWS = ["Ash 2001-01-01 1.5", "Ash 2001-01-02 0", "Beck 2001-01-01 2"];
const with2 = (text: string) => iconv.encode(text, "utf-16le", { addBOM: true });

const CASES: readonly Case[] = [
  { name: "commas and points", files: { "a.csv": PLAIN }, rows: ROWS },
  { name: "CRLF line ends", files: { "a.csv": PLAIN.replaceAll("\n", "\r\n") }, rows: ROWS },
  { name: "no line end at the end", files: { "a.csv": PLAIN.trimEnd() }, rows: ROWS },
  { name: "a BOM", files: { "a.csv": `\uFEFF${PLAIN}` }, rows: ROWS },
  { name: "tabs", files: { "a.tsv": PLAIN.replaceAll(",", "\t") }, rows: ROWS },
  { name: "bars", files: { "a.txt": PLAIN.replaceAll(",", "|") }, rows: ROWS },
  {
    name: "semicolons and decimal commas",
    files: { "a.csv": PLAIN.replaceAll(",", ";").replaceAll(".", ",") },
    rows: ROWS,
  },
  {
    name: "commas with quoted decimal commas",
    files: { "a.csv": 'site,day,rain\nAsh,2001-01-01,"1,5"\nAsh,2001-01-02,"0,25"\n' },
    rows: ["Ash 2001-01-01 1.5", "Ash 2001-01-02 0.25"],
  },
  { name: "gzip", files: { "a.csv.gz": gzipSync(PLAIN) }, rows: ROWS },
  { name: "UTF-16", files: { "a.csv": with2(PLAIN) }, rows: ROWS },
  {
    name: "Latin-1 letters",
    files: { "a.csv": iconv.encode("site;day;Höhe\nMühle;2001-01-01;1,5\nMühle;2001-01-02;2\n", "latin1") },
    options: long({ series: { rain: { ...MM, column: "Höhe" } } }),
    rows: ["Mühle 2001-01-01 1.5", "Mühle 2001-01-02 2"],
  },
  {
    name: "Latin-1, packed, with an odd value told in its true line after a quoted line break",
    files: {
      "a.csv.gz": gzipSync(
        iconv.encode(
          'site;day;note;rain\nMühle;2001-01-01;"a\nb";1\n\nMühle;2001-01-02;;x\nMühle;2001-01-03;2\n',
          "latin1",
        ),
      ),
    },
    rows: ["Mühle 2001-01-01 1", "Mühle 2001-01-02 NaN"],
    findings: ["bad-value a.csv.gz:6 1 Mühle;2001-01-03;2", "bad-value a.csv.gz:5 1 x"],
  },
  {
    name: "remarks above the header and blank lines",
    files: {
      "a.csv": `# invented station, rain in mm\nmade 2002; no warranty\n\n${PLAIN.replace("Beck", "\nBeck")}`,
    },
    rows: ROWS,
  },
  {
    name: "a row of units",
    files: { "a.csv": PLAIN.replace("rain\n", "rain\n,,mm\n") },
    rows: ROWS,
    findings: [],
  },
  {
    name: "a row of units that contradicts",
    files: { "a.csv": PLAIN.replace("rain\n", "rain\n-,-,(cm)\n") },
    rows: ROWS,
    findings: ["unit a.csv:2 1 cm"],
  },
  {
    name: "quoted cells, doubled quotes, separators inside",
    files: { "a.csv": '"site","day","rain","note"\n"Ash, ""upper""","2001-01-01","1.5","x, y"\n' },
    rows: ['Ash, "upper" 2001-01-01 1.5'],
  },
  {
    name: "blanks around cells",
    files: { "a.csv": "site , day , rain \nAsh , 2001-01-01 ,  1.5 \n" },
    rows: ["Ash 2001-01-01 1.5"],
  },
  {
    name: "line numbers after quoted line breaks, blank lines and refused rows",
    files: {
      "a.csv":
        'site,day,rain,note\nAsh,2001-01-01,1,"two\nlines"\n\nAsh,2001-01-02\nAsh,2001-01-03,3,x,y\nAsh,2001-01-04,T,\nAsh,2001-01-35,1,\n',
    },
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-04 NaN"],
    findings: [
      "bad-value a.csv:5 2 Ash,2001-01-02",
      "bad-date a.csv:8 1 2001-01-35",
      "bad-value a.csv:7 1 T",
    ],
  },
  {
    name: "the same after a BOM, with CRLF, packed",
    files: {
      "a.csv.gz": gzipSync(
        '\uFEFFsite,day,rain,note\r\nAsh,2001-01-01,1,"two\r\nlines"\r\n\r\nAsh,2001-01-02\r\nAsh,2001-01-04,T,\r\n',
      ),
    },
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-04 NaN"],
    findings: ["bad-value a.csv.gz:5 1 Ash,2001-01-02", "bad-value a.csv.gz:6 1 T"],
  },
  {
    name: "texts a careless conversion would take for numbers",
    files: {
      "a.csv":
        "site,day,rain\nAsh,2001-01-01,1_000\nAsh,2001-01-02,nan\nAsh,2001-01-03,inf\nAsh,2001-01-04,0x10\nAsh,2001-01-05,1e1\n",
    },
    rows: [
      "Ash 2001-01-01 NaN",
      "Ash 2001-01-02 NaN",
      "Ash 2001-01-03 NaN",
      "Ash 2001-01-04 NaN",
      "Ash 2001-01-05 10",
    ],
    findings: [
      "bad-value a.csv:2 1 1_000",
      "bad-value a.csv:3 1 nan",
      "bad-value a.csv:4 1 inf",
      "bad-value a.csv:5 1 0x10",
    ],
  },
  {
    name: "thousands separators are not silently decimals",
    files: { "a.csv": 'site,day,rain\nAsh,2001-01-01,"1,234"\nAsh,2001-01-02,3.5\n' },
    rows: ["Ash 2001-01-01 NaN", "Ash 2001-01-02 3.5"],
    findings: ["bad-value a.csv:2 1 1,234"],
  },
  {
    name: "declared missing values as text and as number, however written",
    files: {
      "a.csv":
        "site,day,rain\nAsh,2001-01-01,-9999.00\nAsh,2001-01-02,NA\nAsh,2001-01-03,\nAsh,2001-01-04,4\n",
    },
    options: long({ missing: ["-9999", "NA"] }),
    rows: ["Ash 2001-01-01 NaN", "Ash 2001-01-02 NaN", "Ash 2001-01-03 NaN", "Ash 2001-01-04 4"],
    findings: [],
  },
  {
    name: "dates as dd.MM.yyyy, tenths, morning rain of the day before",
    files: { "a.csv": "site;day;rain\nAsh;01.03.2000;123\nAsh;2.3.2000;3\n" },
    options: long({
      date: { column: "day", format: "dd.MM.yyyy", covers: "day" },
      series: { rain: { ...MM, day: -1, scale: 0.1 } },
    }),
    rows: ["Ash 2000-02-29 12.3", "Ash 2000-03-01 0.3"],
  },
  {
    name: "dates as yyyyMMdd, ids with leading zeros",
    files: { "a.csv": "site,day,rain\n00042,20000229,1\n" },
    options: long({ date: { column: "day", format: "yyyyMMdd", covers: "day" } }),
    rows: ["00042 2000-02-29 1"],
  },
  {
    name: "year and day of the year",
    files: { "a.csv": "site,day,rain\nAsh,2000 60,1\nAsh,2000 366,2\nAsh,2001 366,3\n" },
    options: long({ date: { column: "day", format: "yyyy D", covers: "day" } }),
    rows: ["Ash 2000-02-29 1", "Ash 2000-12-31 2"],
    findings: ["bad-date a.csv:4 1 2001 366", "gap a.csv:2 305 2000-03-01 to 2000-12-30"],
  },
  {
    name: "months and dekads",
    files: {
      "a.csv": "site,day,rain\nAsh,2000-02,1\nAsh,2000-03,2\n",
      "b/c.csv": "site,day,rain\nBeck,2000-02-11,1\nBeck,2000-02-21,2\n",
    },
    options: long({ files: ["a.csv"], date: { column: "day", format: "yyyy-MM", covers: "month" } }),
    rows: ["Ash 2000-02-01..2000-02-29 1", "Ash 2000-03-01..2000-03-31 2"],
  },
  {
    name: "dekads to the month's end",
    files: { "a.csv": "site,day,rain\nAsh,2000-02-11,1\nAsh,2000-02-21,2\nAsh,2000-03-01,3\n" },
    options: long({ date: { column: "day", format: "yyyy-MM-dd", covers: "dekad" } }),
    rows: ["Ash 2000-02-11..2000-02-20 1", "Ash 2000-02-21..2000-02-29 2", "Ash 2000-03-01..2000-03-10 3"],
  },
  {
    name: "one station for the whole file; a station by file name",
    files: {
      "rain_Ash_2001.csv": "day,rain\n2001-01-01,1\n",
      "rain_Beck_2001.csv": "day,rain\n2001-01-01,2\n",
    },
    options: long({ station: { name: "rain_{id}_2001" } }),
    rows: ["Ash 2001-01-01 1", "Beck 2001-01-01 2"],
  },
  {
    name: "wide: a column per station",
    files: { "a.csv": "day,Ash,Beck\n2001-01-01,1,2\n2001-01-02,,3\n" },
    options: wide(),
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 NaN", "Beck 2001-01-01 2", "Beck 2001-01-02 3"],
  },
  {
    name: "traces, and dates split over columns",
    files: { "a.csv": "site,year,month,day,rain\nAsh,2000,2,29,T\nAsh,2000,3,1,1.5\nAsh,2000,3,32,1\n" },
    options: long({
      date: { column: "year", with: ["month", "day"], format: "yyyy M d", covers: "day" },
      series: { rain: { ...MM, trace: { text: "T", value: 0.05 } } },
    }),
    rows: ["Ash 2000-02-29 0.05", "Ash 2000-03-01 1.5"],
    findings: ["bad-date a.csv:4 1 2000 3 32"],
  },
  {
    name: "quality flags that pass and that do not",
    files: {
      "a.csv":
        "site,day,rain,q\nAsh,2001-01-01,1,\nAsh,2001-01-02,2,S\nAsh,2001-01-03,3,ok\nAsh,2001-01-04,,X\n",
    },
    options: long({ series: { rain: { ...MM, quality: { column: "q", pass: ["", "ok"] } } } }),
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 NaN", "Ash 2001-01-03 3", "Ash 2001-01-04 NaN"],
    findings: ["flagged a.csv:3 1 S 1", "gap a.csv:2 1 2001-01-02"],
  },
  {
    name: "Latin-1 letters that first come after a quarter of a megabyte",
    files: {
      "a.csv": iconv.encode(
        `site,day,rain,note\nAsh,2001-01-01,1,${"x".repeat(300_000)}\nAsh,2001-01-02,2,Höhe\n`,
        "latin1",
      ),
    },
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 2"],
    findings: [],
  },
  {
    name: "months written 2001.05 beside decimal commas, the first of them far down",
    files: {
      "a.csv": `site;day;rain\n${Array.from({ length: 600 }, (_, i) => `Ash;${1901 + Math.floor(i / 12)}.${String((i % 12) + 1).padStart(2, "0")};${i === 598 ? "2,5" : ""}\n`).join("")}Beck;2001.05;3\n`,
    },
    options: long({
      station: { column: "site" },
      date: { column: "day", format: "yyyy.MM", covers: "month" },
      missing: [""],
    }),
    rows: [
      ...Array.from({ length: 600 }, (_, i) => {
        const end = new Date(Date.UTC(1901, i + 1, 0)).toISOString().slice(0, 10);
        return `Ash ${end.slice(0, 8)}01..${end} ${i === 598 ? 2.5 : Number.NaN}`;
      }),
      "Beck 2001-05-01..2001-05-31 3",
    ],
    findings: [],
  },
  {
    name: "gzip that is cut off",
    files: { "a.csv.gz": gzipSync(PLAIN.repeat(50)).subarray(0, 90) },
    error:
      "a.csv.gz: expected a whole gzip file, as its name says, found unexpected end of file; fetch or pack it again, or take the .gz off its name if it is not packed",
  },
  {
    name: "a header and no rows",
    files: { "a.csv": "site,day,rain\n" },
    rows: [],
  },
  {
    name: "an apostrophe and brackets in a path",
    files: { "it's [1].csv": PLAIN },
    options: long({ files: ["*.csv"] }),
    rows: ROWS,
  },
  {
    name: "a column that is not there",
    files: { "a.csv": "station,day,rain\nAsh,2001-01-01,1\n" },
    error:
      'a.csv:1: expected a column named "site", found the columns "station", "day", "rain"; name a column that is there; `look` shows what the file holds',
  },
  {
    name: "a column that is there twice",
    files: { "a.csv": "site,day,rain,rain\nAsh,2001-01-01,1,2\n" },
    error:
      'a.csv:1:4: expected the column "rain" once, found it twice, as columns 3 and 4; rename one of the two in the file',
  },
  {
    name: "an empty file",
    files: { "a.csv": "" },
    error:
      "a.csv:1: expected a header row and rows of data, found an empty file; remove the file from `files:` or put its content back",
  },
  {
    name: "no date of the declared form",
    files: { "a.csv": "site,day,rain\nAsh,31.12.2001,1\n" },
    error:
      'a.csv:2: expected dates of the form yyyy-MM-dd in the column "day", found "31.12.2001" and no row that matches; they look like dd.MM.yyyy: write that as `date.format`',
  },
  {
    name: "no file",
    files: { "a.csv": PLAIN },
    options: long({ files: ["b*.csv"] }),
    error:
      'records[0].files: expected files that match "b*.csv", found none; paths are below `data:`; * stands for any part of a name, ** for any folders',
  },
  {
    name: "gzip in name only",
    files: { "a.csv.gz": PLAIN },
    error:
      "a.csv.gz: expected a whole gzip file, as its name says, found incorrect header check; fetch or pack it again, or take the .gz off its name if it is not packed",
  },
  {
    name: "a file name that the pattern does not fit",
    files: { "Ash.csv": "day,rain\n2001-01-01,1\n" },
    options: long({ station: { name: "rain_{id}" } }),
    error:
      'Ash.csv: expected a file name like "rain_{id}", {id} being the station, found "Ash.csv"; change `station: { name: … }`, or narrow `files:` to the files that follow the pattern',
  },
  {
    name: "a unit nobody knows",
    files: { "a.csv": PLAIN },
    options: long({ series: { rain: { ...MM, unit: "buckets" } } }),
    error:
      'records[0].series.rain.unit: expected a unit of measurement, found "buckets"; write a unit such as degC, degF, K, mm, cm, in, m/s, km/h, hPa, Pa, W/m2, MJ/m2, percent, 1, days, mm/day, degC days',
  },
  {
    name: "the week-year slip in a date pattern",
    files: { "a.csv": PLAIN },
    options: long({ date: { column: "day", format: "YYYY-MM-DD", covers: "day" } }),
    error:
      'records[0].date.format: expected a date pattern of yyyy, MM, dd, D (day of the year), HH, mm, ss and separators, found "YYYY-MM-DD" (YYYY); write it like yyyy-MM-dd, dd.MM.yyyy, yyyyMMdd, yyyy-MM or yyyy D; letters are case-sensitive',
  },
];

describe("dialects: files as real sources write them", () => {
  test.each(CASES)("$name", holdCase);

  test("there are at least forty", () => expect(CASES.length).toBeGreaterThanOrEqual(40));
});
