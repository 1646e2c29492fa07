// CPU time of covey's extraction beside GDAL's Python binding and rasterio, layout by layout: the same files, the same
// 20 points, one thread, in the same run, turn by turn so that a busy machine is busy for all three. Values are compared
// bit for bit with GDAL's in every round. Needs Debian's python3-gdal and python3-rasterio. After a build:
//   node test/bench/layers.mjs [FOLDER] [ROUNDS] [DIST] [LAYOUT]
// Shown is the least of all rounds: what other processes cost a reader adds to its time and never takes from it.
// The stacks are made in FOLDER (default: a temporary one) unless they are there. Kept results are off.
import { execFileSync, spawn } from "node:child_process";
import { existsSync, mkdtempSync, readFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { createInterface } from "node:readline";
import { fileURLToPath, pathToFileURL } from "node:url";

const [folder = mkdtempSync(join(tmpdir(), "layers-")), rounds = "25", dist = "dist", only] =
  process.argv.slice(2);
const script = fileURLToPath(new URL("layers.py", import.meta.url));
if (!existsSync(join(folder, "points.json"))) execFileSync("/usr/bin/python3", [script, "make", folder]);

const load = (name) => import(pathToFileURL(resolve(dist, name)).href);
const { extractLayers } = await load("layers/extract.js");
const { resolveSystem } = await load("layers/system.js");
const { filesBelow } = await load("pipeline/effects/files.js");

const { layouts, points } = JSON.parse(readFileSync(join(folder, "points.json"), "utf8"));
const none = { numbers: new Map(), texts: new Map() };
const system = resolveSystem({ path: "", user: "EPSG:32632", keys: none, wkt: undefined });
const wanted = points.map(([x, y], i) => ({
  place: {
    type: "point",
    name: `p${i}`,
    position: system.toLonLat(500000 + 30 * (x + 0.5), 5500000 - 30 * (y + 0.5)),
  },
  use: { by: "nearest" },
}));
const options = {
  files: ["*.tif"],
  date: { name: "x_{yyyy}_{MM}" },
  covers: "month",
  unit: "1",
  kind: "mean",
};

/** The files as a run has them, but listed and hashed once: those are costs of the run, whatever reads the file. */
function effectsBelow(root) {
  const files = filesBelow(root);
  const once = (work) => {
    const known = new Map();
    return (of) => {
      const key = JSON.stringify(of);
      if (!known.has(key)) known.set(key, work(of));
      return known.get(key);
    };
  };
  return {
    files: { ...files, list: once(files.list), identity: once(files.identity) },
    progress: { start: () => ({ tick: () => {}, done: () => {} }) },
    reuse: { get: async () => undefined, put: async () => {} },
    checkInterrupted: () => {},
  };
}

const python = spawn("/usr/bin/python3", [script, "serve", folder], { stdio: ["pipe", "pipe", "ignore"] });
const answers = createInterface({ input: python.stdout })[Symbol.asyncIterator]();
async function ask(reader, layout) {
  python.stdin.write(`${reader} ${layout}\n`);
  return JSON.parse((await answers.next()).value);
}

const least = (values) => Math.min(...values);
const cells = (texts) => console.log(`| ${texts.join(" | ")} |`);
cells(["layout", "covey", "GDAL", "rasterio", "covey / GDAL", "covey / rasterio", "values"]);
cells(new Array(7).fill("---"));
for (const layout of layouts.filter((one) => only === undefined || one === only)) {
  const effects = effectsBelow(join(folder, layout));
  const times = { covey: [], GDAL: [], rasterio: [] };
  let same = true;
  const warm = 3;
  for (let round = 0; round < warm + Number(rounds); round++) {
    const before = process.cpuUsage();
    const { series } = await extractLayers("x", options, wanted, effects);
    const { user, system: kernel } = process.cpuUsage(before);
    const theirs = await ask("GDAL", layout);
    const others = await ask("rasterio", layout);
    const files = theirs.values.length;
    same &&= theirs.values.every((file, i) =>
      file.every((value, p) => Object.is(value, series[p].values[i])),
    );
    if (round < warm) continue;
    times.covey.push((user + kernel) / 1000 / files);
    times.GDAL.push((1000 * theirs.seconds) / files);
    times.rasterio.push((1000 * others.seconds) / files);
  }
  const [covey, gdal, rasterio] = [times.covey, times.GDAL, times.rasterio].map(least);
  const numbers = [covey, gdal, rasterio, covey / gdal, covey / rasterio].map((one) => one.toFixed(2));
  cells([layout, ...numbers, same ? "bit-equal" : "DIFFER"]);
  if (!same) process.exitCode = 1;
}
python.stdin.end();
