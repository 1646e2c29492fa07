// Times of diagnose, reduce and compare, 100 covariates × 60 intervals, CPU time of this process. Run after a build:
// node test/bench/collinearity.mjs. Every third covariate follows one of five hidden series.
import { diagnose } from "../../dist/collinearity/diagnose.js";
import { compare, foldChunks } from "../../dist/compare/compare.js";
import { predictLeftOut } from "../../dist/compare/fold.js";
import { reduceColumns } from "../../dist/components/reduce.js";
import { fromColumns } from "../../dist/data/matrix.js";
import { randomStream } from "../../dist/math/random.js";
import { screen } from "../../dist/screen/screen.js";
import { drawCaptures } from "../../dist/simulate/draw.js";
import { constantRecapture } from "../../dist/survival/design.js";
import { compareRecapture } from "../../dist/survival/recapture-choice.js";

const [K, n] = [Number(process.argv[2] ?? 100), Number(process.argv[3] ?? 60)];
const random = randomStream(1, "bench", 0);
const hidden = Array.from({ length: 5 }, () => Float64Array.from({ length: n }, () => random.normal()));
const standard = (values) => {
  const mean = values.reduce((a, b) => a + b, 0) / n;
  const sd = Math.sqrt(values.reduce((a, b) => a + (b - mean) ** 2, 0) / (n - 1));
  return values.map((value) => (value - mean) / sd);
};
const covariates = Array.from({ length: K }, (_, k) => ({
  name: `x${k + 1}`,
  values: standard(
    Float64Array.from({ length: n }, (_row, t) => (k % 3 === 0 ? 2 * hidden[k % 5][t] : 0) + random.normal()),
  ),
}));
const names = covariates.map((one) => one.name);
const matrix = fromColumns(
  covariates.map((one) => one.values),
  n,
);
const survival = Float64Array.from({ length: n }, (_, t) => {
  const eta = 0.9 + 0.5 * covariates[0].values[t] - 0.5 * covariates[1].values[t] + 0.3 * random.normal();
  return 1 / (1 + Math.exp(-eta));
});
const data = [
  drawCaptures(
    {
      stratum: "all",
      marked: new Float64Array(n).fill(20),
      survival,
      recapture: new Float64Array(n).fill(0.7),
    },
    random,
  ),
];
const frame = {
  strata: ["all"],
  intervals: n,
  lengths: new Float64Array(n).fill(1),
  forced: [],
  effort: undefined,
};
const problem = { data, frame, recapture: constantRecapture(frame), covariates };
const rules = {
  warn: { correlation: 0.7, inflation: 10, condition: 30 },
  cluster: 0.7,
  decisions: [],
};
const options = {
  steps: 100,
  downTo: 0.001,
  gamma: 1,
  chooseBy: "BIC",
  sampleSize: "releases",
  fit: "shrunken",
  permutations: 0,
};

async function timed(name, work) {
  const before = process.cpuUsage();
  const result = await work();
  const { user, system } = process.cpuUsage(before);
  console.log(`${name.padEnd(52)} ${((user + system) / 1000).toFixed(0).padStart(8)} ms`);
  return result;
}

const plain = { keep: { type: "broken stick" }, within: "all", simplify: "none", resamples: 0 };
const parallel = { type: "parallel", replicates: 1000, quantile: 0.95 };
console.log(`${K} covariates × ${n} intervals, CPU time`);
const { diagnosis } = await timed("diagnose", () => diagnose(matrix, names, rules));
const components = await timed("reduce, broken stick", () =>
  reduceColumns(matrix, names, undefined, plain, 1),
);
await timed("reduce, parallel analysis of 1,000", () =>
  reduceColumns(matrix, names, undefined, { ...plain, keep: parallel }, 1),
);
await timed("reduce, sparse loadings", () =>
  reduceColumns(matrix, names, undefined, { ...plain, simplify: "sparse" }, 1),
);
await timed("reduce, 200 resamples of the loadings", () =>
  reduceColumns(matrix, names, undefined, { ...plain, resamples: 200 }, 1),
);
const world = {
  progress: { start: () => ({ tick: () => {}, done: () => {} }) },
  parallel: { map: async () => [] },
};
const recapture = compareRecapture(data, frame, "constant");
const { result } = await timed("screen, without permutations", () =>
  screen(problem, recapture, options, 1000, 1, world),
);
await timed("compare: candidates, agreement, paragraph", () =>
  compare(problem, result, components, diagnosis.kept, options),
);
const chunks = foldChunks(problem, result, options, {
  collinearity: rules,
  components: { keep: plain.keep, groups: undefined },
  seed: 1,
});
const few = Math.min(5, chunks.length);
const before = process.cpuUsage();
for (const chunk of chunks.slice(0, few)) predictLeftOut(chunk);
const { user, system } = process.cpuUsage(before);
const each = (user + system) / 1000 / few;
console.log(
  `${"compare: one interval left out".padEnd(52)} ${each.toFixed(0).padStart(8)} ms (all ${n}: ${((each * n) / 1000).toFixed(1)} s)`,
);
