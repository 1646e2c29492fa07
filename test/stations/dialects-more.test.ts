import { readFileSync } from "node:fs";
import { gzipSync } from "node:zlib";
import iconv from "iconv-lite";
import { describe, test } from "vitest";
import type { CalendarRecords, WithinDay } from "../../src/stations/options.ts";
import { type Case, holdCase, long, MM, wide } from "./dialect-case.ts";

const sheet = (name: string) => readFileSync(new URL(`../data/sheets/${name}`, import.meta.url));
const T = { column: "t", unit: "degC", kind: "mean", day: 0, scale: 1 } as const;
const MONTHS = ["jan", "feb", "mar", "apr", "may", "jun", "jul", "aug", "sep", "oct", "nov", "dec"];
const DAYS = Array.from({ length: 31 }, (_, i) => String(i + 1));
const calendar = (over: Partial<CalendarRecords> = {}): CalendarRecords => ({
  layout: "months across",
  files: ["*"],
  station: { always: "Ash" },
  date: { column: "year", format: "yyyy", covers: "day" },
  missing: [],
  variable: "rain",
  unit: "mm",
  kind: "total",
  day: 0,
  scale: 1,
  columns: MONTHS,
  ...over,
});
const within = (over: Partial<WithinDay> = {}): WithinDay => ({
  ends: 0,
  stamped: "start",
  shift: 0,
  readings: 2,
  least: 2,
  ...over,
});
const readings = (rule: WithinDay, format = "yyyy-MM-dd HH:mm") => ({
  date: { column: "time", format, covers: "reading", within: rule } as const,
  station: { always: "Ash" } as const,
});

const CASES: readonly Case[] = [
  {
    name: "an Excel sheet by name: title, two header rows with merged cells, real dates, a formula's result",
    files: { "daily.xlsx": sheet("daily.xlsx") },
    options: wide({
      date: { column: "Day", format: "dd.MM.yyyy", covers: "day" },
      table: { sheet: "Daily", headerRows: 2 },
      columns: { "Rain (mm) Ash": "Ash", "Rain (mm) Beck": "Beck" },
    }),
    rows: [
      "Ash 2001-02-28 1.5",
      "Ash 2001-03-01 3",
      "Ash 2001-03-02 NaN",
      "Beck 2001-02-28 0",
      "Beck 2001-03-01 2",
      "Beck 2001-03-02 4",
    ],
    findings: ["bad-value daily.xlsx:6 1 n/a"],
  },
  {
    name: "an Excel sheet by number, whose dates and ids are texts",
    files: { "daily.xlsx": sheet("daily.xlsx") },
    options: long({ table: { sheet: 2 } }),
    rows: ["007 2001-01-01 3", "007 2001-01-02 4"],
    findings: [],
  },
  {
    name: "an Excel sheet that counts its days from 1904, with times",
    files: { "hours-1904.xlsx": sheet("hours-1904.xlsx") },
    options: long({ ...readings(within({ readings: 4, least: 4 })), series: { t: T } }),
    rows: ["Ash 2001-07-01 19"],
    findings: [],
  },
  {
    name: "a sheet that is not there",
    files: { "daily.xlsx": sheet("daily.xlsx") },
    options: long({ table: { sheet: "Rain" } }),
    error:
      'daily.xlsx: expected a sheet named "Rain", found the sheets "Daily", "Sites"; write the name of one of them, or its number from 1, as `table: { sheet: … }`',
  },
  {
    name: "Excel in name only",
    files: { "a.xlsx": "site,day,rain\n" },
    error:
      "a.xlsx: expected an Excel workbook (.xlsx), found Doesn't look like an `.xlsx` file; save it again as .xlsx, or as CSV",
  },
  {
    name: "months across, parted by blanks, with a remark above, a mark for missing and a column of totals",
    files: {
      "a.txt":
        "Monthly rain at Ash, written for the year\n  year  jan feb mar apr may jun jul aug sep oct nov dec  ann\n  2000  1 2.5 3 4 5 6 7 8 9 10 11 12 78.5\n  2001  1 --- 3 4 5 6 7 8 9 10 11 12 ---\n",
    },
    options: calendar({ missing: ["---"] }),
    rows: [2000, 2001].flatMap((year) =>
      MONTHS.map((_, i) => {
        const end = new Date(Date.UTC(year, i + 1, 0)).toISOString().slice(0, 10);
        const value = i === 1 ? (year === 2000 ? 2.5 : Number.NaN) : i + 1;
        return `Ash ${end.slice(0, 8)}01..${end} ${value}`;
      }),
    ),
    findings: ["gap a.txt:4 1 2001-02"],
  },
  {
    name: "days across: a row per month and element, 31 columns, a value on 31 April",
    files: {
      "a.csv": `site,yr,mo,element,${DAYS.join(",")}\nAsh,2001,4,PRCP,${DAYS.join(",")}\nAsh,2001,4,TMAX,${DAYS.map(() => "99").join(",")}\n`,
    },
    options: calendar({
      layout: "days across",
      station: { column: "site" },
      date: { column: "yr", with: ["mo"], format: "yyyy M", covers: "day" },
      columns: DAYS,
      only: { column: "element", is: ["PRCP"] },
    }),
    rows: DAYS.slice(0, 30).map((day) => `Ash 2001-04-${day.padStart(2, "0")} ${day}`),
    findings: ["bad-date a.csv:2 1 31"],
  },
  {
    name: "a row per date and element, told apart by a column",
    files: {
      "a.csv":
        "site,day,element,value\nAsh,2001-01-01,RAIN,1\nAsh,2001-01-01,TEMP,-3.5\nAsh,2001-01-02,RAIN,2\nAsh,2001-01-02,TEMP,-4\n",
    },
    options: long({
      series: {
        rain: { ...MM, column: "value", only: { column: "element", is: ["RAIN"] } },
        t: { ...T, column: "value", only: { column: "element", is: ["TEMP"] } },
      },
    }),
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 2", "Ash 2001-01-01 -3.5", "Ash 2001-01-02 -4"],
    findings: [],
  },
  {
    name: "comments between the rows, with the separator in some and a quote in others",
    files: {
      "a.csv":
        'site,day,rain\nAsh,2001-01-01,1\n# gauge "moved, they say\nAsh,2001-01-02,2\n# a, b, c\n#\nAsh,2001-01-03,x\n',
    },
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 2", "Ash 2001-01-03 NaN"],
    findings: ["bad-value a.csv:7 1 x"],
  },
  {
    name: "a comment mark that is stated, in Latin-1",
    files: {
      "a.csv": iconv.encode(
        "site;day;rain\nÄsch;2001-01-01;1,5\n% für später\nÄsch;2001-01-02;2\n",
        "latin1",
      ),
    },
    options: long({ table: { comment: "%" } }),
    rows: ["Äsch 2001-01-01 1.5", "Äsch 2001-01-02 2"],
    findings: [],
  },
  {
    name: "a quotation mark within a cell, the same in UTF-8",
    files: { "a.csv": 'site,day,rain\nÄsch,2001-01-01,1\nÄsch"4,2001-01-02\nÄsch,2001-01-03,3\n' },
    rows: ["Äsch 2001-01-01 1", "Äsch 2001-01-03 3"],
    findings: ['bad-value a.csv:3 1 Äsch"4,2001-01-02', "gap a.csv:2 1 2001-01-02"],
  },
  {
    name: "a quotation mark within a cell, the same in Latin-1",
    files: {
      "a.csv": iconv.encode(
        'site,day,rain\nÄsch,2001-01-01,1\nÄsch"4,2001-01-02\nÄsch,2001-01-03,3\n',
        "latin1",
      ),
    },
    rows: ["Äsch 2001-01-01 1", "Äsch 2001-01-03 3"],
    findings: ['bad-value a.csv:3 1 Äsch"4,2001-01-02', "gap a.csv:2 1 2001-01-02"],
  },
  {
    name: "a quotation mark that is never closed, in Latin-1",
    files: {
      "a.csv": iconv.encode(
        'site,day,rain\nÄsch,2001-01-01,1\n"Äsch,2001-01-02,2\nÄsch,2001-01-03,3\n',
        "latin1",
      ),
    },
    error:
      "a.csv:3: expected quotation marks in pairs, found a quotation mark that is never closed, here or below; close it, or take it away",
  },
  {
    name: "no comment, though a station's name begins with the mark",
    files: { "a.csv": "site,day,rain\n#1,2001-01-01,1\n#1,2001-01-02,2\n" },
    options: long({ table: { comment: "none" } }),
    rows: ["#1 2001-01-01 1", "#1 2001-01-02 2"],
    findings: [],
  },
  {
    name: "delimiter, decimal and header row that are stated against the guess",
    files: { "a.csv": "site,day,rain\nsite|day|rain\nAsh|2001-01-01|1,234\nAsh|2001-01-02|2,5\n" },
    options: long({ table: { delimiter: "bar", decimal: "comma", headerRow: 2 } }),
    rows: ["Ash 2001-01-01 1.234", "Ash 2001-01-02 2.5"],
    findings: [],
  },
  {
    name: "an encoding that is stated: UTF-16 without a byte order mark",
    files: { "a.csv": iconv.encode("site,day,rain\nÄsch,2001-01-01,1\n", "utf-16le") },
    options: long({ table: { encoding: "utf-16le" } }),
    rows: ["Äsch 2001-01-01 1"],
  },
  {
    name: "words below the header that are stated to be no units",
    files: { "a.csv": "site,day,rain\nAsh,first of May,none\nAsh,2001-01-02,2\n" },
    options: long({ table: { unitsRow: false }, missing: ["none"] }),
    rows: ["Ash 2001-01-02 2"],
    findings: ["bad-date a.csv:2 1 first of May"],
  },
  {
    name: "a row of units parted by blanks, shorter than the header",
    files: {
      "a.txt":
        "  yyyy  mm   rain   t\n              mm  degC\n  2001   1    5.5   1.5\n  2001   2    6.5   2.5\n",
    },
    options: long({
      station: { always: "Ash" },
      date: { column: "yyyy", with: ["mm"], format: "yyyy M", covers: "month" },
    }),
    rows: ["Ash 2001-01-01..2001-01-31 5.5", "Ash 2001-02-01..2001-02-28 6.5"],
    findings: [],
  },
  {
    name: "readings at 07:00 and 19:00 whose rain day ends at 07:00: the reading at 07:00 closes the day before",
    files: {
      "a.csv":
        "time,rain\n2001-01-01 19:00,1\n2001-01-02 07:00,2\n2001-01-02 19:00,4\n2001-01-03 07:00,8\n2001-01-03 19:00,16\n",
    },
    options: long(readings(within({ ends: 420, stamped: "end" }))),
    rows: ["Ash 2001-01-01 3", "Ash 2001-01-02 12", "Ash 2001-01-03 NaN"],
    findings: ["part-day a.csv:6 1 16"],
  },
  {
    name: "a day that ends at 18:00 is named after the date that holds most of it, over two files",
    files: {
      "a.csv": "time,rain\n2000-12-31 18:00,1\n",
      "b.csv": "time,rain\n2001-01-01 17:59,2\n2001-01-01 18:00,4\n",
    },
    options: long(readings(within({ ends: 1080, least: 1 }))),
    rows: ["Ash 2001-01-01 3", "Ash 2001-01-02 8"],
    findings: ["part-day b.csv:3 1 4"],
  },
  {
    name: "times in UTC moved to the clock of the place, means and maxima",
    files: {
      "a.csv":
        "time;t\n2001-06-30T23:00Z;10\n2001-07-01T12:00Z;20\n2001-07-01T23:00Z;30\n2001-07-02T10:00+00:00;40\n",
    },
    options: long({
      ...readings(within({ shift: 60 }), "yyyy-MM-dd'T'HH:mmXXX"),
      series: { t: T, tx: { ...T, kind: "maximum" } },
    }),
    rows: ["Ash 2001-07-01 15", "Ash 2001-07-02 35", "Ash 2001-07-01 20", "Ash 2001-07-02 40"],
    findings: [],
  },
  {
    name: "an hour that is written twice when clocks are put back",
    files: {
      "a.csv": "time,rain\n2001-10-28 02:00,1\n2001-10-28 02:00,3\n2001-10-28 14:00,5\n2001-10-28 14:00,5\n",
    },
    options: long(readings(within())),
    rows: ["Ash 2001-10-28 6"],
    findings: ["duplicate a.csv:3 1 3", "duplicate a.csv:5 1 5"],
  },
  {
    name: "a total of three days, spread over them",
    files: {
      "a.csv":
        "site,day,rain,f\nAsh,2001-01-01,1,\nAsh,2001-01-02,,\nAsh,2001-01-04,9,A\nAsh,2001-01-05,2,\n",
    },
    options: long({
      series: { rain: { ...MM, accumulated: { column: "f", flags: ["A"], rule: "spread" } } },
    }),
    rows: [
      "Ash 2001-01-01 1",
      "Ash 2001-01-02 3",
      "Ash 2001-01-03 3",
      "Ash 2001-01-04 3",
      "Ash 2001-01-05 2",
    ],
    findings: ["accumulated a.csv:4 1 9"],
  },
  {
    name: "a total of three days, dropped",
    files: { "a.csv": "site,day,rain,f\nAsh,2001-01-01,1,\nAsh,2001-01-04,9,A\nAsh,2001-01-05,2,\n" },
    options: long({ series: { rain: { ...MM, accumulated: { column: "f", flags: ["A"], rule: "drop" } } } }),
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-04 NaN", "Ash 2001-01-05 2"],
    findings: ["accumulated a.csv:3 1 9", "gap a.csv:2 3 2001-01-02 to 2001-01-04"],
  },
  {
    name: "a total of three days, kept as written",
    files: {
      "a.csv": "site,day,rain,f\nAsh,2001-01-01,1,\nAsh,2001-01-02,,\nAsh,2001-01-03,,\nAsh,2001-01-04,9,A\n",
    },
    options: long({ series: { rain: { ...MM, accumulated: { column: "f", flags: ["A"], rule: "keep" } } } }),
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 NaN", "Ash 2001-01-03 NaN", "Ash 2001-01-04 9"],
    findings: ["accumulated a.csv:5 1 9", "gap a.csv:2 2 2001-01-02 to 2001-01-03"],
  },
  {
    name: "a total at the very beginning has no days to be spread over",
    files: { "a.csv": "site,day,rain,f\nAsh,2001-01-04,9,A\nAsh,2001-01-05,2,\n" },
    options: long({
      series: { rain: { ...MM, accumulated: { column: "f", flags: ["A"], rule: "spread" } } },
    }),
    rows: ["Ash 2001-01-04 NaN", "Ash 2001-01-05 2"],
    findings: ["accumulated a.csv:2 1 9"],
  },
  {
    name: "a station that moves within its file",
    files: {
      "a.csv":
        "site,day,rain,lon,lat\nAsh,2001-01-01,1,10.1,47.5\nAsh,2001-01-02,2,10.1000,47.5\nAsh,2001-01-03,3,10.2,47.5\nAsh,2001-01-04,4,10.2,47.5\n",
    },
    options: long({ station: { column: "site", longitude: "lon", latitude: "lat" } }),
    rows: ["Ash 2001-01-01 1", "Ash 2001-01-02 2", "Ash 2001-01-03 3", "Ash 2001-01-04 4"],
    findings: ["moved a.csv:4 2 10.2, 47.5"],
  },
  {
    name: "names of months, years in front, time read over",
    files: { "a.csv": "site,day,rain\nAsh,05-Jan-2001,1\nAsh,06-JAN-2001,2\n" },
    options: long({ date: { column: "day", format: "dd-MMM-yyyy", covers: "day" } }),
    rows: ["Ash 2001-01-05 1", "Ash 2001-01-06 2"],
  },
  {
    name: "years and days of the year in columns of their own",
    files: { "a.csv": "site,year,doy,rain\nAsh,2000,366,1\nAsh,2001,365,2\nAsh,2001,366,3\n" },
    options: long({ date: { column: "year", with: ["doy"], format: "yyyy D", covers: "day" } }),
    rows: ["Ash 2000-12-31 1", "Ash 2001-12-31 2"],
    findings: ["bad-date a.csv:4 1 2001 366", "gap a.csv:2 364 2001-01-01 to 2001-12-30"],
  },
  {
    name: "digits parted by underscores are no number, packed or not",
    files: { "a.csv.gz": gzipSync("site,day,rain\nAsh,2001-01-01,1_000\nAsh,2001-01-02,2\n") },
    rows: ["Ash 2001-01-01 NaN", "Ash 2001-01-02 2"],
    findings: ["bad-value a.csv.gz:2 1 1_000"],
  },
  {
    name: "a station called like the mark for a missing value",
    files: { "a.csv": "site,day,rain\nNA,2001-01-01,NA\nNA,2001-01-02,2\n" },
    options: long({ missing: ["NA"] }),
    rows: ["NA 2001-01-01 NaN", "NA 2001-01-02 2"],
    findings: [],
  },
];

describe("more dialects: sheets, calendars, readings within the day, stated against guessed", () => {
  test.each(CASES)("$name", holdCase);
});
