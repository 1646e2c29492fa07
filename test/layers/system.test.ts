import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { NO_KEYS } from "../../src/layers/keys.ts";
import { describeLayer } from "../../src/layers/layer.ts";
import { findSideFiles } from "../../src/layers/side.ts";
import { resolveSystem } from "../../src/layers/system.ts";
import { DATA, filesBelow } from "./effects.ts";

const user = (text: string) => resolveSystem({ path: "x.tif", user: text, keys: NO_KEYS, wkt: undefined });

describe("examples of EPSG Guidance Note 7-2 (printed to about a centimetre)", () => {
  const dms = (d: number, m: number, s: number) => d + m / 60 + s / 3600;
  test.each([
    ["Lambert azimuthal equal area, ETRS89-extended", "EPSG:3035", 5, 50, 3962799.45, 2999718.85],
    ["polar stereographic variant A", "EPSG:5041", 44, 73, 3320416.75, 632668.43],
    ["polar stereographic variant B", "EPSG:3032", 120, -75, 7255380.79, 7053389.56],
    [
      "Lambert conic 1SP, Jamaica",
      "+proj=lcc +lat_1=18 +lat_0=18 +lon_0=-77 +k_0=1 +x_0=250000 +y_0=150000 +ellps=clrk66",
      -dms(76, 56, 37.26),
      dms(17, 55, 55.8),
      255966.58,
      142493.51,
    ],
    [
      "transverse Mercator, British National Grid",
      "+proj=tmerc +lat_0=49 +lon_0=-2 +k=0.9996012717 +x_0=400000 +y_0=-100000 +ellps=airy",
      0.5,
      50.5,
      577274.99,
      69740.5,
    ],
    [
      "Lambert conic 2SP, Texas South Central (US survey feet)",
      "+proj=lcc +lat_1=28.3833333333333 +lat_2=30.2833333333333 +lat_0=27.8333333333333 +lon_0=-99 +x_0=609601.219202438 +y_0=0 +ellps=clrk66 +to_meter=0.304800609601219",
      -96,
      28.5,
      2963503.91,
      254759.8,
    ],
    [
      "Mercator variant A, Makassar",
      "+proj=merc +lon_0=110 +k=0.997 +x_0=3900000 +y_0=900000 +ellps=bessel",
      120,
      -3,
      5009726.58,
      569150.82,
    ],
    [
      "Mercator variant B, Caspian Sea",
      "+proj=merc +lon_0=51 +lat_ts=42 +x_0=0 +y_0=0 +ellps=krass",
      53,
      53,
      165704.29,
      5171848.07,
    ],
  ] as const)("%s", (_, system, lon, lat, east, north) => {
    const [x, y] = user(system).fromLonLat(lon, lat);
    expect(Math.abs(x - east)).toBeLessThan(0.011);
    expect(Math.abs(y - north)).toBeLessThan(0.011);
  });
});

describe("what users write", () => {
  test("WKT without a code: a geographic system needs no shift, a projected one agrees with its code", () => {
    const degrees = `GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]]`;
    expect(user(degrees)).toMatchObject({ geographic: true, plain: true });
    const utm = `PROJCS["zone 32",${degrees},PROJECTION["Transverse_Mercator"],PARAMETER["latitude_of_origin",0],PARAMETER["central_meridian",9],PARAMETER["scale_factor",0.9996],PARAMETER["false_easting",500000],PARAMETER["false_northing",0],UNIT["metre",1]]`;
    const [x, y] = user(utm).fromLonLat(11, 48);
    const [u, v] = user("EPSG:32632").fromLonLat(11, 48);
    expect(Math.hypot(x - u, y - v)).toBeLessThan(1e-6);
    expect(user(utm).metresPerUnit).toBe(1);
  });

  test("PROJ text without false origins means 0, not NaN", () => {
    expect(user("+proj=laea +lat_0=50 +lon_0=10 +datum=WGS84 +units=m").fromLonLat(10, 50)).toEqual([0, 0]);
  });
});

interface Expected {
  readonly system?: string;
  readonly places: readonly (readonly [number, number, number, number])[];
}
const EXPECTED = JSON.parse(readFileSync(join(DATA, "layers/expected.json"), "utf8")) as Record<
  string,
  Expected
>;
const SYSTEMS = Object.entries(EXPECTED).filter(([, one]) => one.system !== undefined);

async function systemOf(name: string) {
  const files = filesBelow(join(DATA, "layers"));
  const file = files.open(name);
  const layer = await describeLayer(file, files, (await findSideFiles([name], files))(name));
  file.close();
  return resolveSystem({ path: name, user: undefined, keys: layer.keys, wkt: layer.wkt });
}

describe("systems as files say them, against GDAL's transformation to WGS 84", () => {
  test("there are more than twenty", () => expect(SYSTEMS.length).toBeGreaterThan(20));

  // 1e-8 degrees is a millimetre; the datum of EPSG:27700 has two ways to WGS 84 that part by less than a metre's
  // thousandth here.
  test.each(SYSTEMS.filter(([name]) => name !== "sys-igh.tif"))("%s", async (name, { places, system }) => {
    const found = await systemOf(name);
    for (const [x, y, lon, lat] of places) {
      const [ourLon, ourLat] = found.toLonLat(x, y);
      expect(
        [
          system,
          found.definition,
          Math.abs(ourLon - lon) < 2e-8,
          Math.abs(ourLat - lat) < 2e-8,
          ourLon - lon,
          ourLat - lat,
        ].slice(0, 4),
      ).toEqual([system, found.definition, true, true]);
      const [backX, backY] = found.fromLonLat(lon, lat);
      expect(Math.hypot(backX - x, backY - y) * (found.geographic ? 1e5 : found.metresPerUnit)).toBeLessThan(
        5e-3,
      );
    }
  });
});
