import { expect, test } from "vitest";
import { dayOf } from "../../src/data/day.ts";
import type { Cast } from "../../src/report/cast.ts";
import { qualityBlock } from "../../src/report/sections/quality.ts";
import { qualityTable } from "../../src/tables/quality-table.ts";

const row = { layer: "green", place: "winter <range>", by: "area", images: 12, missing: 2 };
const refused = { ...row, touched: 5, mean: 0.25, greatest: 0.9, worst: dayOf(2004, 3, 1) };
const clean = { ...row, place: "roost", touched: 0, mean: 0, greatest: 0, worst: Number.NaN };

const cast: Cast = { members: [], themes: [], byName: new Map() };

test("what quality refused stands on the page, place by place", () => {
  const text = String(qualityBlock({ tables: [qualityTable([refused, clean])] }, cast)?.text);
  const cells = [...text.matchAll(/<td[^>]*>(.*?)<\/td>/g)].map((match) => match[1]);
  expect(cells).toEqual([
    ...["green", "winter &lt;range&gt;", "area", "5 of 12", "25 %", "90 % (2004-03-01)", "2"],
    ...["green", "roost", "area", "0 of 12", "0 %", "0 %", "2"],
  ]);
});
test("without quality there is no block", () => {
  expect(qualityBlock({ tables: [] }, cast)).toBeUndefined();
});
