import { mkdirSync, rmSync, writeFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { captures, recapture, standardised, survival, visits, YEARS } from "./animals.mjs";
import { dayOf, iso } from "./dates.mjs";
import { geotiff } from "./geotiff.mjs";
import { GRID, greenness, placesFile, snowCover, toDegrees } from "./land.mjs";
import { stream } from "./random.mjs";
import { lowlandFile, stationList, uplandFile } from "./station-files.mjs";
import { FIRST_DAY, STATIONS, weather, yearFactors } from "./weather.mjs";

// Writes the sample study: `node sample-data/make.mjs [folder [seed]]`. All of it is invented; see README.md.

/** Of the seeds 1 to 60 the one whose evidence for the two drivers is in the middle: a typical draw. */
const SEED = Number(process.argv[3] ?? 47);
const EFFECTS = {
  recapture: { intercept: 0.75, effortPerSd: 0.25 },
  survival: {
    intercept: 1.05,
    ringedAsYoung: -0.45,
    perSd: { "winter rain": -0.5, "spring green": 0.5 },
    residualSd: 0.25,
  },
};
/** A month whose greenness image was never delivered. */
const LOST_IMAGE = "2009_11";

const folder = process.argv[2] ?? dirname(fileURLToPath(import.meta.url));
const two = (n) => String(n).padStart(2, "0");
const put = (name, content) => {
  mkdirSync(dirname(join(folder, name)), { recursive: true });
  writeFileSync(join(folder, name), content);
};
const csv = (rows) => `${rows.map((row) => row.join(",")).join("\n")}\n`;
const round = (value) => Number(value.toFixed(6));

// The weather, 2000 to 2021; a year's factors begin in the August before.
const years = Array.from({ length: 23 }, (_, i) => 2000 + i);
const factors = yearFactors(stream(SEED, "years"), years);
const { series, regional } = weather(stream(SEED, "weather"), factors);
for (const part of ["stations", "layers"]) rmSync(join(folder, part), { recursive: true, force: true });
put("stations/list.csv", stationList(toDegrees));
put("stations/lowland_east.csv", lowlandFile(["Beck", "Cray", "Elm"], series, stream(SEED, "east")));
put("stations/lowland_west.csv", lowlandFile(["Ash", "Dene"], series, stream(SEED, "west")));
put("stations/upland.csv", uplandFile(series));

// The layers.
const greenRandom = stream(SEED, "greenness");
const snowRandom = stream(SEED, "snow");
const greenOverRange = new Map();
for (const year of years.slice(0, 22))
  for (let month = 1; month <= 12; month++) {
    const stamp = `${year}_${two(month)}`;
    const green = greenness(greenRandom, factors, year, month);
    greenOverRange.set(stamp, green.overRange);
    const description = `greenness ${year}-${two(month)}`;
    if (stamp !== LOST_IMAGE)
      put(
        `layers/green_${stamp}.tif`,
        geotiff({ ...GRID, values: green.raw, nodata: -3000, scale: 0.0001, description }),
      );
    const snow = snowCover(snowRandom, regional, year, month);
    put(
      `layers/snow_${stamp}.tif`,
      geotiff({ ...GRID, values: snow, nodata: 255, description: `snow cover ${year}-${two(month)}` }),
    );
  }
put("places.geojson", placesFile());

// The two covariates that drive survival, from the weather as it was, before gaps and rounding.
const occasions = visits(stream(SEED, "visits"));
const ends = YEARS.slice(1);
const winterRain = ends.map((year) => {
  let sum = 0;
  for (let day = dayOf(year - 1, 11, 1); day < dayOf(year, 3, 1); day++)
    for (const one of series) sum += one.rain[day - FIRST_DAY];
  return sum / STATIONS.length;
});
const springGreen = ends.map((year) => {
  const days = [31, 30, 31];
  return ["03", "04", "05"].reduce((sum, m, i) => sum + greenOverRange.get(`${year}_${m}`) * days[i], 0) / 92;
});
const columns = { "winter rain": standardised(winterRain), "spring green": standardised(springGreen) };

// The animals.
const residualRandom = stream(SEED, "residual");
const residual = ends.map(() => EFFECTS.survival.residualSd * residualRandom.normal());
const phi = survival(EFFECTS.survival, columns, residual);
const p = recapture(occasions, EFFECTS.recapture);
const records = captures(stream(SEED, "animals"), occasions, phi, p);
put(
  "occasions.csv",
  csv([
    ["visit", "from", "to", "net_hours"],
    ...occasions.map((one) => [one.year, iso(one.from), iso(one.to), one.netHours]),
  ]),
);
put(
  "captures.csv",
  csv([
    ["ring", "date", "age_at_ringing", "fate"],
    ...records.map((one) => [one.ring, iso(one.date), one.age, one.fate]),
  ]),
);
const visitsRandom = stream(SEED, "disturbance");
const names = ends.map((year) => `${year - 1} to ${year}`);
put(
  "intervals.csv",
  csv([["interval", "disturbance"], ...names.map((name) => [name, visitsRandom.whole(0, 9)])]),
);
put(
  "truth.json",
  `${JSON.stringify(
    {
      note: "Invented. The values the sample study was simulated from; never read by the pipeline.",
      seed: SEED,
      effects: EFFECTS,
      intervals: names.map((interval, t) => ({
        interval,
        "winter rain": round(winterRain[t]),
        "winter rain standardised": round(columns["winter rain"][t]),
        "spring green": round(springGreen[t]),
        "spring green standardised": round(columns["spring green"][t]),
        residual: round(residual[t]),
        "survival of animals ringed as adults": round(phi[t].adult),
        "survival of animals ringed as young": round(phi[t].young),
        "recapture at the end": round(p[t]),
      })),
    },
    undefined,
    1,
  )}\n`,
);
