import fc from "fast-check";
import { expect, test } from "vitest";
import { isoDay } from "../../src/data/day.ts";
import { readRecords } from "../../src/stations/read-records.ts";
import { folder } from "./memory-files.ts";

const ROW = fc.record({
  site: fc.constantFrom("Ash", "Beck", "äsch", "Zell"),
  day: fc.integer({ min: -40_000, max: 40_000 }),
  value: fc.option(fc.integer({ min: 0, max: 900 }), { nil: undefined }),
});

function read(files: Readonly<Record<string, string>>) {
  return readRecords(
    [
      {
        layout: "long",
        files: ["*.csv"],
        station: { column: "site" },
        date: { column: "day", format: "yyyy-MM-dd", covers: "day" },
        missing: [],
        series: { rain: { column: "rain", unit: "mm", kind: "total", day: -1, scale: 0.1 } },
      },
    ],
    undefined,
    { keep: "none", except: [] },
    folder(files),
  );
}

test("rows shuffled and files split give the same series, and a plain sort in code agrees", async () => {
  const rows = fc.uniqueArray(ROW, {
    minLength: 1,
    maxLength: 60,
    selector: ({ site, day }) => `${site} ${day}`,
  });
  await fc.assert(
    fc.asyncProperty(rows, fc.infiniteStream(fc.nat(1_000_000)), async (list, keys) => {
      const text = (part: typeof list) =>
        `site,day,rain\n${part.map(({ site, day, value }) => `${site},${isoDay(day)},${value ?? ""}\n`).join("")}`;
      const shuffled = list.map((row) => ({ row, key: keys.next().value })).sort((a, b) => a.key - b.key);
      const cut = keys.next().value % (list.length + 1);
      const part = shuffled.map(({ row }) => row);
      const plain = await read({ "a.csv": text(list) });
      const split = await read({ "a.csv": text(part.slice(0, cut)), "b.csv": text(part.slice(cut)) });
      const bare = (series: (typeof plain)["series"]) => series.map(({ files: _, ...rest }) => rest);
      expect(bare(split.series)).toEqual(bare(plain.series));
      // The same by a second, naive way.
      const sites = [...new Set(list.map(({ site }) => site))].sort((a, b) => (a < b ? -1 : 1));
      const naive = sites.map((site) =>
        list.filter((row) => row.site === site).sort((a, b) => a.day - b.day),
      );
      expect(plain.series.map(({ site }) => site)).toEqual(sites);
      for (const [i, { starts, ends, values }] of plain.series.entries()) {
        expect(Array.from(starts)).toEqual(naive[i].map(({ day }) => day - 1));
        expect(Array.from(ends)).toEqual(naive[i].map(({ day }) => day));
        expect(Array.from(values)).toEqual(
          naive[i].map(({ value }) => (value === undefined ? Number.NaN : value / 10)),
        );
      }
    }),
    { numRuns: 6 },
  );
});
