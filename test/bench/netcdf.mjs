// CPU time of covey's extraction over the files that netcdf.py has made (see there), after a build:
//   node test/bench/netcdf.mjs FOLDER [DIST]
// Values are compared with those of the Python binding (values.json). Kept results are off. Then the memory of a process
// that reads 20 points and an area of a file of 2 GB, if it is there.
import { closeSync, existsSync, fstatSync, openSync, readFileSync, readSync } from "node:fs";
import { join, resolve } from "node:path";
import { pathToFileURL } from "node:url";

const [folder, dist = "dist"] = process.argv.slice(2);
const { extractLayers } = await import(pathToFileURL(resolve(dist, "layers", "extract.js")).href);
const points = JSON.parse(readFileSync(join(folder, "points.json"), "utf8"));
const expected = JSON.parse(readFileSync(join(folder, "values.json"), "utf8"));

const effects = {
  files: {
    list: async (patterns) => patterns.filter((one) => existsSync(join(folder, one))),
    identity: async (path) => ({ path, bytes: 0, sha256: path }),
    open: (path) => {
      const fd = openSync(join(folder, path), "r");
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
const wanted = points.map(([x, y], i) => ({
  place: { type: "point", name: `p${i}`, position: [0.01 * (x + 0.5), 60 - 0.01 * (y + 0.5)] },
  use: { by: "nearest" },
}));
const options = (file) => ({
  files: [file],
  date: { axis: "time" },
  covers: "day",
  variable: "x",
  unit: "1",
  kind: "mean",
});

for (const name of Object.keys(expected)) {
  let best = Number.POSITIVE_INFINITY;
  let series;
  for (let i = 0; i < 6; i++) {
    const before = process.cpuUsage();
    ({ series } = await extractLayers("x", options(`${name}.nc`), wanted, effects));
    const { user, system } = process.cpuUsage(before);
    best = Math.min(best, (user + system) / 1000);
  }
  const same = expected[name].every((place, p) =>
    place.every((value, t) => Object.is(value, series[p].values[t])),
  );
  console.log(`${name}  covey ${best.toFixed(1)} ms; ${same ? "values bit-equal" : "VALUES DIFFER"}`);
}
if (existsSync(join(folder, "two-gigabytes.nc"))) {
  const ring = [
    [5, 45],
    [9, 45],
    [9, 49],
    [5, 49],
    [5, 45],
  ];
  const area = {
    place: { type: "area", name: "a", polygons: [[ring]] },
    use: { by: "area", validArea: 0 },
  };
  const before = process.cpuUsage();
  await extractLayers("x", options("two-gigabytes.nc"), [...wanted, area], effects);
  const { user, system } = process.cpuUsage(before);
  const peak = process.resourceUsage().maxRSS / 1024;
  console.log(
    `two-gigabytes  covey ${((user + system) / 1e6).toFixed(1)} s, ${peak.toFixed(0)} MB at most, all layouts before it included`,
  );
}
