import { expect, test } from "vitest";
import { parsePipeline, pipelineProblems } from "../../src/spec/parse.ts";

const MONTHS = "[jan, feb, mar, apr, may, jun, jul, aug, sep, oct, nov, dec]";
const pipeline = (records: string, covariates: string) => `covey: 1
study: { title: t, sensitive: false, coarsen: 10 km }
data: data
output: out
seed: 1
occasions: { file: o.csv, name: visit, start: from, end: to }
places: { roost: { file: p.geojson, where: { name: roost } } }
stations: { file: list.csv, id: id }
records:
${records}
covariates:
${covariates}
`;
const HOURLY = (within: string, covers = "reading") => `  - files: [h.csv]
    station: { column: site, longitude: lon, latitude: lat }
    table: { delimiter: blanks, decimal: comma, encoding: utf-16le, header row: 3, header rows: 2, comment: "%", units row: false, sheet: 2 }
    date: { column: time, format: "yyyy-MM-dd HH:mm", covers: ${covers}${within} }
    series:
      rain: { column: value, unit: mm/h, kind: mean, only: { column: what, is: [RR] }, accumulated: { column: f, flags: [A], rule: drop } }`;
const CALENDAR = `  - files: [m.txt]
    layout: months across
    station: { always: Ash }
    date: { column: year, format: yyyy }
    variable: t
    unit: degC
    kind: mean
    limits: [-60, 50]
    columns: ${MONTHS}`;
const RAIN =
  "  - { name: winter rain, theme: rain, from: rain, stations: [Ash, Beck], join: JOIN, window: { season: Nov to Feb }, statistic: sum, unit: mm }";

test("how tables are written, readings within the day, columns across, rows that are meant", () => {
  const within =
    ', within day: { day ends: "07:30", stamped: end, add hours: -1.5, readings: 24, at least: 20 }';
  const spec = parsePipeline(
    pipeline(`${HOURLY(within)}\n${CALENDAR}`, RAIN.replace("JOIN", "mean of days")),
    "p.yaml",
  );
  expect(spec.records[0]).toMatchObject({
    station: { column: "site", longitude: "lon", latitude: "lat" },
    table: {
      delimiter: "blanks",
      decimal: "comma",
      encoding: "utf-16le",
      headerRow: 3,
      headerRows: 2,
      comment: "%",
      unitsRow: false,
      sheet: 2,
    },
    date: { covers: "reading", within: { ends: 450, stamped: "end", shift: -90, readings: 24, least: 20 } },
    series: {
      rain: {
        only: { column: "what", is: ["RR"] },
        accumulated: { column: "f", flags: ["A"], rule: "drop" },
      },
    },
  });
  expect(spec.records[1]).toMatchObject({ layout: "months across", variable: "t", limits: [-60, 50] });
  expect(spec.records[1]).not.toHaveProperty("table");
});

test("stations kept apart become covariates of their own, those behind them keep their place in the file", () => {
  const covariates = [
    RAIN.replace("JOIN", "apart"),
    RAIN.replace("JOIN", "mean of windows")
      .replace("winter rain", "near rain")
      .replace("unit", "weights: { near: roost }, unit"),
  ].join("\n");
  const { covariates: read } = parsePipeline(
    pipeline(HOURLY(", within day: { readings: 24 }"), covariates),
    "p.yaml",
  );
  expect(read).toMatchObject([
    { name: "winter rain at Ash", stations: ["Ash"], entry: 0 },
    { name: "winter rain at Beck", stations: ["Beck"], entry: 0 },
    { name: "near rain", stations: ["Ash", "Beck"], weights: { near: "roost", power: 2 }, entry: 1 },
  ]);
});

test.each([
  [
    "readings that are not told how they make days",
    HOURLY(""),
    RAIN.replace("JOIN", "mean of days"),
    'expected the key "within day" where one row is a reading, found no such key',
  ],
  [
    "days that are told how readings make them",
    HOURLY(", within day: { readings: 24 }", "day"),
    RAIN.replace("JOIN", "mean of days"),
    "expected readings within the day, found covers: day",
  ],
  [
    "eleven months",
    CALENDAR.replace(", dec", ""),
    RAIN.replace("JOIN", "mean of days").replace("from: rain", "from: t"),
    "records > #1 > columns",
  ],
  [
    "every station apart",
    HOURLY(", within day: { readings: 24 }"),
    RAIN.replace("JOIN", "apart").replace("[Ash, Beck]", "all"),
    "expected the names of stations that are kept apart",
  ],
  [
    "a covariate's variable without a unit",
    CALENDAR.replace("    unit: degC\n", ""),
    RAIN.replace("JOIN", "mean of days").replace("from: rain", "from: t"),
    'expected the key "unit"',
  ],
])("refused: %s", (_, records, covariates, told) => {
  const problems = pipelineProblems(pipeline(records, covariates), "p.yaml").map(
    ({ expected, found, where }) => `${where?.cell ?? ""}: expected ${expected}, found ${found}`,
  );
  expect(problems.join("\n")).toContain(told);
});
