// With recapture known to be 1 the screen is a weighted binomial lasso: the same path of 100 λ beside R's glmnet on the same
// data, one process each, warm, median CPU time. Needs R with glmnet. Run: npm run build && node test/bench/known-recapture.mjs
import { execFileSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { randomStream } from "../../dist/math/random.js";
import { lassoPath } from "../../dist/screen/path.js";
import { drawCaptures } from "../../dist/simulate/draw.js";

const SCRIPT = fileURLToPath(new URL("glmnet.R", import.meta.url));

function problemOf(occasions, covariates, animals) {
  const n = occasions - 1;
  const random = randomStream(2, "bench, recapture known", occasions);
  const columns = Array.from({ length: covariates }, (_, k) => {
    const values = Float64Array.from({ length: n }, () => random.normal());
    const centre = values.reduce((a, b) => a + b, 0) / n;
    const sd = Math.sqrt(values.reduce((a, b) => a + (b - centre) ** 2, 0) / (n - 1));
    return { name: `x${k + 1}`, values: values.map((value) => (value - centre) / sd) };
  });
  const survival = Float64Array.from({ length: n }, (_, t) => {
    const eta = 0.9 + 0.4 * columns[0].values[t] - 0.4 * columns[1].values[t] + 0.2 * random.normal();
    return 1 / (1 + Math.exp(-eta));
  });
  const marked = new Float64Array(n).fill(Math.round(animals / n));
  const truth = { stratum: "all", marked, survival, recapture: new Float64Array(n).fill(1) };
  const frame = {
    strata: ["all"],
    intervals: n,
    lengths: new Float64Array(n).fill(1),
    forced: [],
    effort: undefined,
  };
  return { data: [drawCaptures(truth, random)], frame, recapture: { known: 1 }, covariates: columns };
}

/** Median CPU ms of a call. */
function cpu(rounds, calls, act) {
  const times = [];
  for (let r = 0; r < rounds + 3; r++) {
    const before = process.cpuUsage();
    for (let i = 0; i < calls; i++) act();
    const { user, system } = process.cpuUsage(before);
    if (r >= 3) times.push((user + system) / 1000 / calls);
  }
  return times.sort((a, b) => a - b)[Math.floor(times.length / 2)];
}

/** −log L + λ Σ|β| from binomial counts: the same objective for both. */
function objective(problem, lambda, intercept, beta) {
  const [{ alive, lastSeen }] = problem.data;
  let value = 0;
  alive.forEach((survived, t) => {
    let eta = intercept;
    problem.covariates.forEach((one, k) => {
      eta += one.values[t] * beta[k];
    });
    const log1p = Math.log1p(Math.exp(-Math.abs(eta)));
    value += survived * (Math.max(0, -eta) + log1p) + lastSeen[t] * (Math.max(0, eta) + log1p);
  });
  return value + lambda * beta.reduce((sum, one) => sum + Math.abs(one), 0);
}

const rows = [];
const folder = mkdtempSync(join(tmpdir(), "covey-bench-"));
for (const [occasions, covariates, animals] of [
  [20, 15, 300],
  [20, 15, 300_000],
  [40, 100, 300],
  [40, 100, 300_000],
]) {
  const problem = problemOf(occasions, covariates, animals);
  const weights = new Float64Array(covariates).fill(1);
  const act = () => lassoPath(problem, weights, { steps: 100, downTo: 0.001 });
  const path = act();
  const ours = cpu(15, covariates > 50 ? 2 : 10, act);
  const n = occasions - 1;
  const [{ alive, lastSeen }] = problem.data;
  const write = (name, lines) => writeFileSync(join(folder, name), `${lines.join("\n")}\n`);
  write(
    "x.csv",
    Array.from({ length: n }, (_, t) => problem.covariates.map((one) => one.values[t]).join(",")),
  );
  write(
    "y.csv",
    Array.from({ length: n }, (_, t) => `${lastSeen[t]},${alive[t]}`),
  );
  write(
    "lambda.csv",
    path.steps.map((step) => step.lambda),
  );
  for (const threshold of [1e-14, 1e-10]) {
    const told = execFileSync("Rscript", [SCRIPT, folder, String(threshold), "15"], { encoding: "utf8" });
    const [theirs, steps] = told.trim().split(/\s+/).slice(-2).map(Number);
    const coef = readFileSync(join(folder, "coef.csv"), "utf8")
      .trim()
      .split("\n")
      .map((line) => line.split(",").map(Number));
    let [distance, above] = [0, 0];
    path.steps.slice(0, steps).forEach((step, i) => {
      step.coefficients.forEach((value, k) => {
        distance = Math.max(distance, Math.abs(value - coef[k + 1][i]));
      });
      const other = objective(
        problem,
        step.lambda,
        coef[0][i],
        coef.slice(1).map((row) => row[i]),
      );
      above = Math.max(above, (other - step.objective) / step.objective);
    });
    rows.push({
      occasions,
      covariates,
      animals,
      threshold,
      "covey, ms": Number(ours.toPrecision(3)),
      "glmnet, ms": Number(theirs.toPrecision(3)),
      "covey / glmnet": Number((ours / theirs).toFixed(2)),
      "λ solved by glmnet": steps,
      "largest distance of a coefficient": distance.toExponential(1),
      "glmnet's objective above ours, relative": above.toExponential(1),
      "our largest residual / λ_max": Math.max(...path.steps.map((one) => one.residual)).toExponential(1),
    });
  }
}
rmSync(folder, { recursive: true });
console.table(rows);
