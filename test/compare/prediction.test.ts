import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compare, FOLD_TASK, foldChunks } from "../../src/compare/compare.ts";
import { type FoldRules, predictLeftOut } from "../../src/compare/fold.ts";
import { scorePredictions } from "../../src/compare/prediction.ts";
import { quickSubset } from "../../src/compare/quick-subset.ts";
import { residualVariance } from "../../src/compare/residual-variance.ts";
import { principalComponents } from "../../src/components/components.ts";
import { fromColumns } from "../../src/data/matrix.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { solveNull } from "../../src/screen/path.ts";
import { designWith, type ScreenProblem } from "../../src/screen/problem.ts";
import type { ProcedureSetting } from "../../src/screen/procedure.ts";
import { refitsOf } from "../../src/screen/refits.ts";
import { screen } from "../../src/screen/screen.ts";
import { bestSmallSubset } from "../../src/screen/subsets.ts";
import { fitModel, totalReleases } from "../../src/survival/fit.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { twoStep } from "../../src/survival/two-step.ts";
import { drawStudy, inProcess, SCREEN } from "../support/study.ts";

const RULES: FoldRules = {
  collinearity: { warn: { correlation: 0.7, inflation: 10, condition: 30 }, cluster: 0.7, decisions: [] },
  components: { keep: { type: "number", number: 2 }, groups: undefined },
  seed: 1,
};
const OPTIONS = { ...SCREEN, permutations: 0 };

function settingOf(
  problem: ScreenProblem,
  interval: { minus2LogL: number; parameters: number },
): ProcedureSetting {
  return {
    intervals: problem.frame.intervals,
    covariates: problem.covariates.length,
    interval,
    constantParameters: fitModel(problem.data, designWith(problem, [])).parameters,
    sampleSize: totalReleases(problem.data),
  };
}

function studyOf(seed: number, residual = 0.3, covariates = 4, intervals = 14) {
  const { problem, recapture } = drawStudy(seed, { intervals, covariates, marked: 40, residual }, [-0.7]);
  return { problem, setting: settingOf(problem, recapture.intervalFit), two: twoStep(problem), recapture };
}

describe("variance between years (Paule & Mandel 1982)", () => {
  test("solves its moment equation, and is 0 where the errors are no larger than sampling", () => {
    fc.assert(
      fc.property(
        fc.array(
          fc.tuple(
            fc.double({ min: -3, max: 3, noNaN: true }),
            fc.double({ min: 0.01, max: 1, noNaN: true }),
          ),
          {
            minLength: 4,
            maxLength: 30,
          },
        ),
        (pairs) => {
          const e = pairs.map(([one]) => one);
          const v = pairs.map(([, one]) => one);
          const lengths = pairs.map((_, t) => 1 + (t % 2));
          const s2 = residualVariance(e, v, lengths, e.length - 2);
          const sum = e.reduce((total, one, t) => total + one ** 2 / (v[t] + s2 / lengths[t]), 0);
          if (s2 === 0) expect(sum).toBeLessThanOrEqual(e.length - 2 + 1e-9);
          else expect(sum).toBeCloseTo(e.length - 2, 6);
        },
      ),
    );
  });

  test("equal sampling variances: mean square minus sampling variance, by hand", () => {
    // Σ e²/(v + s²) = 3 with e = ±2, ±1, ±2 and v = 0.5: s² = 9/3 − 0.5
    expect(residualVariance([2, -1, 2], [0.5, 0.5, 0.5], [1, 1, 1], 3)).toBeCloseTo(2.5, 9);
  });
});

describe("the best small subset by a quick first look", () => {
  test("is that of full enumeration", () => {
    for (const seed of [1, 2, 3, 4]) {
      const { problem, setting, two } = studyOf(seed, 0.3, 7, 16);
      const nothing = solveNull(problem, cjsLikelihood(problem.data, designWith(problem)));
      const refit = refitsOf(problem, nothing.x);
      expect(quickSubset(problem, two, refit, setting, OPTIONS)).toEqual(
        bestSmallSubset(refit, setting, OPTIONS)?.set,
      );
    }
  });
});

describe("an interval left out", () => {
  test("its covariates change nothing of what is said of the others", () => {
    const { problem, setting, two } = studyOf(5);
    const t = 6;
    const changed: ScreenProblem = {
      ...problem,
      covariates: problem.covariates.map((one, k) => ({
        ...one,
        values: one.values.map((value, i) => (i === t ? 37 * (k + 1) : value)),
      })),
    };
    const folds = [problem, changed].map((one) =>
      predictLeftOut({ problem: one, setting, options: OPTIONS, rules: RULES, two, intervals: [t] }),
    );
    const [[a], [b]] = folds;
    expect(a.predictions.map((one) => one.key)).toContain("components screened");
    a.predictions.forEach((one, i) => {
      expect(b.predictions[i].key).toBe(one.key);
      expect(b.predictions[i].terms).toEqual(one.terms);
      one.logits.forEach((value, u) => {
        if (u !== t) expect(b.predictions[i].logits[u]).toBeCloseTo(value, 9);
      });
      // and what it says of the interval itself does move, where there is a term to move it
      if (one.key === "all covariates")
        expect(Math.abs(b.predictions[i].logits[t] - one.logits[t])).toBeGreaterThan(0.1);
    });
  });

  test("known recapture and very many animals: the predictions are those of weighted least squares", () => {
    const drawn = drawStudy(8, { intervals: 12, covariates: 2, marked: 4e5, residual: 0 }, [-0.5, 0.3], 1);
    const problem: ScreenProblem = { ...drawn.problem, recapture: { known: 1 } };
    const two = twoStep(problem);
    const n = 12;
    const weight = Float64Array.from({ length: n }, (_, t) => 1 / two.covariance.data[t * n + t]);
    const chunk = { problem, setting: settingOf(problem, drawn.recapture.intervalFit), options: OPTIONS };
    const folds = predictLeftOut({
      ...chunk,
      rules: { ...RULES, components: undefined },
      two,
      intervals: [0, 5, 11],
    });
    for (const { interval, predictions } of folds) {
      const said = predictions.find((one) => one.key === "all covariates");
      const rows = Array.from({ length: n }, (_, t) => [
        1,
        ...problem.covariates.map((one) => one.values[t]),
      ]);
      const beta = weighted(
        rows.filter((_, t) => t !== interval),
        two.logits.filter((_, t) => t !== interval),
        weight.filter((_, t) => t !== interval),
      );
      const expected = rows[interval].reduce((sum, x, j) => sum + x * beta[j], 0);
      expect(said?.logits[interval]).toBeCloseTo(expected, 4);
    }
  });

  test("scores: the constant model gains nothing over itself; a true effect foretells, noise does not", () => {
    const { problem, setting, two } = studyOf(21, 0.1, 4, 18);
    const folds = predictLeftOut({
      problem,
      setting,
      options: OPTIONS,
      rules: RULES,
      two,
      intervals: Array.from({ length: 18 }, (_, t) => t),
    });
    const { candidates, intervals, unscored } = scorePredictions(folds, two, problem.frame.lengths);
    expect(intervals + unscored.length).toBe(18);
    const by = new Map(candidates.map((one) => [one.key, one]));
    expect(by.get("constant")).toMatchObject({ share: 0, gain: 0, gainError: 0 });
    expect(by.get("chosen by years")?.share).toBeGreaterThan(0.4);
    expect(by.get("chosen by years")?.gain).toBeGreaterThan(2);
    // the chosen term was chosen anew without each interval
    expect(by.get("chosen by years")?.rows.every((row) => row.terms.includes("x1"))).toBe(true);
  });
});

describe("the comparison with its folds", () => {
  test("any cut into chunks gives the same; the paragraph is never stronger than the evidence", async () => {
    const { problem, recapture } = studyOf(31, 0.5, 4, 12);
    const noise = { ...problem, covariates: problem.covariates.slice(1) };
    const world = { progress: silentProgress, parallel: inProcess({ [FOLD_TASK]: predictLeftOut }) };
    const { result } = await screen(noise, recapture, OPTIONS, 500, 1, world);
    const chunks = foldChunks(noise, result, OPTIONS, RULES);
    expect(chunks).toHaveLength(12);
    const apart = chunks.flatMap(predictLeftOut);
    const together = predictLeftOut({ ...chunks[0], intervals: chunks.flatMap((one) => one.intervals) });
    expect(together).toEqual(apart);
    const names = noise.covariates.map((one) => one.name);
    const components = principalComponents(
      fromColumns(
        noise.covariates.map((one) => one.values),
        12,
      ),
      names,
      { type: "number", number: 2 },
    );
    const { paragraph, verdict, candidates } = compare(noise, result, components, names, OPTIONS, apart);
    expect(["none", "not tested"]).toContain(verdict.grade);
    expect(paragraph).toMatch(/What follows describes these data/);
    expect(paragraph).not.toMatch(/firmly|\bgoe?s? with\b|foretells better/);
    expect(paragraph).toContain(verdict.headline);
    expect(paragraph).toMatch(/is not a cause\.$/);
    const ridge = candidates.find((one) => one.key === "ridge");
    expect(ridge?.chosenOnData).toBe(true);
    expect(ridge?.fit.parameters).toBeGreaterThan(2);
    expect(ridge?.fit.parameters).toBeLessThan(2 + 3 + 1e-9);
  });
});

/** (X'WX)⁻¹X'Wy by elimination. */
function weighted(x: readonly (readonly number[])[], y: ArrayLike<number>, w: ArrayLike<number>): number[] {
  const k = x[0].length;
  const a = Array.from({ length: k }, (_, i) =>
    Array.from({ length: k + 1 }, (_col, j) =>
      x.reduce((sum, row, t) => sum + w[t] * row[i] * (j < k ? row[j] : y[t]), 0),
    ),
  );
  for (let i = 0; i < k; i++)
    for (let r = 0; r < k; r++) {
      if (r === i) continue;
      const f = a[r][i] / a[i][i];
      for (let j = i; j <= k; j++) a[r][j] -= f * a[i][j];
    }
  return a.map((row, i) => row[k] / row[i]);
}
