import { describe, expect, test } from "vitest";
import { compare } from "../../src/compare/compare.ts";
import { verdict } from "../../src/compare/verdict.ts";
import { percentWords, pWords } from "../../src/compare/words.ts";
import { principalComponents } from "../../src/components/components.ts";
import { fromColumns } from "../../src/data/matrix.ts";
import { listWords } from "../../src/data/words.ts";
import { silentProgress } from "../../src/effects/effects.ts";
import { permuteYears } from "../../src/screen/permutation.ts";
import { PERMUTATION_TASK, screen } from "../../src/screen/screen.ts";
import { comparisonTable } from "../../src/tables/comparison-tables.ts";
import { drawStudy, inProcess, SCREEN } from "../support/study.ts";

async function compared(seed: number, effects: readonly number[], residual: number, permutations = 19) {
  const { problem, recapture } = drawStudy(
    seed,
    { intervals: 18, covariates: 5, marked: 40, residual },
    effects,
  );
  const options = { ...SCREEN, permutations };
  const world = { progress: silentProgress, parallel: inProcess({ [PERMUTATION_TASK]: permuteYears }) };
  const { result } = await screen(problem, recapture, options, 700, 1, world);
  const names = problem.covariates.map((one) => one.name);
  const matrix = fromColumns(
    problem.covariates.map((one) => one.values),
    18,
  );
  const components = principalComponents(matrix, names, { type: "number", number: 5 });
  return {
    problem,
    result,
    components,
    comparison: compare(problem, result, components, ["x1", "x2"], options),
  };
}

describe("selection against components", () => {
  test("all components are all covariates in another frame: same fit, effects carried back exactly", async () => {
    const { comparison, problem } = await compared(1, [-0.7, 0.5], 0.1);
    const by = new Map(comparison.candidates.map((one) => [one.key, one]));
    const [all, kept] = [by.get("all covariates"), by.get("components kept")];
    expect(kept?.fit.minus2LogL).toBeCloseTo(all?.fit.minus2LogL ?? 0, 8);
    comparison.agreement.effects.forEach((one, k) => {
      expect(one.components).toBeCloseTo(all?.fit.estimates[1 + k] ?? 0, 6);
    });
    expect(problem.covariates).toHaveLength(5);
  });

  test("constant and per-interval survival bound the deviance that anything can explain", async () => {
    const { comparison } = await compared(2, [-0.7], 0.3);
    for (const one of comparison.candidates) {
      expect(one.deviance.share).toBeGreaterThanOrEqual(-1e-9);
      expect(one.deviance.share).toBeLessThanOrEqual(1 + 1e-9);
    }
  });

  test("no F and no p beside what these data chose, both beside what was fixed before", async () => {
    const { comparison } = await compared(1, [-0.7, 0.5], 0.1);
    const table = comparisonTable(comparison);
    const at = (name: string) => table.columns.findIndex((one) => one.name === name);
    for (const row of table.rows) {
      const chosen = row[at("chosen_on_data")] === true;
      const fixed = !["constant", "each interval"].includes(String(row[at("candidate")]));
      expect(row[at("p")] !== undefined).toBe(!chosen && fixed);
      expect(row[at("f")] !== undefined).toBe(!chosen && fixed);
    }
    expect(table.rows.some((row) => row[at("p")] !== undefined)).toBe(true);
  });
});

describe("the verdict", () => {
  test("says what stands with its family-wise p, and never a p of a chosen term", async () => {
    const { comparison } = await compared(1, [-0.9, 0.8], 0.05);
    const { grade, headline, animals } = comparison.verdict;
    expect(grade).toBe("fair");
    expect(headline).toMatch(
      /^Counting years, x1 and x2 go with differences in apparent annual survival over 18 intervals/,
    );
    expect(headline).toContain("family-wise p 0.05 over 19 permutations of years of the whole procedure");
    expect(animals).toMatch(/^A criterion that counts animals \(BIC, n = \d+ releases\) chooses x1 and x2/);
  });

  test("a covariate that analysis of deviance does not confirm costs a grade and is named; so do shifts that do as well", async () => {
    const { result, comparison } = await compared(1, [-0.9, 0.8], 0.05);
    expect([...(result.secondOpinion?.names ?? [])].sort()).toEqual(["x1", "x2"]);
    expect(comparison.verdict.grade).toBe("fair");
    const doubted = {
      ...result,
      secondOpinion: { by: "analysis of deviance" as const, names: ["x1"] },
    };
    const verdictNow = verdict(doubted, comparison.agreement);
    expect(verdictNow.grade).toBe("faint");
    expect(verdictNow.headline).toMatch(/x1 and x2 may go with .* does not confirm x2\.$/);
    const rival = { ...doubted, rivals: [{ chosen: "x2", others: ["x1"] }] };
    expect(verdict(rival, comparison.agreement).grade).toBe("fair");
    // one of 18 is the study itself; another shift that does as well says that memory alone could bring it about
    expect(verdict({ ...result, shifts: 1 / 18 }, comparison.agreement).grade).toBe("fair");
    const shifted = verdict({ ...result, shifts: 2 / 18 }, comparison.agreement);
    expect(shifted.grade).toBe("faint");
    expect(shifted.headline).toMatch(/11 % of shifts do as well; permutation alone would say too much\.$/);
    const { randomIntervals } = result;
    if (randomIntervals === undefined) throw new Error("the choice is by random intervals");
    const unsettled = { ...result, randomIntervals: { ...randomIntervals, settled: false } };
    expect(verdict(unsettled, comparison.agreement).grade).toBe("faint");
    expect(verdict(unsettled, comparison.agreement).headline).toMatch(/did not reach its optimum\.$/);
  });

  test("a lone candidate was not chosen, so its analysis of deviance is the test, permutations or none", async () => {
    const { problem, recapture } = drawStudy(
      1,
      { intervals: 14, covariates: 1, marked: 40, residual: 0.1 },
      [-0.8],
    );
    const world = { progress: silentProgress, parallel: inProcess({ [PERMUTATION_TASK]: permuteYears }) };
    const options = { ...SCREEN, permutations: 0 };
    const { result } = await screen(problem, recapture, options, 500, 1, world);
    const { grade, headline } = compare(problem, result, undefined, ["x1"], options).verdict;
    expect(result.byYears.deviance.p).toBeLessThan(0.01);
    expect(grade).toBe("firm");
    expect(headline).toMatch(
      /^Counting years, x1 firmly goes with .* \(analysis of deviance F\(1, 12\) = [\d.]+, p [\de.-]+; it was the only candidate/,
    );
  });

  test("says that nothing stands where nothing does, and that nothing was tested without permutations", async () => {
    const none = await compared(9, [], 0.3);
    expect(none.result.byYears.names).toEqual([]);
    expect(none.comparison.verdict.grade).toBe("none");
    expect(none.comparison.verdict.headline).toMatch(
      /^Counting years, no covariate stands: over 18 intervals/,
    );
    const untested = await compared(1, [-0.9, 0.8], 0.05, 0);
    expect(untested.comparison.verdict.grade).toBe("not tested");
    expect(untested.comparison.verdict.headline).toContain("so this is not tested");
  });

  test("words", () => {
    expect([listWords([]), listWords(["a"]), listWords(["a", "b"]), listWords(["a", "b", "c"])]).toEqual([
      "nothing",
      "a",
      "a and b",
      "a, b and c",
    ]);
    expect([percentWords(0.726), pWords(0.5), pWords(0.0123), pWords(0.005)]).toEqual([
      "73 %",
      "0.50",
      "0.012",
      "0.005",
    ]);
  });
});
