import iconv from "iconv-lite";
import { expect, test } from "vitest";
import { readStationList } from "../../src/stations/station-list.ts";
import { folder } from "./memory-files.ts";

const OPTIONS = {
  file: "list.csv",
  id: "id",
  name: "name",
  longitude: "lon",
  latitude: "lat",
  elevation: "m",
};
const read = (text: string | Uint8Array) => readStationList(OPTIONS, folder({ "list.csv": text }).files);

test("sorted by code unit, unknown numbers NaN, Latin-1 names, ids as written", async () => {
  const text = "id;name;lon;lat;m\nb;Mühle;8,5;50;\n007;x;;;120\n";
  const { sites, findings } = await read(iconv.encode(text, "latin1"));
  expect(sites).toEqual([
    { id: "007", name: "x", longitude: Number.NaN, latitude: Number.NaN, elevation: 120 },
    { id: "b", name: "Mühle", longitude: 8.5, latitude: 50, elevation: Number.NaN },
  ]);
  expect(findings).toEqual([]);
});

test("a repeated row and a station at two places are findings, no id or a bad coordinate an error", async () => {
  const { sites, findings } = await read("id,name,lon,lat,m\na,A,8,50,1\na,A,8,50,1\n");
  expect([sites.length, findings[0].kind, findings[0].where]).toEqual([
    1,
    "duplicate",
    { file: "list.csv", line: 3 },
  ]);
  const moved = await read("id,name,lon,lat,m\na,A,8,50,1\na,A,9,50,1\n");
  expect(moved.sites.map(({ longitude }) => longitude)).toEqual([8]);
  expect(moved.findings.map(({ kind, where, value }) => [kind, where?.line, value])).toEqual([
    ["moved", 3, "9, 50, 1 m"],
  ]);
  await expect(read("id,name,lon,lat,m\n,A,8,50,1\n")).rejects.toThrow(
    'expected an id in the column "id", found an empty cell',
  );
  await expect(read("id,name,lon,lat,m\na,A,8,95,1\n")).rejects.toThrow(
    'list.csv:2:4: expected a number from -90 to 90 (degrees, WGS 84), found "95"',
  );
});
