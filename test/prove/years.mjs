// How often the choice by years is right, row by row, in one table. Resumable: shares so far are kept in a state file, and
// rows advance together in blocks, so that the table is whole at any time. Needs a build.
//   node test/prove/years.mjs [replicates a row = 2000] [state file = /tmp/covey-years.json] [part of a row's name]
// Streams go by row and replicate: the same numbers come out however often the run is broken off.
import { existsSync, readFileSync, renameSync, writeFileSync } from "node:fs";
import { fUpper } from "../../dist/math/distributions.js";
import { mean, sampleSd } from "../../dist/math/quantile.js";
import { randomStream } from "../../dist/math/random.js";
import { outcomeInOrder } from "../../dist/screen/permutation.js";
import { designWith } from "../../dist/screen/problem.js";
import { correlationOf, runProcedure } from "../../dist/screen/procedure.js";
import { chooseByYears } from "../../dist/screen/years.js";
import { drawCaptures } from "../../dist/simulate/draw.js";
import { constantRecapture, intervalSurvival, occasionRecapture } from "../../dist/survival/design.js";
import { fitModel } from "../../dist/survival/fit.js";
import { fitRandomInterval } from "../../dist/survival/random-interval.js";
import { designOf } from "../../dist/survival/recapture-choice.js";

const REPLICATES = Number(process.argv[2] ?? 2000);
const STATE = process.argv[3] ?? "/tmp/covey-years.json";
const ONLY = process.argv[4] ?? "";
const BLOCK = 50;
const SEED = 40_000;
/**
 * Permutations of the verdict's test, and how many may do as well for p ≤ .1 and p ≤ .05: exact levels with so few, too. The
 * verdict itself takes 199.
 */
const [PERMUTATIONS, TENTH, TWENTIETH] = [39, 3, 1];
/** In rows where nothing acts, so many replicates are also tested as the verdict is. */
const TESTED = 2000;
const options = {
  steps: 40,
  downTo: 0.001,
  gamma: 1,
  chooseBy: "BIC",
  sampleSize: "releases",
  fit: "shrunken",
  permutations: 0,
};

const standard = (values) => {
  const [centre, sd] = [mean(values), sampleSd(values)];
  return values.map((value) => (value - centre) / sd);
};
/** A stationary series of unit variance; memory 0 is white noise. */
function series(n, memory, random) {
  const out = Float64Array.from({ length: n }, () => random.normal());
  for (let t = 1; t < n; t++) out[t] = memory * out[t - 1] + Math.sqrt(1 - memory * memory) * out[t];
  return out;
}

/** 22 newly marked at each occasion, recapture .75 (or from .55 to .9 by occasion), mean annual survival .72. */
function study(covariates, effects, residual, random, kind = "plain") {
  const n = residual.length;
  // intervals of one year, or half a year, one and two by turns
  const lengths = Float64Array.from({ length: n }, (_, t) => (kind === "unequal" ? [1, 0.5, 2][t % 3] : 1));
  const seen = Float64Array.from({ length: n }, () =>
    kind === "recapture" ? 0.55 + 0.35 * random.uniform() : 0.75,
  );
  const frame = { strata: ["all"], intervals: n, lengths, forced: [], effort: undefined };
  const survival = residual.map((value, t) => {
    const eta = effects.reduce(
      (sum, effect, k) => sum + effect * covariates[k][t],
      Math.log(0.72 / 0.28) + value / Math.sqrt(lengths[t]),
    );
    return (1 + Math.exp(-eta)) ** -lengths[t];
  });
  const marked = new Float64Array(n).fill(22);
  return {
    data: [drawCaptures({ stratum: "all", marked, survival, recapture: seen }, random)],
    frame,
    recapture: kind === "recapture" ? occasionRecapture(frame) : constantRecapture(frame),
    covariates: covariates.map((values, k) => ({ name: `x${k + 1}`, values })),
  };
}

/** What each rule chooses. */
function choices(problem) {
  const n = problem.frame.intervals;
  const K = problem.covariates.length;
  const interval = fitModel(
    problem.data,
    designOf(problem.frame, intervalSurvival(problem.frame), problem.recapture),
  );
  const constantParameters = fitModel(problem.data, designWith(problem, [])).parameters;
  const setting = {
    intervals: n,
    covariates: K,
    interval: { minus2LogL: interval.minus2LogL, parameters: interval.parameters },
    constantParameters,
    sampleSize: problem.data[0].releases,
  };
  const found = runProcedure(problem, setting, options);
  const rules = {
    "choice by years": found.byYears.chosen,
    "analysis of deviance": chooseByYears(found.candidates, found.refit, setting, correlationOf(problem))
      .chosen,
    "lasso, BIC": found.byAnimals,
  };
  const df = interval.parameters - constantParameters - K;
  if (K === 2 && df > 0) {
    const both = found.refit([0, 1]);
    const between = (both - interval.minus2LogL) / df;
    rules["F < .05"] = [0, 1].filter((k) => fUpper((found.refit([1 - k]) - both) / between, 1, df) < 0.05);
  }
  return { rules, setting, gain: found.byYears.gain, unsettled: found.unsettled };
}

/** Permutations of years that do as well, counted until more than TENTH do. */
function doAsWell(problem, setting, gain, random) {
  let count = 0;
  for (let i = 0; i < PERMUTATIONS && count <= TENTH; i++)
    if (outcomeInOrder({ problem, setting, options }, random.permutation(setting.intervals)).gain >= gain)
      count++;
  return count;
}

const theme = [0, 0, 0, 0, 1, 1, 1, 2, 2, 2];
const themes = (size, sd, kind) => (n) => (random) => {
  const centres = Array.from({ length: 3 }, () => series(n, 0, random));
  const covariates = theme.map((which) => {
    const own = series(n, 0, random);
    return standard(own.map((e, t) => Math.sqrt(0.8) * centres[which][t] + Math.sqrt(0.2) * e));
  });
  const effects = theme.map((_, k) => (k === 0 ? size : k === 4 ? -size : 0));
  const residual = series(n, 0, random).map((z) => sd * z);
  return study(covariates, effects, residual, random, kind);
};
const pair = (effect, sd, rho, ar) => (random) => {
  const [a, e, z] = [0, 1, 2].map(() => series(17, ar, random));
  const other = a.map((value, t) => rho * value + Math.sqrt(1 - rho * rho) * e[t]);
  return study(
    [standard(a), standard(other)],
    [effect, 0],
    z.map((one) => sd * one),
    random,
  );
};
const noise = (sd, ar) => (random) =>
  study(
    Array.from({ length: 14 }, () => standard(series(20, ar, random))),
    [],
    series(20, ar, random).map((z) => sd * z),
    random,
  );

const pairOutcomes = {
  "exactly x1": (set) => set.join() === "0",
  "x2 wrongly": (set) => set.includes(1),
  nothing: (set) => set.length === 0,
};
const themeOutcomes = {
  "false theme": (set) => set.some((k) => theme[k] === 2),
  "hit 1": (set) => set.includes(0),
  "hit 2": (set) => set.includes(4),
  "themes exact": (set) => [...new Set(set.map((k) => theme[k]))].sort().join() === "0,1",
  exact: (set) => set.join() === "0,4",
};
const anything = { anything: (set) => set.length > 0 };

const ROWS = [
  ...[
    [-0.5, 0, 0, 0],
    [-0.5, 0.3, 0, 0],
    [-0.5, 0.5, 0, 0],
    [-0.3, 0, 0, 0],
    [0, 0.5, 0, 0],
    [-0.8, 0.5, 0, 0],
    [-0.5, 0.5, 0.7, 0],
    [0, 0.5, 0, 0.6],
  ].map(([effect, sd, rho, ar]) => ({
    name: `two covariates: effect ${effect}, sd ${sd}, r ${rho}, AR ${ar}`,
    make: pair(effect, sd, rho, ar),
    outcomes: pairOutcomes,
  })),
  ...[
    [0.3, 0],
    [0.5, 0],
    [0.3, 0.6],
    [0.5, 0.6],
  ].map(([sd, ar]) => ({
    name: `14 noise covariates: sd ${sd}, AR ${ar}`,
    make: noise(sd, ar),
    outcomes: anything,
    tested: true,
  })),
  ...[17, 25].flatMap((n) =>
    [
      [0.5, "plain"],
      [0.8, "plain"],
      [0.8, "recapture"],
      [0.8, "unequal"],
    ].map(([size, kind]) => ({
      name: `three themes: n ${n}, effects ${size}, ${kind}`,
      make: themes(size, 0.3, kind)(n),
      outcomes: themeOutcomes,
    })),
  ),
  ...[0, 0.3, 0.5].map((sd) => ({
    name: `coverage: sd ${sd}`,
    cover: (random) => {
      const x = standard(series(17, 0, random));
      const problem = study(
        [x],
        [-0.5],
        series(17, 0, random).map((z) => sd * z),
        random,
      );
      const slope = fitRandomInterval(problem, [0]).coefficients[1];
      const plain = fitModel(problem.data, designWith(problem, [0]));
      return {
        "random intervals": slope.low <= -0.5 && -0.5 <= slope.high,
        "no random effects": Math.abs(plain.estimates[1] + 0.5) <= 1.959964 * plain.se[1],
      };
    },
  })),
].filter((row) => row.name.includes(ONLY));

const state = existsSync(STATE) ? JSON.parse(readFileSync(STATE, "utf8")) : {};

function count(kept, rule, what, holds) {
  const key = `${rule}|${what}`;
  kept.counts[key] = (kept.counts[key] ?? 0) + (holds ? 1 : 0);
}

function once(row, kept, r) {
  const random = randomStream(SEED, row.name, r);
  if (row.cover !== undefined) {
    for (const [rule, holds] of Object.entries(row.cover(random))) count(kept, rule, "covered", holds);
    kept.done++;
    return;
  }
  const problem = row.make(random);
  let found;
  try {
    found = choices(problem);
  } catch (error) {
    // a path that reaches no optimum refuses the data set for all rules
    if (error.facts?.name !== "screen.no-optimum") throw error;
    kept.refused = (kept.refused ?? 0) + 1;
    return;
  }
  kept.done++;
  kept.unsettled = (kept.unsettled ?? 0) + (found.unsettled > 0 ? 1 : 0);
  for (const [rule, set] of Object.entries(found.rules))
    for (const [what, holds] of Object.entries(row.outcomes)) count(kept, rule, what, holds(set));
  if (row.tested && r < TESTED) {
    kept.tested = (kept.tested ?? 0) + 1;
    const chosen = found.rules["choice by years"].length > 0;
    const as = chosen ? doAsWell(problem, found.setting, found.gain, random) : PERMUTATIONS;
    count(kept, "verdict", "p ≤ .1", as <= TENTH);
    count(kept, "verdict", "p ≤ .05", as <= TWENTIETH);
  }
}

for (let from = 0; from < REPLICATES; from += BLOCK)
  for (const row of ROWS) {
    state[row.name] ??= { next: 0, done: 0, counts: {} };
    const kept = state[row.name];
    if (kept.next > from) continue;
    const began = process.cpuUsage();
    for (; kept.next < Math.min(from + BLOCK, REPLICATES); kept.next++) once(row, kept, kept.next);
    const { user, system } = process.cpuUsage(began);
    kept.cpu = (kept.cpu ?? 0) + (user + system) / 1000;
    writeFileSync(`${STATE}.next`, JSON.stringify(state));
    renameSync(`${STATE}.next`, STATE);
  }

for (const row of ROWS) {
  const { done, counts, tested, cpu, unsettled, refused } = state[row.name];
  console.log(
    `${row.name} (${done} data sets${refused ? `, ${refused} refused` : ""}${unsettled ? `, ${unsettled} with a fit short of its optimum` : ""}; ${(cpu / done).toFixed(0)} ms CPU each)`,
  );
  const rules = [...new Set(Object.keys(counts).map((key) => key.split("|")[0]))];
  for (const rule of rules) {
    const of = rule === "verdict" ? tested : done;
    const shares = Object.entries(counts)
      .filter(([key]) => key.startsWith(`${rule}|`))
      .map(([key, n]) => `${key.split("|")[1]} ${(n / of).toFixed(3)}`);
    console.log(
      `  ${(rule === "verdict" ? `tested by years (${tested})` : rule).padEnd(24)} ${shares.join("  ")}`,
    );
  }
}
