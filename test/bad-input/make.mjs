// Makes the small good study in good/ that every bad input is a change of: node test/bad-input/make.mjs
// Eight visits, sixty-odd marked animals, two stations by months, one layer with an image each April, one table of ready-made
// values. Numbers come from a fixed sequence, so the same bytes are written every time.
import { mkdirSync, writeFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { geotiff } from "../../sample-data/geotiff.mjs";

const good = fileURLToPath(new URL("good/", import.meta.url));
mkdirSync(`${good}layers`, { recursive: true });
const write = (name, lines) => writeFileSync(`${good}${name}`, `${lines.join("\n")}\n`);
let state = 12345;
/** Numerical Recipes' quick generator (Press et al. 1992, section 7.1), top bits. */
const random = () => {
  state = (Math.imul(1664525, state) + 1013904223) >>> 0;
  return state / 2 ** 32;
};
const years = [2001, 2002, 2003, 2004, 2005, 2006, 2007, 2008];

write("occasions.csv", [
  "visit,from,to,hours",
  ...years.map((year, i) => `${year},${year}-07-20,${year}-07-22,${20 + ((7 * i) % 11)}`),
]);
const captures = ["ring,date,sex,fate"];
let ring = 100;
years.slice(0, -1).forEach((first, f) => {
  for (let k = 0; k < 9; k++) {
    ring++;
    const sex = k % 3 === 0 ? "m" : "f";
    captures.push(`B${ring},${first}-07-20,${sex},released`);
    for (const year of years.slice(f + 1)) {
      if (random() > 0.75) break;
      if (random() < 0.7) captures.push(`B${ring},${year}-07-21,${sex},released`);
    }
  }
});
write("captures.csv", captures);
const square = [
  [8.2, 50.1],
  [8.24, 50.1],
  [8.24, 50.13],
  [8.2, 50.13],
  [8.2, 50.1],
];
const feature = (name, type, coordinates) => ({
  type: "Feature",
  properties: { name },
  geometry: { type, coordinates },
});
const features = [feature("roost", "Point", [8.22, 50.12]), feature("range", "Polygon", [square])];
write("places.geojson", [
  '{ "type": "FeatureCollection", "features": [',
  features.map((one) => JSON.stringify(one)).join(",\n"),
  "] }",
]);
write("stations.csv", ["id,name,lon,lat,height", "0101,Ash,8.2,50.1,120", "0102,Beck,8.3,50.2,140"]);
for (const [id, name] of [
  ["0101", "ash"],
  ["0102", "beck"],
]) {
  const rows = ["site,month,rain,tmin"];
  for (let year = 2000; year <= 2008; year++)
    for (let month = 1; month <= 12; month++) {
      const season = Math.cos(((month - 1) / 12) * 2 * Math.PI);
      const rain = (60 + 20 * season + 40 * random()).toFixed(1);
      const tmin = (6 - 8 * season + 3 * random()).toFixed(1);
      rows.push(`${id},${year}-${String(month).padStart(2, "0")},${rain},${tmin}`);
    }
  write(`weather_${name}.csv`, rows);
}
for (const year of years.slice(1)) {
  const values = Int16Array.from(
    { length: 64 },
    (_, i) => 3000 + 400 * (year % 3) + 10 * i + Math.floor(600 * random()),
  );
  const bytes = geotiff({
    width: 8,
    height: 8,
    values,
    west: 440000,
    north: 5556000,
    pixel: 1000,
    epsg: 32632,
    nodata: -3000,
    scale: 0.0001,
    description: "greenness",
  });
  writeFileSync(`${good}layers/green_${year}_04.tif`, bytes);
}
write("visits.csv", [
  "interval,people",
  ...years.slice(1).map((year, i) => `${years[i]} to ${year},${3 + ((5 * i) % 7)}`),
]);
