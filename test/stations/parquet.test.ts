import { join } from "node:path";
import { expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import { lookTable } from "../../src/inspect/look-table.ts";
import { literal, withDatabase } from "../../src/stations/database.ts";
import { readRecords } from "../../src/stations/read-records.ts";
import { folder } from "./memory-files.ts";

test("Parquet: typed columns are read as the same series, findings tell the row", async () => {
  const effects = folder({ "x.txt": "" });
  const path = join(effects.files.absolute("."), "a.parquet");
  await withDatabase((database) =>
    database.run(
      `COPY (SELECT 'Ash' AS site, DATE '2001-02-27' + i::INTEGER AS day, CASE WHEN i = 2 THEN NULL WHEN i = 1 THEN -1.0 ELSE i / 3.0 END::DOUBLE AS rain
       FROM range(4) t(i)) TO ${literal(path)} (FORMAT parquet)`,
    ),
  );
  await withDatabase((database) =>
    database.run(
      `COPY (SELECT 'Beck' AS site, DATE '2001-02-27' AS day, 5 AS rain) TO ${literal(path.replace("a.p", "b.p"))} (FORMAT parquet)`,
    ),
  );
  const { series, findings, rows } = await readRecords(
    [
      {
        layout: "long",
        files: ["*.parquet"],
        station: { column: "site" },
        date: { column: "day", format: "yyyy-MM-dd", covers: "day" },
        missing: [],
        series: { rain: { column: "rain", unit: "mm", kind: "total", day: 0, scale: 1 } },
      },
    ],
    undefined,
    { keep: "first", except: [] },
    effects,
  );
  expect([rows, Array.from(series[0].starts, isoDay)]).toEqual([
    5,
    ["2001-02-27", "2001-02-28", "2001-03-01", "2001-03-02"],
  ]);
  expect(Array.from(series[0].values)).toEqual([0, -1, Number.NaN, 1]);
  expect([series[1].site, Array.from(series[1].values)]).toEqual(["Beck", [5]]);
  expect(findings.map(({ kind, where }) => [kind, where?.line])).toEqual([
    ["bad-value", 2],
    ["gap", 2],
  ]);
  expect((await lookTable("a.parquet", effects.files)).kind).toBe("records");
});

test("a file that is Parquet in name only is the user's error", async () => {
  const seen = lookTable("a.parquet", folder({ "a.parquet": "site,day\n" }).files);
  await expect(seen).rejects.toThrow(/^a\.parquet: expected a table that can be read to its end, found /);
});
