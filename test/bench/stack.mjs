// A stack of 240 and of 2,400 images (600 x 600, int16, deflate, tiles) at 20 places, half of them circles of 1 km: seconds
// and peak memory of a first reading, of the same again with everything kept, and with a year of twelve new images. Files are
// hashed and results kept on disk as in a run; each reading is a process of its own. Then a whole run to the aggregates
// (`run --through aggregate --reuse`), first and again. Needs Debian's python3-gdal. After a build:
//   node test/bench/stack.mjs [FOLDER] [DIST]
import { execFileSync, spawnSync } from "node:child_process";
import {
  appendFileSync,
  copyFileSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  rmSync,
  writeFileSync,
} from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { fileURLToPath, pathToFileURL } from "node:url";

const own = fileURLToPath(import.meta.url);
const [folder = mkdtempSync(join(tmpdir(), "stack-")), dist = "dist", from, to] = process.argv.slice(2);
const BASES = 24;
const MAKE = `
import sys, numpy as np
from osgeo import gdal, osr
gdal.UseExceptions()
s = osr.SpatialReference(); s.ImportFromEPSG(32632)
rng = np.random.default_rng(1); r, c = np.mgrid[0:600, 0:600]
for i in range(${BASES}):
    ds = gdal.GetDriverByName("GTiff").Create(f"{sys.argv[1]}/base_{i}.tif", 600, 600, 1, gdal.GDT_Int16,
        ["TILED=YES", "COMPRESS=DEFLATE", "PREDICTOR=2"])
    ds.SetGeoTransform((500000, 250, 0, 5500000, 0, -250)); ds.SetProjection(s.ExportToWkt())
    ds.GetRasterBand(1).WriteArray((300 + 200 * np.sin(c / 90 + i) * np.cos(r / 70) + rng.normal(0, 9, r.shape)).astype("int16"))
    ds = None
`;
const nameOf = (image) =>
  `x_${1800 + Math.floor(image / 12)}_${String((image % 12) + 1).padStart(2, "0")}.tif`;

const wanted = Array.from({ length: 20 }, (_, i) => ({
  place: { type: "point", name: `p${i}`, position: [9.1 + 0.08 * i, 48.5 + 0.05 * ((i * 7) % 20)] },
  use: i % 2 === 0 ? { by: "nearest" } : { by: "radius", metres: 1000, validArea: 0.8 },
}));

async function reading() {
  const load = (name) => import(pathToFileURL(resolve(dist, name)).href);
  const { extractLayers } = await load("layers/extract.js");
  const { filesBelow } = await load("pipeline/effects/files.js");
  const { reuseIn } = await load("pipeline/effects/reuse.js");
  const options = {
    files: [`images-${from}/*.tif`],
    date: { name: "x_{yyyy}_{MM}" },
    covers: "month",
    unit: "1",
    kind: "mean",
  };
  const effects = {
    files: filesBelow(folder),
    progress: { start: () => ({ tick: () => {}, done: () => {} }) },
    reuse: reuseIn(join(folder, `kept-${from}`)),
    checkInterrupted: () => {},
  };
  const began = performance.now();
  const { filesRead, series } = await extractLayers("x", options, wanted, effects);
  const seconds = (performance.now() - began) / 1000;
  const { user, system } = process.cpuUsage();
  const cells = [series[0].values.length, filesRead, seconds.toFixed(1), ((user + system) / 1e6).toFixed(1)];
  console.log(`| ${[to, ...cells, Math.round(process.resourceUsage().maxRSS / 1024)].join(" | ")} |`);
}

/** The same stack in a pipeline: 20 years from the first image on, a covariate for each place. */
function writePipeline(stack) {
  const years = Array.from({ length: 20 }, (_, i) => 1800 + i);
  const occasions = years.map((year) => `${year},${year}-07-23,${year}-07-27`);
  writeFileSync(join(folder, "occasions.csv"), `visit,from,to\n${occasions.join("\n")}\n`);
  const features = wanted.map(({ place }) => ({
    type: "Feature",
    properties: { name: place.name },
    geometry: { type: "Point", coordinates: place.position },
  }));
  writeFileSync(join(folder, "places.geojson"), JSON.stringify({ type: "FeatureCollection", features }));
  const covariates = wanted.map(({ place: { name }, use }) => {
    const how = use.by === "nearest" ? "by: nearest" : "by: radius, radius: 1 km, valid area: 0.8";
    return `  - { name: ${name}, theme: x, from: x, at: ${name}, ${how}, window: { season: Mar to May }, statistic: mean }`;
  });
  const file = join(folder, `pipeline-${stack}.yaml`);
  writeFileSync(
    file,
    `covey: 1
study: { title: "A stack of images" }
data: .
output: out-${stack}
seed: 1
occasions: { file: occasions.csv, name: visit, start: from, end: to, lengths: whole years }
places:
${wanted.map(({ place: { name } }) => `  ${name}: { file: places.geojson, where: { name: ${name} } }`).join("\n")}
layers:
  x: { files: ["images-${stack}/*.tif"], date: { name: "x_{yyyy}_{MM}" }, covers: month, unit: "1", kind: mean }
covariates:
${covariates.join("\n")}
`,
  );
  return file;
}

/** One whole run as a user starts it: the time of the process, and its CPU time and memory as it says itself at its end. */
function wholeRun(pipeline, kept) {
  const report = `process.on("exit", () => { const { user, system } = process.cpuUsage(); process.stderr.write(JSON.stringify([((user + system) / 1e6).toFixed(1), Math.round(process.resourceUsage().maxRSS / 1024)])); })`;
  const began = performance.now();
  const { status, stderr, stdout } = spawnSync(
    process.execPath,
    [
      "--import",
      `data:text/javascript,${encodeURIComponent(report)}`,
      join(dist, "cli.js"),
      "run",
      pipeline,
      "--through",
      "aggregate",
      "--reuse",
      kept,
      "--quiet",
    ],
    { encoding: "utf8" },
  );
  if (status !== 0) throw new Error(stdout + stderr);
  const [cpu, peak] = JSON.parse(stderr.slice(stderr.lastIndexOf("[")));
  return [((performance.now() - began) / 1000).toFixed(1), cpu, peak];
}

function main() {
  if (!existsSync(join(folder, "base_0.tif"))) execFileSync("/usr/bin/python3", ["-c", MAKE, folder]);
  const add = (stack, first, count) => {
    mkdirSync(join(folder, `images-${stack}`), { recursive: true });
    for (let i = first; i < first + count; i++) {
      const path = join(folder, `images-${stack}`, nameOf(i));
      copyFileSync(join(folder, `base_${i % BASES}.tif`), path);
      appendFileSync(path, `image ${i}`); // no two files alike
    }
  };
  console.log(
    "| reading | images | files read | seconds | CPU seconds | peak MB |\n|---|---|---|---|---|---|",
  );
  for (const stack of [240, 2400]) {
    for (const part of [`images-${stack}`, `kept-${stack}`])
      rmSync(join(folder, part), { recursive: true, force: true });
    const run = (what) =>
      execFileSync(process.execPath, [own, folder, dist, String(stack), what], { stdio: "inherit" });
    add(stack, 0, stack);
    run("first");
    run("again");
    add(stack, stack, 12);
    run("a new year");
    const pipeline = writePipeline(stack);
    const kept = join(folder, `kept-run-${stack}`);
    rmSync(kept, { recursive: true, force: true });
    for (const what of ["a whole run, first", "a whole run, again"])
      console.log(`| ${[what, stack + 12, "", ...wholeRun(pipeline, kept)].join(" | ")} |`);
  }
}

if (from === undefined) main();
else await reading();
