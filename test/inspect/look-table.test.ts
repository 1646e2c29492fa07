import { fileURLToPath } from "node:url";
import iconv from "iconv-lite";
import { describe, expect, test } from "vitest";
import { parse } from "yaml";
import { isoDay } from "../../src/data/day.ts";
import { lookTable } from "../../src/inspect/look-table.ts";
import { yamlText } from "../../src/inspect/stanza.ts";
import { effectsBelow, folder } from "../stations/memory-files.ts";

const look = (text: string | Uint8Array, name = "stations/a.csv") =>
  lookTable(name, folder({ [name]: text }).files);
const day = (i: number) => isoDay(11_323 + i);

describe("a table of records", () => {
  test("Colorado (real monthly records): columns, dates, gaps and a stanza", async () => {
    const data = fileURLToPath(new URL("../data", import.meta.url));
    const seen = await lookTable("colorado-monthly.csv", effectsBelow(data).files);
    expect([seen.kind, seen.rows, seen.delimiter, seen.decimal, seen.encoding]).toEqual([
      "records",
      7200,
      ",",
      ".",
      "utf-8",
    ]);
    const month = seen.columns.find(({ name }) => name === "month");
    expect([month?.role, month?.formats, month?.spacing]).toEqual(["date", ["yyyy-MM"], "month"]);
    expect([isoDay(month?.first ?? 0), isoDay(month?.last ?? 0)]).toEqual(["1948-01-01", "1997-12-01"]);
    // Counted in the file by a short program in another language (csv module): cells filled, empty, extremes.
    const rain = seen.columns.find(({ name }) => name === "precipitation_cm");
    expect([rain?.type, rain?.role, rain?.count, rain?.empty, rain?.least, rain?.greatest]).toEqual([
      "number",
      "value",
      6899,
      301,
      0,
      23.4,
    ]);
    expect(rain?.mean).toBeCloseTo(3.6434120887084935, 12);
    expect(seen.findings.filter(({ kind }) => kind === "gap").length).toBe(31);
    expect(parse(seen.stanza).records[0]).toMatchObject({
      files: ["colorado-monthly.csv"],
      station: { column: "station" },
      date: { column: "month", format: "yyyy-MM", covers: "month" },
      series: {
        rain: { column: "precipitation_cm", unit: "cm", kind: "total" },
        tmax: { column: "tmax_c", unit: "degC", kind: "maximum" },
        tmin: { column: "tmin_c", unit: "degC", kind: "minimum" },
      },
    });
  });

  test("a semicolon table in Latin-1 with a sentinel, a repeated text and a remark: missing values are proposed", async () => {
    const rows = Array.from({ length: 40 }, (_, i) => {
      const rain = i === 5 ? "-9999" : i === 6 || i === 9 ? "k.A." : `${i % 7},5`;
      return `Mühle;${day(i).split("-").reverse().join(".")};${rain}\n`;
    });
    const seen = await look(iconv.encode(`Niederschlag in mm\nsite;datum;rain\n${rows.join("")}`, "latin1"));
    expect([seen.encoding, seen.delimiter, seen.decimal, seen.headerLine, seen.kind]).toEqual([
      "windows-1252",
      ";",
      ",",
      2,
      "records",
    ]);
    expect(seen.columns[2].suspicious).toEqual([
      { text: "k.A.", count: 2 },
      { text: "-9999", count: 1 },
    ]);
    expect([seen.columns[2].least, seen.columns[2].greatest]).toEqual([0.5, 6.5]);
    const [records] = parse(seen.stanza).records;
    expect(records.date).toEqual({ column: "datum", format: "dd.MM.yyyy", covers: "day" });
    expect(records.missing).toEqual(["k.A.", -9999]);
    expect(seen.findings.find(({ kind }) => kind === "sentinel")?.where).toEqual({
      file: "stations/a.csv",
      line: 8,
    });
  });

  test("wide tables, one file per station, dates that do not tell", async () => {
    const wide = await look(
      `day,Ash,Beck\n${Array.from({ length: 5 }, (_, i) => `${day(i)},${i},2\n`).join("")}`,
    );
    expect([wide.kind, parse(wide.stanza).records[0].columns]).toEqual([
      "wide records",
      { Ash: "Ash", Beck: "Beck" },
    ]);
    const own = await look("date,RR\n01/02/2001,1\n03/04/2001,2\n", "upland.csv");
    expect(parse(own.stanza).records[0].station).toEqual({ always: "upland" });
    expect(own.stanza).toContain("format: dd/MM/yyyy, covers: day }  # or MM/dd/yyyy: the dates do not tell");
  });
});

describe("other tables", () => {
  test("captures, dated", async () => {
    const rows = Array.from(
      { length: 12 },
      (_, i) => `A${i},2001-07-${20 + (i % 3)},${i % 2 ? "f" : "m"},${i === 3 ? "died" : ""}\n`,
    );
    const seen = await look(`ring,date,sex,fate\n${rows.join("")}`, "captures.csv");
    expect([seen.kind, seen.findings]).toEqual(["captures", []]);
    expect(parse(seen.stanza).captures).toEqual({
      file: "captures.csv",
      layout: "dated",
      animal: "ring",
      date: "date",
      strata: ["sex"],
      lost: { column: "fate", values: ["died"] },
    });
  });

  test("captures as zeros and ones", async () => {
    const seen = await look("ring,2001,2002,2003,sex\nA,1,0,1,f\nB,0,1,1,m\nC,1,0,0,f\n", "history.csv");
    expect(parse(seen.stanza).captures).toEqual({
      file: "history.csv",
      layout: "zero-one",
      animal: "ring",
      columns: ["2001", "2002", "2003"],
      strata: ["sex"],
    });
  });

  test("occasions and the list of stations", async () => {
    const visits = await look(
      "visit,from,to,net_hours\n1999,1999-07-20,1999-07-24,12\n2000,2000-07-21,2000-07-23,9\n",
      "o.csv",
    );
    expect(parse(visits.stanza).occasions).toEqual({
      file: "o.csv",
      name: "visit",
      start: "from",
      end: "to",
      effort: "net_hours",
    });
    const list = await look(
      "id,name,lon,lat,elevation\n1,Ash,8.1,50.2,120\n2,Beck,8.3,50.1,480\n",
      "list.csv",
    );
    expect(parse(list.stanza).stations).toEqual({
      file: "list.csv",
      id: "id",
      name: "name",
      longitude: "lon",
      latitude: "lat",
      elevation: "elevation",
    });
  });

  test("a table of something else says so; an empty one is an error", async () => {
    const seen = await look("a,b\nx,y\nz,w\n");
    expect([seen.kind, seen.stanza]).toEqual([
      "unknown",
      "# neither records nor captures, occasions or stations were recognised in this file\n",
    ]);
    await expect(look("")).rejects.toThrow(
      "stations/a.csv:1: expected a header row and rows of data, found an empty file",
    );
  });
});

test("names come back from YAML as the texts they are", () => {
  for (const text of [
    "rain",
    "no",
    "007",
    "1.5",
    "a: b",
    "#x",
    "Höhe",
    "two words",
    "true",
    "",
    " x",
    "it's",
    "- a",
    "1e3",
    "~",
  ])
    expect(parse(`key: ${yamlText(text)}`).key).toBe(text);
});
