import { z } from "zod";
import {
  choice,
  column,
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
      text("the pattern of dates, with yyyy, MM, dd, or D for the day of the year", "dd.MM.yyyy"),
      "yyyy-MM-dd",
    ),
    covers: stated(choice("what one row stands for", ["day", "month", "year", "dekad"]), "day"),
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

const longRecords = keys("records with a row per station and date", {
  layout: stated(word("the layout of the records", "long"), "long"),
  files: files("stations/lowland_*.csv"),
  station: oneOf(
    "where the station's identifier stands: { column: … }, { always: … } or { name: … } with {id}",
    [
      keys("a column of identifiers", { column: column("the station's identifier", "site") }),
      keys("the same station in every row", { always: text("the station's identifier", "050114") }),
      keys("the identifier in the file's name", {
        name: text("a pattern of file names with {id}", "station_{id}", /^[^\n]*\{id\}[^\n]*$/),
      }),
    ],
    { column: "site" },
  ),
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
        day: dayOffset,
        scale: scale(),
        trace: keys("a text that stands for an amount too small to measure", {
          text: text("the text", "T"),
          value: number("the value it is given, as if written in its place", 0.1),
        }).optional(),
        quality: keys("a column of quality flags", {
          column: column("the flags", "quality"),
          pass: someOf("the flags whose values pass", text("a flag", "A"), ["A"]),
        }).optional(),
        limits: pair(
          "the least and greatest possible value, in the column's unit",
          "the least possible value",
          "the greatest possible value",
          [-60, 60],
        ).optional(),
      },
      { column: "precip", unit: "mm", kind: "total" },
    ),
  ),
});

const wideRecords = keys("records with a row per date and a column per station", {
  layout: word("the layout of the records", "wide"),
  files: files("stations/wide.csv"),
  date,
  missing,
  variable: text("the name of the one variable", "rain"),
  unit: unit("the values"),
  kind: valueKind(),
  day: dayOffset,
  scale: scale(),
  columns: named(
    "the stations, by column",
    "the name of a column",
    text("the station's identifier", "050114"),
  ),
});

export const records = oneOf("station records, long or wide", [longRecords, wideRecords]);

const DATE_PART = /^[^\n]*\{[yMDd]+\}[^\n]*$/;

export const layer = keys("a stack of images", {
  files: files("layers/green_*.tif"),
  date: oneOf(
    "how the images are dated: { name: … }, { first: …, step: … } or { band: … }",
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
    ],
    { name: "green_{yyyy}_{MM}" },
  ),
  covers: text(
    "what one image stands for: day, month, year, dekad, or a number of days",
    "16 days",
    /^(?:day|month|year|dekad|[1-9]\d{0,2} days)$/,
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
