// Times of what counts years, CPU of this process, warm: one random-interval fit, one lasso path, the whole procedure and a
// permutation test of 1,000 (from 30 permutations). Needs a build. Run: node test/bench/years.mjs
import { randomStream } from "../../dist/math/random.js";
import { lassoPath } from "../../dist/screen/path.js";
import { outcomeInOrder } from "../../dist/screen/permutation.js";
import { runProcedure } from "../../dist/screen/procedure.js";
import { adaptiveWeights } from "../../dist/screen/weights.js";
import { drawCaptures } from "../../dist/simulate/draw.js";
import { constantRecapture } from "../../dist/survival/design.js";
import { fitRandomInterval, maximiseRandomInterval } from "../../dist/survival/random-interval.js";

const options = {
  steps: 100,
  downTo: 0.001,
  gamma: 1,
  chooseBy: "BIC",
  sampleSize: "releases",
  fit: "shrunken",
};

/** CPU milliseconds per call. */
function cpu(calls, act) {
  for (let i = 0; i < Math.min(calls, 10); i++) act(i);
  const before = process.cpuUsage();
  for (let i = 0; i < calls; i++) act(i);
  const { user, system } = process.cpuUsage(before);
  return (user + system) / 1000 / calls;
}

for (const [n, K] of [
  [17, 2],
  [17, 10],
  [20, 14],
]) {
  const random = randomStream(1, "bench of years", n * 100 + K);
  const normals = () => Float64Array.from({ length: n }, () => random.normal());
  const covariates = Array.from({ length: K }, (_, k) => ({ name: `x${k + 1}`, values: normals() }));
  const survival = normals().map(
    (z, t) => 1 / (1 + Math.exp(-0.9 - 0.5 * covariates[0].values[t] - 0.3 * z)),
  );
  const frame = {
    strata: ["all"],
    intervals: n,
    lengths: new Float64Array(n).fill(1),
    forced: [],
    effort: undefined,
  };
  const recapture = new Float64Array(n).fill(0.75);
  const data = [
    drawCaptures({ stratum: "all", marked: new Float64Array(n).fill(22), survival, recapture }, random),
  ];
  const problem = { data, frame, recapture: constantRecapture(frame), covariates };
  const setting = {
    intervals: n,
    covariates: K,
    interval: { minus2LogL: 0, parameters: n + 1 },
    constantParameters: 2,
    sampleSize: data[0].releases,
  };
  const weights = adaptiveWeights(problem, 1).weights;
  const permutation = cpu(30, () => outcomeInOrder({ problem, setting, options }, random.permutation(n)));
  console.log(
    `${n} intervals, ${K} covariates: fit ${cpu(60, (i) => maximiseRandomInterval(problem, [i % K])).toFixed(2)} ms, with REML ${cpu(30, (i) => fitRandomInterval(problem, [i % K])).toFixed(2)} ms, path ${cpu(20, () => lassoPath(problem, weights, options)).toFixed(1)} ms, procedure ${cpu(15, () => runProcedure(problem, setting, options).byYears).toFixed(0)} ms, 1,000 permutations ${permutation.toFixed(0)} s`,
  );
}
