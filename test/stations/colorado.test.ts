import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { beforeAll, describe, expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import type { SeriesColumn } from "../../src/stations/options.ts";
import { readRecords } from "../../src/stations/read-records.ts";
import { readStationList } from "../../src/stations/station-list.ts";
import { effectsBelow } from "./memory-files.ts";

// Real records: 12 US cooperative stations in Colorado, monthly, 1948 to 1997 (National Center for Atmospheric Research).
const DATA = fileURLToPath(new URL("../data", import.meta.url));
const FILE = "colorado-monthly.csv";
const series = (column: string, unit: string, kind: SeriesColumn["kind"]): SeriesColumn => ({
  column,
  unit,
  kind,
  day: 0,
  scale: 1,
});
const COLUMNS: Readonly<Record<string, SeriesColumn>> = {
  rain: series("precipitation_cm", "cm", "total"),
  tmax: series("tmax_c", "degC", "maximum"),
  tmin: series("tmin_c", "degC", "minimum"),
};

let read: Awaited<ReturnType<typeof readRecords>>;
beforeAll(async () => {
  read = await readRecords(
    [
      {
        layout: "long",
        files: [FILE],
        station: { column: "station" },
        date: { column: "month", format: "yyyy-MM", covers: "month" },
        missing: [],
        series: COLUMNS,
      },
    ],
    undefined,
    { keep: "none", except: [] },
    effectsBelow(DATA),
  );
});

/** The file again by splitting at commas, month by month in the order of the file. */
function naive() {
  const [header, ...rows] = readFileSync(`${DATA}/${FILE}`, "utf8")
    .trim()
    .split("\n")
    .map((line) => line.split(","));
  const at = (name: string) => header.indexOf(name);
  const out = new Map<string, { cells: string[]; months: string[] }>();
  for (const row of rows)
    for (const [variable, { column }] of Object.entries(COLUMNS)) {
      const key = `${variable} at ${row[at("station")]}`;
      const one = out.get(key) ?? { cells: [], months: [] };
      one.cells.push(row[at(column)]);
      one.months.push(row[at("month")]);
      out.set(key, one);
    }
  return out;
}

describe("Colorado, monthly, 12 stations", () => {
  test("every value of every series is the one in the file", async () => {
    const { series: all, rows } = read;
    expect(rows).toBe(7200);
    expect(all.length).toBe(36);
    for (const [key, { cells, months }] of naive()) {
      const one = all.find(({ variable, site }) => `${variable} at ${site}` === key);
      expect(Array.from(one?.starts ?? [], (day) => isoDay(day).slice(0, 7))).toEqual(months);
      expect(Array.from(one?.values ?? [])).toEqual(
        cells.map((cell) => (cell === "" ? Number.NaN : Number(cell))),
      );
    }
  });

  test("missing months and runs between first and last value, by a naive count", async () => {
    const { findings } = read;
    let gaps = 0;
    for (const [key, { cells, months }] of naive()) {
      const first = cells.findIndex((cell) => cell !== "");
      const last = cells.findLastIndex((cell) => cell !== "");
      let [missing, count, longest, run, from] = [0, 0, 0, 0, ""];
      for (let i = first; i <= last; i++) {
        if (cells[i] !== "") {
          run = 0;
          continue;
        }
        missing++;
        run++;
        if (run === 1) count++;
        if (run > longest) [longest, from] = [run, months[i - run + 1]];
      }
      const told = findings.filter(({ kind, subject }) => kind === "gap" && subject === key);
      expect([key, told.length]).toEqual([key, missing === 0 ? 0 : 1]);
      if (missing === 0) continue;
      gaps++;
      expect([key, told[0].count]).toEqual([key, missing]);
      expect(told[0].message).toContain(` ${missing} month${missing === 1 ? "" : "s"} in ${count} run`);
      expect(told[0].message).toContain(
        `the longest is ${longest} month${longest === 1 ? "" : "s"}, ${from}`,
      );
    }
    expect(gaps).toBe(findings.length);
  });

  test("the totals, as figures counted by another program", async () => {
    const { findings } = read;
    const sum = (variable: string) =>
      findings
        .filter(({ subject }) => subject.startsWith(variable))
        .reduce((n, { count }) => n + (count ?? 1), 0);
    // Counted once in another language (Python's csv module), between first and last filled cell of each station.
    expect([sum("rain"), sum("tmax"), sum("tmin")]).toEqual([237, 235, 249]);
  });

  test("the file is no list of stations: one id repeats 600 times at one place", async () => {
    const list = {
      file: FILE,
      id: "station",
      longitude: "longitude",
      latitude: "latitude",
      elevation: "elevation_m",
    };
    const { sites, findings } = await readStationList(list, effectsBelow(DATA).files);
    expect(sites.length).toBe(12);
    expect(sites[0]).toEqual({
      id: "050114",
      name: "050114",
      longitude: -103.17,
      latitude: 40.12,
      elevation: 1398,
    });
    expect(findings.length).toBe(7200 - 12);
  });
});
