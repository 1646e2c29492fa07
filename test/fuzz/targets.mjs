// What is fuzzed: each target has inputs to begin with and takes changed ones. Only an error by name of exit code 2 may come
// back; whatever else is thrown is a defect.
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { utf8Text } from "../../dist/data/utf8.js";
import { silentProgress } from "../../dist/effects/effects.js";
import { InputError } from "../../dist/errors.js";
import { describeLayer } from "../../dist/layers/layer.js";
import { openNetcdf } from "../../dist/layers/netcdf/open.js";
import { parsePipeline } from "../../dist/spec/parse.js";
import { readRecords } from "../../dist/stations/read-records.js";
import { readStationList } from "../../dist/stations/station-list.js";
import { readCaptures } from "../../dist/study/captures.js";
import { readFeatures } from "../../dist/study/geojson.js";
import { readOccasions } from "../../dist/study/occasions.js";
import { readReadyMade } from "../../dist/study/ready-made.js";
import { constantRecapture, covariateSurvival } from "../../dist/survival/design.js";
import { fitModel } from "../../dist/survival/fit.js";
import { cjsLikelihood } from "../../dist/survival/likelihood.js";
import { sufficientStatistics } from "../../dist/survival/statistics.js";

const TEST = fileURLToPath(new URL("../", import.meta.url));
const good = (name) => readFileSync(`${TEST}bad-input/good/${name}`);
const spec = parsePipeline(utf8Text(good("pipeline.yaml"), "pipeline.yaml"), "pipeline.yaml");
const scratch = mkdtempSync(join(tmpdir(), "covey-fuzz-"));
process.on("exit", () => rmSync(scratch, { recursive: true, force: true }));

/** A file in memory; reading past its end is what the real one says then. */
function inMemory(bytes, path) {
  return {
    path,
    size: bytes.length,
    read: (offset, length) => {
      if (offset < 0 || offset + length > bytes.length)
        throw new InputError({
          name: "files.short-read",
          expected: `${length} bytes from byte ${offset} on`,
          found: `a file that ends at byte ${bytes.length}`,
          remedy: "the file is cut off: copy or download it again",
        });
      return Uint8Array.prototype.slice.call(bytes, offset, offset + length);
    },
    close: () => {},
  };
}

/** Files of which one is in memory and on a scratch disk too, for the table reader. */
function filesWith(path, bytes) {
  const absolute = join(scratch, path);
  return {
    list: async () => [path],
    readBytes: async () => bytes,
    readText: async () => utf8Text(bytes, path),
    open: () => inMemory(bytes, path),
    absolute: () => {
      writeFileSync(absolute, bytes);
      return absolute;
    },
    identity: async () => ({ path, bytes: bytes.length, sha256: "" }),
  };
}

const { occasions, intervals } = await readOccasions(
  spec.occasions,
  filesWith("occasions.csv", good("occasions.csv")),
);
const { sites } = await readStationList(spec.stations, filesWith("stations.csv", good("stations.csv")));
const text = (bytes, path) => utf8Text(bytes, path);
const below = (folder, ending) =>
  readdirSync(`${TEST}data/${folder}`)
    .filter((name) => name.endsWith(ending))
    .sort()
    .map((name) => readFileSync(`${TEST}data/${folder}/${name}`));

/** Counts, lengths and a covariate drawn from the bytes, some of them absurd; the fit is finite or refused by name. */
function survival(bytes) {
  const byte = (i) => (bytes.length === 0 ? 0 : bytes[i % bytes.length]);
  const n = 2 + (byte(0) % 7);
  const scale = [1, 1, 1, 0, 1e6, 1e12][byte(1) % 6];
  const data = new Float64Array(n * n);
  const released = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let left = (byte(i + 2) % 40) * scale;
    released[i] = left;
    for (let j = i; j < n; j++) {
      data[i * n + j] = Math.min(left, (byte(7 * i + j + 9) % 9) * scale);
      left -= data[i * n + j];
    }
  }
  const counts = { stratum: "", occasions: n + 1, released, seen: { rows: n, columns: n, data }, animals: 9 };
  const sizes = [1, 1, 1, 1e-9, 1e9, Number.NaN, Number.POSITIVE_INFINITY, 0];
  const values = Float64Array.from(
    { length: n },
    (_, t) => ((byte(t + 60) - 128) / 64) * sizes[byte(t + 90) % (byte(3) % 8) || 0],
  );
  const lengths = Float64Array.from({ length: n }, (_, t) => 0.1 + (byte(t + 120) % 30) / 10);
  const frame = { strata: [""], intervals: n, lengths, forced: [], effort: undefined };
  const design = {
    strata: 1,
    intervals: n,
    lengths,
    survival: covariateSurvival(frame, [{ name: "x", values }]),
    recapture: constantRecapture(frame),
  };
  const statistics = [sufficientStatistics(counts)];
  const smooth = cjsLikelihood(statistics, design);
  const at = Float64Array.from(
    { length: smooth.dimension },
    (_, k) => (byte(k + 150) - 128) / [4, 16, 0.1][byte(4) % 3],
  );
  const gradient = new Float64Array(at.length);
  const value = smooth.evaluate(at, gradient);
  if (Number.isNaN(value)) throw new Error(`the likelihood is ${value} at ${at.join()}`);
  if (Number.isFinite(value) && gradient.some(Number.isNaN))
    throw new Error(`gradient ${gradient.join()} at ${at.join()}`);
  const fit = fitModel(statistics, design);
  if (!Number.isFinite(fit.minus2LogL) || fit.estimates.some(Number.isNaN))
    throw new Error(`−2 log L ${fit.minus2LogL} at ${fit.estimates.join()}`);
}

/** name, inputs to begin with, what is done with one, and how many in a row before the next target's turn. */
export const TARGETS = [
  {
    name: "pipeline file",
    seeds: [good("pipeline.yaml"), readFileSync(`${TEST}../pipelines/roost.yaml`)],
    run: (bytes) => parsePipeline(text(bytes, "pipeline.yaml"), "pipeline.yaml"),
    turn: 20,
  },
  {
    name: "occasions",
    seeds: [good("occasions.csv")],
    run: (bytes) => readOccasions(spec.occasions, filesWith("occasions.csv", bytes)),
    turn: 50,
  },
  {
    name: "captures",
    seeds: [good("captures.csv")],
    run: (bytes) => readCaptures(spec.captures, occasions, filesWith("captures.csv", bytes)),
    turn: 50,
  },
  {
    name: "ready-made values",
    seeds: [good("visits.csv")],
    run: (bytes) => readReadyMade(spec.readyMade.visits, intervals, filesWith("visits.csv", bytes)),
    turn: 50,
  },
  {
    name: "places",
    seeds: [good("places.geojson")],
    run: (bytes) => readFeatures(text(bytes, "places.geojson"), "places.geojson"),
    turn: 50,
  },
  {
    name: "station list",
    seeds: [good("stations.csv")],
    run: (bytes) => readStationList(spec.stations, filesWith("stations.csv", bytes)),
    turn: 3,
  },
  {
    name: "station records",
    seeds: [good("weather_ash.csv"), good("weather_beck.csv")],
    run: (bytes) =>
      readRecords(spec.records, sites, spec.duplicates, {
        files: filesWith("weather_ash.csv", bytes),
        progress: silentProgress,
        checkInterrupted: () => {},
      }),
    turn: 3,
  },
  {
    name: "GeoTIFF header",
    seeds: below("layers", ".tif"),
    run: (bytes) => describeLayer(inMemory(bytes, "made.tif"), filesWith("made.tif", bytes)),
    turn: 50,
  },
  {
    name: "NetCDF header",
    seeds: below("netcdf", ".nc").filter((bytes) => bytes.length < 10_000),
    run: async (bytes) => {
      const dataset = await openNetcdf(inMemory(bytes, "made.nc"));
      dataset.close?.();
    },
    turn: 10,
  },
  {
    name: "likelihood",
    seeds: [Buffer.from(Array.from({ length: 256 }, (_, i) => (i * 37) % 251))],
    run: survival,
    turn: 20,
  },
];
