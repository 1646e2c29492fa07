// CPU time of covey's extraction over the stacks that layers.py has made (see there), after a build:
//   node test/bench/layers.mjs FOLDER [DIST]
// Values are compared with those that GDAL gave (values.json). Kept results are off.
import { createHash } from "node:crypto";
import { closeSync, fstatSync, openSync, readdirSync, readFileSync, readSync } from "node:fs";
import { join, resolve } from "node:path";
import { pathToFileURL } from "node:url";

const [folder, dist = "dist"] = process.argv.slice(2);
const load = (name) => import(pathToFileURL(resolve(dist, "layers", name)).href);
const { extractLayers } = await load("extract.js");
const { resolveSystem } = await load("system.js");

const points = JSON.parse(readFileSync(join(folder, "points.json"), "utf8"));
const expected = JSON.parse(readFileSync(join(folder, "values.json"), "utf8"));
const system = resolveSystem({
  path: "",
  user: "EPSG:32632",
  keys: { numbers: new Map(), texts: new Map() },
});

function effectsBelow(root) {
  const known = new Map();
  return {
    files: {
      list: async (patterns) => (patterns.length === 1 ? readdirSync(root).sort() : []),
      readText: async (path) => readFileSync(join(root, path), "utf8"),
      // Hashing is the run record's cost, paid once whatever reads the file.
      identity: async (path) => {
        if (!known.has(path))
          known.set(
            path,
            createHash("sha256")
              .update(readFileSync(join(root, path)))
              .digest("hex"),
          );
        return { path, bytes: 0, sha256: known.get(path) };
      },
      open: (path) => {
        const fd = openSync(join(root, path), "r");
        return {
          path,
          size: fstatSync(fd).size,
          read: (offset, length) => {
            const bytes = new Uint8Array(length);
            if (readSync(fd, bytes, 0, length, offset) !== length) throw new Error("short read");
            return bytes;
          },
          close: () => closeSync(fd),
        };
      },
    },
    progress: { start: () => ({ tick: () => {}, done: () => {} }) },
    reuse: { get: async () => undefined, put: async () => {} },
    checkInterrupted: () => {},
  };
}

for (const name of Object.keys(expected)) {
  const effects = effectsBelow(join(folder, name));
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
  let best = Number.POSITIVE_INFINITY;
  let series;
  for (let i = 0; i < 12; i++) {
    const before = process.cpuUsage();
    ({ series } = await extractLayers("x", options, wanted, effects));
    const { user, system: kernel } = process.cpuUsage(before);
    best = Math.min(best, (user + kernel) / 1000);
  }
  const same = expected[name].every((file, i) =>
    file.every((value, p) => Object.is(value, series[p].values[i])),
  );
  console.log(
    `${name}  covey ${(best / expected[name].length).toFixed(2)} ms a file; ${same ? "values bit-equal" : "VALUES DIFFER"}`,
  );
}
