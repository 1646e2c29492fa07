import { describe, expect, test } from "vitest";
import { silentProgress } from "../../src/effects/effects.ts";
import { InputError } from "../../src/errors.ts";
import { randomStream } from "../../src/math/random.ts";
import { permuteYears } from "../../src/screen/permutation.ts";
import { PERMUTATION_TASK, type ScreenResult, screen } from "../../src/screen/screen.ts";
import type { Frame, NamedColumn } from "../../src/survival/design.ts";
import type { RecaptureChoice } from "../../src/survival/options.ts";
import { compareRecapture, recapturePart } from "../../src/survival/recapture-choice.ts";
import { type SufficientStatistics, sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf } from "../support/reference.ts";
import { drawStudy, inProcess, SCREEN, standardise } from "../support/study.ts";

const effects = {
  progress: silentProgress,
  parallel: inProcess({ [PERMUTATION_TASK]: permuteYears }),
};
const N = 10;
const options = { ...SCREEN, steps: 40, permutations: 2 };
const normals = (n: number, replicate: number) => {
  const random = randomStream(21, "degenerate screen", replicate);
  return standardise(Float64Array.from({ length: n }, () => random.normal()));
};
const columns = (n: number, count: number): NamedColumn[] =>
  Array.from({ length: count }, (_, k) => ({ name: `noise ${k + 1}`, values: normals(n, k) }));
const same = (n: number, value: number) => new Array<number>(n).fill(value);
const nextTime = (numbers: readonly number[]) =>
  numbers.map((number, i) => numbers.map((_, j) => (i === j ? number : 0)));
const dataOf = (released: readonly number[], seen: readonly (readonly number[])[], stratum = "all") =>
  sufficientStatistics(countsOf(released, seen, stratum));

async function screened(
  data: readonly SufficientStatistics[],
  covariates: readonly NamedColumn[],
  choice: RecaptureChoice = "choose",
  permutations = options.permutations,
) {
  const frame: Frame = {
    strata: data.map((one) => one.stratum),
    intervals: data[0].alive.length,
    lengths: new Float64Array(data[0].alive.length).fill(1),
    forced: [],
    effort: undefined,
  };
  const recapture = compareRecapture(data, frame, choice);
  const problem = { data, frame, recapture: recapturePart(frame, recapture.chosen), covariates };
  return {
    ...(await screen(problem, recapture, { ...options, permutations }, Number.NaN, 1, effects)),
    problem,
  };
}

/** Every number on the path is one, and the certificates hold. */
function sound(result: ScreenResult): void {
  expect(result.path.steps.length).toBe(options.steps);
  for (const step of result.path.steps) {
    expect(step.stopped).toBe("optimum");
    expect(step.residual).toBeLessThanOrEqual(1e-8);
    expect(step.estimates.every(Number.isFinite)).toBe(true);
    expect(Number.isFinite(step.minus2LogL) && Number.isFinite(step.objective)).toBe(true);
  }
  for (const row of result.choice.rows)
    expect(Number.isFinite(row.bic) && Number.isFinite(row.minus2LogLRefit)).toBe(true);
  expect(Number.isFinite(result.years.gain)).toBe(true);
}

const nameOf = async (run: Promise<unknown>): Promise<string> => {
  try {
    await run;
  } catch (error) {
    if (error instanceof InputError) return error.facts.name;
    throw error;
  }
  return "nothing was thrown";
};

describe("degenerate data through the screen", () => {
  test("refused by name: nobody met again, one animal met once, two occasions, effort missing, a gap", async () => {
    const x = columns(N, 3);
    const ordinary = drawStudy(5, { intervals: N, covariates: 1, marked: 20, residual: 0 }, []).problem.data;
    const gap = {
      name: "gap",
      values: Float64Array.from(normals(N, 50), (v, t) => (t === 3 ? Number.NaN : v)),
    };
    expect(await nameOf(screened([dataOf(same(N, 10), nextTime(same(N, 0)))], x))).toBe(
      "survival.nobody-met-again",
    );
    const oneAnimal = dataOf([1, 1, ...same(N - 2, 0)], nextTime([1, ...same(N - 1, 0)]));
    expect(await nameOf(screened([oneAnimal], x))).toBe("screen.no-criterion");
    expect(await nameOf(screened([dataOf([20], [[8]])], [{ name: "x", values: new Float64Array(1) }]))).toBe(
      "screen.too-few-intervals",
    );
    expect(await nameOf(screened(ordinary, x, "effort"))).toBe("survival.no-effort");
    expect(await nameOf(screened(ordinary, [...x, gap]))).toBe("survival.column-not-finite");
  });

  test("all always seen: λ_max is 0, nothing is chosen, every start agrees", async () => {
    for (const animals of [10, 1]) {
      const { result, findings } = await screened(
        [dataOf(same(N, animals), nextTime(same(N, animals)))],
        columns(N, 3),
      );
      sound(result);
      expect(result.path.lambdaMax).toBe(0);
      expect([result.byAnimals.names, result.byYears.names]).toEqual([[], []]);
      expect(result.constantFit.minus2LogL).toBeCloseTo(0, 6);
      expect(findings.some((one) => one.kind === "at-bound")).toBe(true);
      expect(result.permutation?.p).toBe(1);
      expect(result.starts.agree).toBe(12);
    }
  });

  test("no covariates, and a column that does not vary: the model without covariates, 12 starts agreeing", async () => {
    const { data } = drawStudy(6, { intervals: N, covariates: 1, marked: 20, residual: 0.1 }, []).problem;
    const none = await screened(data, []);
    sound(none.result);
    expect([none.result.path.lambdaMax, none.result.byAnimals.names]).toEqual([0, []]);
    expect(none.result.starts.agree).toBe(12);
    const still = await screened(data, [{ name: "still", values: new Float64Array(N) }, ...columns(N, 2)]);
    sound(still.result);
    expect(still.result.weights.by).toBe("ridge");
    expect(still.result.starts.agree).toBe(12);
    for (const step of still.result.path.steps) expect(step.coefficients[0]).toBe(0);
  });

  test("equal and opposite columns: the criterion and the choice do not change, the path stays certified", async () => {
    const { problem } = drawStudy(7, { intervals: N, covariates: 3, marked: 60, residual: 0.05 }, [-0.8]);
    const alone = await screened(problem.data, problem.covariates);
    for (const sign of [1, -1]) {
      const again = { name: "again", values: problem.covariates[0].values.map((value) => sign * value) };
      const { result } = await screened(problem.data, [...problem.covariates, again]);
      sound(result);
      expect(result.weights.by).toBe("ridge");
      const likeOne = result.byYears.names.map((name) => (name === "again" ? "x1" : name));
      expect(likeOne).toEqual(alone.result.byYears.names);
      expect(result.byYears.fit.minus2LogL).toBeCloseTo(alone.result.byYears.fit.minus2LogL, 7);
    }
  });

  test("a covariate that separates is found, its effect is named as a bound and not printed with an error", async () => {
    const values = standardise(Float64Array.from({ length: N }, (_, t) => (t % 2 === 0 ? 1 : -1)));
    const seen = Array.from({ length: N }, (_, t) => (t % 2 === 0 ? 20 : 8 + (t % 3)));
    const { result } = await screened(
      [dataOf(same(N, 20), nextTime(seen))],
      [{ name: "separates", values }, ...columns(N, 2)],
    );
    sound(result);
    expect(result.byYears.names).toContain("separates");
    const { fit } = result.byYears;
    expect(fit.atBound).toContain("separates");
    expect(fit.se[fit.names.indexOf("separates")]).toBeNaN();
    expect(fit.survival[1].se).toBeGreaterThan(0);
  });

  test("an occasion with no captures, a stratum with no recaptures, a stratum with no releases", async () => {
    const seen = Array.from({ length: N }, (_, i) =>
      Array.from({ length: N }, (_, j) =>
        j < i || j === 4 || i === 5 ? 0 : Math.round(14 * 0.4 ** (j - i)),
      ),
    );
    const gap = dataOf(
      Array.from({ length: N }, (_, i) => (i === 5 ? 0 : 30)),
      seen,
    );
    const empty = await screened([gap], columns(N, 3));
    sound(empty.result);
    expect(empty.result.recapture.chosen).toBe("each occasion");
    expect(empty.result.intervalFit.atBound).toContain("recapture at occasion 6");
    const { problem } = drawStudy(8, { intervals: N, covariates: 3, marked: 60, residual: 0.05 }, [-0.8]);
    const alone = await screened(problem.data, problem.covariates);
    for (const releases of [10, 0]) {
      const second = dataOf(same(N, releases), nextTime(same(N, 0)), "b");
      const { result, findings } = await screened([...problem.data, second], problem.covariates);
      sound(result);
      expect(result.byYears.names).toEqual(alone.result.byYears.names);
      expect(result.byYears.fit.minus2LogL).toBeCloseTo(alone.result.byYears.fit.minus2LogL, 5);
      const told = findings.find((one) => one.message.includes("b against"));
      expect(told?.kind).toBe(releases > 0 ? "at-bound" : "not-separable");
    }
  });

  // Minutes before the starts were kept sparse; the limit below only stops a hang.
  test("300 covariates over 20 intervals: certified, at most as many at a time as there are intervals", async () => {
    const { problem } = drawStudy(9, { intervals: 20, covariates: 1, marked: 30, residual: 0.1 }, [-0.8]);
    const { result } = await screened(
      problem.data,
      [...problem.covariates, ...columns(20, 299)],
      "constant",
      0,
    );
    sound(result);
    expect(result.weights.by).toBe("ridge");
    expect(Math.max(...result.path.steps.map((step) => step.active.length))).toBeLessThan(20);
    expect(result.byYears.names.length).toBeLessThanOrEqual(6);
    expect(result.starts.agree).toBeGreaterThan(0);
  }, 60_000);
});
