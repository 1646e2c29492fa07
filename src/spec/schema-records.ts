import { z } from "zod";
import {
  choice,
  column,
  flag,
  inputPath,
  keys,
  list,
  named,
  number,
  oneOf,
  pair,
  someOf,
  stated,
  text,
  word,
} from "./words.ts";

export const unit = (what: string) => text(`the unit of ${what}, "1" for a plain number`, "mm");
export const valueKind = () =>
  choice("how a value stands for its period", ["total", "mean", "minimum", "maximum"]);

export const stationList = keys("the table of stations, a row each", {
  file: inputPath("the CSV file of stations", "stations/list.csv"),
  id: column("the station's identifier", "id"),
  name: column("the station's name", "name").optional(),
  longitude: column("the longitude in WGS 84 degrees", "lon").optional(),
  latitude: column("the latitude in WGS 84 degrees", "lat").optional(),
  elevation: column("the elevation in metres", "elev").optional(),
});

const files = (example: string) =>
  someOf(
    "the files, as a list of paths or patterns below `data`",
    text("a path or pattern of files", example),
    [example],
  );

const CLOCK = /^(?:[01]\d|2[0-4]):[0-5]\d$/;

const withinDay = keys(
  "how readings within the day become one value per day",
  {
    "day ends": stated(text("when a day ends, by the clock of the records", "07:00", CLOCK), "00:00"),
    stamped: stated(
      choice("whether a time is that of the beginning or of the end of what was measured", ["start", "end"]),
      "start",
    ),
    "add hours": stated(
      number("hours added to every written time first, e.g. from UTC to the local time", 1, {
        min: -24,
        max: 24,
      }),
      0,
    ),
    readings: number("the number of readings that make a whole day", 24, {
      min: 1,
      max: 86_400,
      whole: true,
    }),
    "at least": number("the fewest readings of a day that counts; all, if left out", 20, {
      min: 1,
      max: 86_400,
      whole: true,
    }).optional(),
  },
  { "day ends": "07:00", readings: 24 },
);

const date = keys(
  "the column of dates",
  {
    column: column("the date", "day"),
    with: someOf(
      "further columns of a date that is split, joined to the first by blanks",
      text("the name of a column", "month"),
      ["month", "day"],
    ).optional(),
    format: stated(
      text(
        "the pattern of dates, with yyyy, MM (MMM: Jan), dd, D for the day of the year, HH:mm",
        "dd.MM.yyyy",
      ),
      "yyyy-MM-dd",
    ),
    covers: stated(choice("what one row stands for", ["day", "month", "year", "dekad", "reading"]), "day"),
    "within day": withinDay.optional(),
  },
  { column: "day", format: "yyyy-MM-dd", covers: "day" },
);

const missing = stated(
  list(
    "values that mean missing, as they are written",
    oneOf("a number or text that means missing", [z.number(), text("text that means missing", "NA")]),
    [-9999],
  ),
  [],
);

const dayOffset = stated(
  number("the days to add to the written date, -1 where a morning reading belongs to the day before", -1, {
    min: -31,
    max: 31,
    whole: true,
  }),
  0,
);
const scale = () => stated(number("what each value is multiplied by before its unit is read", 0.1), 1);

const table = keys(
  "how the tables are written, where the guess from their first lines does not hold",
  {
    delimiter: choice("what parts the cells", ["comma", "semicolon", "tab", "bar", "blanks"]).optional(),
    decimal: choice("the decimal mark", ["point", "comma"]).optional(),
    encoding: choice("the encoding", ["utf-8", "utf-16le", "utf-16be", "windows-1252"]).optional(),
    "header row": number("the line, or row of a sheet, of the header", 3, {
      min: 1,
      max: 500,
      whole: true,
    }).optional(),
    "header rows": number("how many rows the header has; they are joined by blanks", 2, {
      min: 1,
      max: 5,
      whole: true,
    }).optional(),
    comment: text("what lines of comment begin with, none if no line is one", "#").optional(),
    "units row": flag("whether a row of units stands below the header, true or false").optional(),
    sheet: oneOf("the sheet of an Excel file", [
      number("its number", 1, { min: 1, max: 10_000, whole: true }),
      text("its name", "Daily"),
    ]).optional(),
  },
  { delimiter: "semicolon" },
);

const only = keys("a column that tells which rows are meant", {
  column: column("what each row holds", "element"),
  is: someOf("the texts of the rows that are meant", text("a text", "PRCP"), ["PRCP"]),
});

/** How the values of one variable are read, wherever they stand. */
const reading = {
  day: dayOffset,
  scale: scale(),
  trace: keys("a text that stands for an amount too small to measure", {
    text: text("the text", "T"),
    value: number("the value it is given, as if written in its place", 0.1),
  }).optional(),
  limits: pair(
    "the least and greatest possible value, in the column's unit",
    "the least possible value",
    "the greatest possible value",
    [-60, 60],
  ).optional(),
  only: only.optional(),
};

const station = oneOf(
  "where the station's identifier stands: { column: … }, { always: … } or { name: … } with {id}",
  [
    keys("a column of identifiers", {
      column: column("the station's identifier", "site"),
      longitude: column("the station's longitude, which must not change", "lon").optional(),
      latitude: column("the station's latitude, which must not change", "lat").optional(),
    }),
    keys("the same station in every row", { always: text("the station's identifier", "050114") }),
    keys("the identifier in the file's name", {
      name: text("a pattern of file names with {id}", "station_{id}", /^[^\n]*\{id\}[^\n]*$/),
    }),
  ],
  { column: "site" },
);

const longRecords = keys("records with a row per station and date", {
  layout: stated(word("the layout of the records", "long"), "long"),
  files: files("stations/lowland_*.csv"),
  table: table.optional(),
  station,
  date,
  missing,
  series: named(
    "the variables, each with its column",
    "the name of a variable",
    keys(
      "a variable's column, unit and kind",
      {
        column: column("the variable's values", "precip"),
        unit: unit("the column"),
        kind: valueKind(),
        ...reading,
        quality: keys("a column of quality flags", {
          column: column("the flags", "quality"),
          pass: someOf("the flags whose values pass", text("a flag", "A"), ["A"]),
        }).optional(),
        accumulated: keys("totals that stand for all days since the last value", {
          column: column("the flags that mark them", "flag"),
          flags: someOf("the flags", text("a flag", "A"), ["A"]),
          rule: choice("what becomes of such a total", ["spread", "drop", "keep"]),
        }).optional(),
      },
      { column: "precip", unit: "mm", kind: "total" },
    ),
  ),
});

const wideRecords = keys("records with a row per date and a column per station", {
  layout: word("the layout of the records", "wide"),
  files: files("stations/wide.csv"),
  table: table.optional(),
  date,
  missing,
  variable: text("the name of the one variable", "rain"),
  unit: unit("the values"),
  kind: valueKind(),
  ...reading,
  columns: named(
    "the stations, by column",
    "the name of a column",
    text("the station's identifier", "050114"),
  ),
});

const calendar = (layout: "months across" | "days across", count: number, what: string, example: string[]) =>
  keys(what, {
    layout: word("the layout of the records", layout),
    files: files("stations/monthly.txt"),
    table: table.optional(),
    station,
    date,
    missing,
    variable: text("the name of the one variable", "rain"),
    unit: unit("the values"),
    kind: valueKind(),
    ...reading,
    columns: tellColumns(count, example),
  });

const tellColumns = (count: number, example: string[]) =>
  z
    .array(text("the name of a column", example[0]))
    .length(count)
    .meta({ description: `the ${count} columns in the order of the calendar`, examples: [example] });

const monthColumns = calendar("months across", 12, "records with a row per year and a column per month", [
  "jan",
  "feb",
]);
const dayColumns = calendar("days across", 31, "records with a row per month and a column per day", [
  "1",
  "2",
]);

export const records = oneOf("station records: long, wide, months across or days across", [
  longRecords,
  wideRecords,
  monthColumns,
  dayColumns,
]);

const DATE_PART = /^[^\n]*\{[yMDd]+\}[^\n]*$/;

const imageDates = () =>
  oneOf(
    "how the images are dated: { name: … }, { first: …, step: … }, { band: … }, { table: … } or { axis: time }",
    [
      keys("dates in the names of the files", {
        name: text(
          "a pattern of file names with {yyyy}, {MM}, {dd} or {DDD}",
          "green_{yyyy}_{MM}",
          DATE_PART,
        ),
      }),
      keys("one file with a band per step", {
        first: text("the first band's date", "2001-01", /^\d{4}(?:-\d{2}(?:-\d{2})?)?$/),
        step: choice("the time from one band to the next", ["day", "month", "year"]),
      }),
      keys("dates in the descriptions of the bands", {
        band: text(
          "a pattern of band descriptions with {yyyy}, {MM}, {dd} or {DDD}",
          "{yyyy}-{MM}",
          DATE_PART,
        ),
      }),
      keys("dates in a table with a row for each file", {
        table: inputPath("the CSV file", "layers/dates.csv"),
        file: column("the file's name, with or without its folder and ending", "file"),
        first: column("the first day it stands for, yyyy-MM-dd", "first"),
        last: column("the last day it stands for; without it, covers says how long", "last").optional(),
      }),
      keys("dates on the time axis of a NetCDF file", {
        axis: word("the axis that holds the dates", "time"),
      }),
    ],
    { name: "green_{yyyy}_{MM}" },
  );

const quality = keys(
  "quality numbers on the same grid, which say pixel by pixel what counts",
  {
    files: files("layers/quality_*.tif").optional(),
    date: imageDates().optional(),
    band: number("the band with the quality numbers, from 1", 2, {
      min: 1,
      max: 10_000,
      whole: true,
    }).optional(),
    variable: text("the variable with the quality numbers, in NetCDF files", "quality").optional(),
    pass: someOf(
      "what lets a pixel pass; all must hold",
      keys(
        "bits and the values that pass",
        {
          bits: text(
            "the bits, from 0 for the lowest: 2, or 0 to 1; the whole number if left out",
            "0 to 1",
            /^\d{1,2}(?: to \d{1,2})?$/,
          ).optional(),
          values: someOf("the values that pass", number("a value", 0, { min: 0, whole: true }), [0, 1]),
        },
        { bits: "0 to 1", values: [0, 1] },
      ),
    ),
  },
  { files: ["layers/quality_*.tif"], pass: [{ bits: "0 to 1", values: [0, 1] }] },
);

export const layer = keys("a stack of images", {
  files: files("layers/green_*.tif"),
  date: imageDates(),
  covers: text(
    "what one image stands for: day, month, year, dekad, a number of days, which may start anew each year, or bounds (those of the file's time axis)",
    "16 days",
    /^(?:day|month|year|dekad|bounds|[1-9]\d{0,2} days(?: anew each year)?)$/,
  ),
  scale: number("what raw values are multiplied by, instead of what the file says", 0.0001).optional(),
  offset: number("what is added after the scale, instead of what the file says", 0).optional(),
  fill: number("the raw value that means missing, beside the file's own", -3000).optional(),
  valid: pair(
    "the least and greatest valid value, after scale and offset",
    "the least valid value",
    "the greatest valid value",
    [-0.2, 1],
  ).optional(),
  band: number("which band of files with several, from 1", 1, {
    min: 1,
    max: 10_000,
    whole: true,
  }).optional(),
  variable: text("which variable of NetCDF files with several", "pr").optional(),
  select: named(
    "which entry of each further dimension of a NetCDF variable",
    "the name of a dimension",
    oneOf("the coordinate's value, or a name", [z.number(), text("a name", "r1i1p1f1")], 850),
  ).optional(),
  quality: quality.optional(),
  network: choice("whether files at http addresses may be read; not if left out", ["allow"]).optional(),
  unit: unit("the layer"),
  kind: valueKind(),
  system: text("the coordinate system, where the file does not say it", "EPSG:32632").optional(),
});

export const readyMade = keys("a table of values that already stand one per interval", {
  file: inputPath("the CSV file", "intervals.csv"),
  interval: column("the interval's name", "interval"),
  columns: named(
    "the columns to use",
    "the name of a column",
    keys("the column's unit", { unit: unit("the column") }, { unit: "1" }),
  ),
});
