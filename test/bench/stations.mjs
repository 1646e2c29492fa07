// Ten million daily rows to 40 intervals × 20 covariates × 30 stations, beside the bare scan of the same file and the same
// job in pandas (Debian's python3-pandas): `npm run build && node test/bench/stations.mjs [rows] [--remove]`.
// Each step runs in a process of its own, so that its peak memory is its own; CPU time is told beside the wall clock,
// which other work on the machine lengthens. Prints one JSON line per step.
import { execFileSync } from "node:child_process";
import { closeSync, existsSync, openSync, rmSync, statSync, writeSync } from "node:fs";
import { tmpdir } from "node:os";
import { basename, dirname, join } from "node:path";
import { fileURLToPath, pathToFileURL } from "node:url";

const DAYS = 14_975; // 1981 to 2021
const STEPS = ["scan", "read", "covariates"];
const built = (path) =>
  import(pathToFileURL(fileURLToPath(new URL(`../../dist/${path}`, import.meta.url))).href);

/** Rows by station and day, as an export of a data base: rain, minimum and maximum with one decimal, some missing. */
function writeRows(file, rows) {
  const out = openSync(file, "w");
  const first = Date.UTC(1981, 0, 1);
  const days = Array.from({ length: DAYS }, (_, i) =>
    new Date(first + i * 86_400_000).toISOString().slice(0, 10),
  );
  let state = 12345;
  const next = () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return state / 4294967296;
  };
  let text = "site,day,rain,tn,tx\n";
  for (let row = 0; row < rows; row++) {
    const day = row % DAYS;
    const warm = 10 - 12 * Math.cos((day / 365.25) * 2 * Math.PI);
    const tn = next() < 0.005 ? "-9999" : (warm - 4 + 6 * next()).toFixed(1);
    const rain = next() < 0.6 ? "0.0" : (20 * next() ** 3).toFixed(1);
    text += `S${String(Math.floor(row / DAYS)).padStart(4, "0")},${days[day]},${rain},${tn},${(warm + 8 * next() + 4).toFixed(1)}\n`;
    if (text.length > 1 << 22) {
      writeSync(out, text);
      text = "";
    }
  }
  writeSync(out, text);
  closeSync(out);
}

async function scan(file) {
  const { DuckDBInstance } = await import("@duckdb/node-api");
  const instance = await DuckDBInstance.create(":memory:", { threads: "1" });
  const connection = await instance.connect();
  await connection.run(
    `CREATE TEMP TABLE raw AS SELECT * FROM read_csv('${file}', auto_detect = false, header = true, delim = ',',
       quote = '"', escape = '"', columns = {'site': 'VARCHAR', 'day': 'DATE', 'rain': 'DOUBLE', 'tn': 'DOUBLE', 'tx': 'DOUBLE'})`,
  );
  return { rows: Number((await connection.runAndReadAll("SELECT count(*) FROM raw")).getRows()[0][0]) };
}

const RECORDS = (name) => [
  {
    layout: "long",
    files: [name],
    station: { column: "site" },
    date: { column: "day", format: "yyyy-MM-dd", covers: "day" },
    missing: ["-9999"],
    series: {
      rain: { column: "rain", unit: "mm", kind: "total", day: 0, scale: 1 },
      tmin: { column: "tn", unit: "degC", kind: "minimum", day: 0, scale: 1 },
      tmax: { column: "tx", unit: "degC", kind: "maximum", day: 0, scale: 1 },
    },
  },
];

async function read(file) {
  const { readRecords } = await built("stations/read-records.js");
  const { filesBelow } = await built("pipeline/effects/files.js");
  const silent = { start: () => ({ tick: () => {}, done: () => {} }) };
  const effects = { files: filesBelow(dirname(file)), progress: silent, checkInterrupted: () => {} };
  return readRecords(RECORDS(basename(file)), undefined, { keep: "none", except: [] }, effects);
}

/** Twenty covariates of the first thirty stations over 40 yearly intervals. */
async function covariates(file) {
  const { series } = await read(file);
  const { aggregateCovariate } = await built("aggregate/aggregate.js");
  const { dayOf } = await built("data/day.js");
  const intervals = Array.from({ length: 40 }, (_, t) => ({
    index: t,
    name: `${1981 + t}`,
    start: dayOf(1981 + t, 7, 20),
    end: dayOf(1982 + t, 7, 20),
    length: 1,
  }));
  const seasons = [
    [11, 2],
    [12, 2],
    [3, 5],
    [9, 11],
    [1, 6],
  ];
  const statistics = [
    ["rain", { type: "sum" }],
    ["tmin", { type: "days below", threshold: 0, orEqual: false }],
    ["tmax", { type: "quantile", probability: 0.9 }],
    ["tmin", { type: "mean" }],
  ];
  const before = process.cpuUsage();
  let [made, total] = [0, 0];
  for (const [from, to] of seasons)
    for (const [variable, statistic] of statistics) {
      const { covariate } = aggregateCovariate(
        {
          name: `${variable} ${from}`,
          theme: variable,
          unit: variable === "rain" ? "mm" : "degC",
          window: { type: "season", from: { month: from, day: 1 }, to: { month: to, day: 0 }, lag: 0 },
          statistic,
          complete: { type: "share", share: 0.9 },
          join: "mean of windows",
          series: series.filter((one) => one.variable === variable).slice(0, 30),
        },
        intervals,
      );
      made += covariate.values.length;
      for (const { value } of covariate.values) if (!Number.isNaN(value)) total += value;
    }
  const { user, system } = process.cpuUsage(before);
  return {
    values: made,
    check: Number(total.toFixed(3)),
    "aggregation CPU s": Number(((user + system) / 1e6).toFixed(2)),
  };
}

const [what, file] = process.argv.slice(2);
if (STEPS.includes(what)) {
  const began = performance.now();
  const done = await { scan, read, covariates }[what](file);
  const { user, system } = process.cpuUsage();
  const { series, rows, findings, ...more } = done;
  console.log(
    JSON.stringify({
      step: what,
      ...(rows === undefined ? {} : { rows }),
      ...(series === undefined ? {} : { series: series.length, findings: findings.length }),
      ...more,
      "CPU s": Number(((user + system) / 1e6).toFixed(2)),
      "wall s": Number(((performance.now() - began) / 1000).toFixed(2)),
      "peak MB": Math.round(process.resourceUsage().maxRSS / 1024),
    }),
  );
} else {
  const rows = Number(what ?? 10_000_000);
  const made = join(tmpdir(), `covey-bench-${rows}.csv`);
  if (!existsSync(made)) writeRows(made, rows);
  console.log(JSON.stringify({ file: made, MB: Math.round(statSync(made).size / 1e6) }));
  const run = (command, args) => process.stdout.write(execFileSync(command, args));
  for (const step of STEPS) run(process.execPath, [fileURLToPath(import.meta.url), step, made]);
  try {
    execFileSync("/usr/bin/python3", ["-c", "import pandas"], { stdio: "ignore" });
  } catch {
    console.log(JSON.stringify({ step: "pandas", note: "python3-pandas is not installed" }));
    process.exit(0);
  }
  run("/usr/bin/python3", [fileURLToPath(new URL("stations.py", import.meta.url)), made]);
  if (process.argv.includes("--remove")) rmSync(made);
}
