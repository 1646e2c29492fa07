// Times of the survival engine, CPU time of this process, warm. Run: npm run bench
// One table, one run: likelihood with gradient, one path of 100 λ, 1,000 paths, at two sizes and two numbers of animals.
import { randomStream } from "../../dist/math/random.js";
import { lassoPath } from "../../dist/screen/path.js";
import { designWith } from "../../dist/screen/problem.js";
import { runProcedure } from "../../dist/screen/procedure.js";
import { adaptiveWeights } from "../../dist/screen/weights.js";
import { drawCaptures } from "../../dist/simulate/draw.js";
import { constantRecapture, intervalSurvival } from "../../dist/survival/design.js";
import { fitModel } from "../../dist/survival/fit.js";
import { cjsLikelihood } from "../../dist/survival/likelihood.js";
import { designOf } from "../../dist/survival/recapture-choice.js";

function problemOf(occasions, covariates, animals) {
  const n = occasions - 1;
  const random = randomStream(1, "bench", occasions);
  const columns = Array.from({ length: covariates }, (_, k) => ({
    name: `x${k + 1}`,
    values: Float64Array.from({ length: n }, () => random.normal()),
  }));
  const survival = Float64Array.from({ length: n }, (_, t) => {
    const eta = 0.9 + 0.4 * columns[0].values[t] - 0.4 * columns[1].values[t] + 0.2 * random.normal();
    return 1 / (1 + Math.exp(-eta));
  });
  const marked = new Float64Array(n).fill(Math.round(animals / n));
  const data = [
    drawCaptures({ stratum: "all", marked, survival, recapture: new Float64Array(n).fill(0.7) }, random),
  ];
  const frame = {
    strata: ["all"],
    intervals: n,
    lengths: new Float64Array(n).fill(1),
    forced: [],
    effort: undefined,
  };
  return { data, frame, recapture: constantRecapture(frame), covariates: columns };
}

/** CPU milliseconds per call, median of several rounds. */
function cpu(rounds, calls, act) {
  const times = [];
  for (let r = 0; r < rounds + 1; r++) {
    const before = process.cpuUsage();
    for (let i = 0; i < calls; i++) act();
    const { user, system } = process.cpuUsage(before);
    if (r > 0) times.push((user + system) / 1000 / calls);
  }
  return times.sort((a, b) => a - b)[Math.floor(times.length / 2)];
}

const rows = [];
for (const [occasions, covariates, animals] of [
  [20, 15, 300],
  [20, 15, 300_000],
  [40, 100, 300],
  [40, 100, 300_000],
]) {
  const problem = problemOf(occasions, covariates, animals);
  const likelihood = cjsLikelihood(problem.data, designWith(problem));
  const x = new Float64Array(likelihood.dimension).fill(0.01);
  const gradient = new Float64Array(likelihood.dimension);
  const weights = adaptiveWeights(problem, 1);
  const path = () => lassoPath(problem, weights.weights, { steps: 100, downTo: 0.001 });
  const residual = Math.max(...path().steps.map((step) => step.residual));
  const interval = fitModel(
    problem.data,
    designOf(problem.frame, intervalSurvival(problem.frame), problem.recapture),
  );
  const setting = {
    intervals: occasions - 1,
    covariates,
    interval: { minus2LogL: interval.minus2LogL, parameters: interval.parameters },
    constantParameters: 2,
    sampleSize: problem.data[0].releases,
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
  const big = covariates > 50;
  const onePath = cpu(5, big ? 3 : 20, path);
  const before = process.cpuUsage();
  for (let i = 0; i < (big ? 100 : 1000); i++) path();
  const spent = process.cpuUsage(before);
  rows.push({
    occasions,
    covariates,
    animals,
    "likelihood + gradient, µs": Number(
      (1000 * cpu(7, 20_000, () => likelihood.evaluate(x, gradient))).toPrecision(3),
    ),
    "path of 100 λ, ms": Number(onePath.toPrecision(3)),
    "1,000 paths, s": Number((((spent.user + spent.system) / 1e6) * (big ? 10 : 1)).toPrecision(3)),
    "whole procedure, ms": Number(
      cpu(3, big ? 2 : 10, () => runProcedure(problem, setting, options).byYears).toPrecision(3),
    ),
    "largest residual / λ_max": residual.toExponential(1),
  });
}
console.table(rows);
