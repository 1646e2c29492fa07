import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Random, randomStream } from "../../src/math/random.ts";
import type { Counts } from "../../src/study/counts.ts";
import { countsFrom, firstReleases, type History } from "../../src/study/histories.ts";
import {
  constantRecapture,
  covariateRecapture,
  covariateSurvival,
  type Design,
  effortRecapture,
  type Frame,
  intervalSurvival,
  type NamedColumn,
  occasionRecapture,
  withStrata,
} from "../../src/survival/design.ts";
import { fitModel, inverseLogit } from "../../src/survival/fit.ts";
import { cjsLikelihood } from "../../src/survival/likelihood.ts";
import { markingFrame } from "../../src/survival/marking-frame.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { sinceMarking } from "../../src/survival/since-marking.ts";
import { splitStatistics } from "../../src/survival/split-statistics.ts";
import { type SufficientStatistics, sufficientStatistics } from "../../src/survival/statistics.ts";

interface Kind {
  readonly strata: number;
  readonly marking: boolean;
  readonly split: boolean;
  readonly ownCovariates: boolean;
  readonly recapture: number;
  readonly occasions: number;
  readonly seed: number;
}

const kinds = fc.record({
  strata: fc.integer({ min: 1, max: 2 }),
  marking: fc.boolean(),
  split: fc.boolean(),
  ownCovariates: fc.boolean(),
  recapture: fc.nat(7),
  occasions: fc.integer({ min: 2, max: 5 }),
  seed: fc.nat(5000),
});

function drawHistories({ strata, occasions }: Kind, random: Random): History[] {
  return Array.from({ length: strata }, (_, g) => `stratum ${g}`).flatMap((stratum) =>
    Array.from({ length: 12 }, (_, i): History => {
      const seen = Array.from({ length: occasions }, (_, t) => t).filter(() => random.uniform() < 0.5);
      return {
        stratum,
        seen: seen.length === 0 ? [i % occasions] : seen,
        lost: random.uniform() < 0.15,
        number: 1 + (i % 3),
      };
    }),
  );
}

/** Everything of one kind of study: histories, their statistics, a design and a point to look at. */
function made(kind: Kind) {
  const random = randomStream(11, "designs", kind.seed);
  const histories = drawHistories(kind, random);
  const intervals = kind.occasions - 1;
  // every second interval of two years, if split
  const yearsOf = Int32Array.from(
    Array.from({ length: intervals }, (_, t) => t).flatMap((t) => (kind.split && t % 2 === 0 ? [t, t] : [t])),
  );
  const n = yearsOf.length;
  const counts = countsFrom(histories, kind.occasions);
  const first = firstReleases(histories, kind.occasions);
  const data = statisticsOf(counts, kind.marking ? first : undefined, kind.split ? yearsOf : undefined);
  const strata = counts.map((one) => one.stratum);
  const bare: Frame = {
    strata,
    intervals: n,
    lengths: Float64Array.from({ length: n }, () => 0.5 + random.uniform()),
    forced: [],
    effort: Float64Array.from({ length: n }, () => random.normal()),
    ...(kind.split ? { yearsOf } : {}),
  };
  const frame = kind.marking ? markingFrame(bare) : bare;
  const rows = frame.strata.length * n;
  const covariate = (k: number): NamedColumn => ({
    name: `x${k}`,
    values: Float64Array.from({ length: kind.ownCovariates ? rows : n }, () => random.normal()),
  });
  const covariates = [covariate(0), covariate(1)];
  const parts = [
    constantRecapture(frame),
    occasionRecapture(frame),
    effortRecapture(frame, frame.effort!),
    covariateRecapture(frame, covariates),
    withStrata(frame, constantRecapture(frame)),
    withStrata(frame, occasionRecapture(frame)),
    withStrata(frame, effortRecapture(frame, frame.effort!)),
    { known: 0.7 },
  ];
  const design = designOf(frame, covariateSurvival(frame, covariates), parts[kind.recapture]);
  return { histories, data, frame, design, random, yearsOf };
}

function statisticsOf(
  counts: readonly Counts[],
  first: readonly Counts[] | undefined,
  yearsOf: Int32Array | undefined,
): readonly SufficientStatistics[] {
  const whole =
    first === undefined
      ? counts.map(sufficientStatistics)
      : counts.flatMap((one, g) => {
          const { later, first: newly } = sinceMarking(one, first[g], 2 * g);
          return [later, newly];
        });
  return yearsOf === undefined ? whole : whole.map((one) => splitStatistics(one, yearsOf));
}

/**
 * log Pr of a history given its first capture, animal by animal and year by year, summed over every year in which it
 * may have died unseen: the definition, not the recursion.
 */
function bruteForce(
  kind: Kind,
  design: Design,
  x: Float64Array,
  histories: readonly History[],
  yearsOf: Int32Array,
) {
  const n = design.intervals;
  const rows = design.strata * n;
  const b = design.survival.columns.length;
  const s = inverseLogit(design.survival.columns, x.subarray(0, b), rows);
  const p =
    "known" in design.recapture
      ? new Float64Array(rows).fill(design.recapture.known)
      : inverseLogit(design.recapture.columns, x.subarray(b), rows);
  const names = [...new Set(histories.map((one) => one.stratum))].sort();
  let total = 0;
  for (const { stratum, seen, lost, number } of histories) {
    const g = names.indexOf(stratum);
    const row = (year: number) => {
      if (!kind.marking) return g * n + year;
      const fresh = yearsOf[year] === seen[0];
      return (2 * g + (fresh ? 1 : 0)) * n + year;
    };
    const opens = (occasion: number) => yearsOf.indexOf(occasion);
    const lastCapture = seen[seen.length - 1];
    const start = opens(seen[0]);
    if (start < 0) continue;
    const lastYear =
      lastCapture === design.intervals ? n : lastCapture >= yearsOf[n - 1] + 1 ? n : opens(lastCapture);
    /** Pr of living through the years before `dies` and the sightings at occasions on the way; dying in that year. */
    const living = (dies: number, until: number) => {
      let probability = 1;
      for (let year = start; year < Math.min(dies, until); year++) {
        probability *= s[row(year)] ** design.lengths[year];
        const closes = yearsOf[year + 1] !== yearsOf[year];
        if (!closes) continue;
        const at = yearsOf[year] + 1;
        probability *= seen.includes(at) ? p[row(year)] : 1 - p[row(year)];
      }
      return dies < until ? probability * (1 - s[row(dies)] ** design.lengths[dies]) : probability;
    };
    let sum = 0;
    if (lost) sum = living(n, lastYear);
    else for (let dies = lastYear; dies <= n; dies++) sum += living(dies, n);
    total += number * Math.log(sum);
  }
  return total;
}

describe("every design: strata, time since marking, split years, covariates of their own, seven recapture parts", () => {
  test("the likelihood is the sum over unseen deaths, history by history (property)", () => {
    fc.assert(
      fc.property(kinds, (kind) => {
        const { histories, data, design, random, yearsOf } = made(kind);
        const f = cjsLikelihood(data, design);
        const x = Float64Array.from({ length: f.dimension }, () => random.normal());
        const value = -f.evaluate(x, new Float64Array(f.dimension));
        const expected = bruteForce(kind, design, x, histories, yearsOf);
        expect(Math.abs(value - expected)).toBeLessThan(1e-10 * (1 + Math.abs(expected)));
      }),
      { numRuns: 300 },
    );
  });

  test("gradient and information agree with central differences (property)", () => {
    fc.assert(
      fc.property(kinds, (kind) => {
        const { data, design, random } = made(kind);
        const f = cjsLikelihood(data, design);
        const d = f.dimension;
        const x = Float64Array.from({ length: d }, () => random.normal());
        const [gradient, up, down] = [0, 1, 2].map(() => new Float64Array(d));
        const curvature = new Float64Array(d * d);
        f.evaluate(x, gradient);
        f.curvature(
          Int32Array.from({ length: d }, (_, k) => k),
          curvature,
        );
        const h = 1e-5;
        for (let k = 0; k < d; k++) {
          const at = x[k];
          x[k] = at + h;
          const high = f.evaluate(x, up);
          x[k] = at - h;
          const low = f.evaluate(x, down);
          x[k] = at;
          const slope = (high - low) / (2 * h);
          expect(Math.abs(slope - gradient[k])).toBeLessThan(2e-6 * (1 + Math.abs(gradient[k])));
          for (let j = 0; j < d; j++) {
            const bend = (up[j] - down[j]) / (2 * h);
            expect(Math.abs(bend - curvature[j * d + k])).toBeLessThan(2e-6 * (1 + Math.abs(bend)));
          }
        }
      }),
      { numRuns: 100 },
    );
  });

  test("animals reordered, histories grouped or written out: the same statistics (property)", () => {
    fc.assert(
      fc.property(kinds, (kind) => {
        const { histories, data, random, yearsOf } = made(kind);
        const order = random.permutation(histories.length);
        const single = Array.from(order, (i) => histories[i]).flatMap((one) =>
          Array.from({ length: one.number }, () => ({ ...one, number: 1 })),
        );
        const again = statisticsOf(
          countsFrom(single, kind.occasions),
          kind.marking ? firstReleases(single, kind.occasions) : undefined,
          kind.split ? yearsOf : undefined,
        );
        expect(again).toEqual(data);
      }),
      { numRuns: 50 },
    );
  });
});

/** Expected counts of R animals newly marked at each occasion; later releases follow from who is met. */
function expectedCounts(first: Float64Array, later: Float64Array, p: Float64Array, marked: number) {
  const n = first.length;
  const all = { released: new Float64Array(n), seen: new Float64Array(n * n) };
  const fresh = { released: new Float64Array(n).fill(marked), seen: new Float64Array(n * n) };
  const again = new Float64Array(n + 1);
  for (let i = 0; i < n; i++) {
    let [newly, old] = [marked * first[i], again[i] * later[i]];
    for (let j = i; j < n; j++) {
      fresh.seen[i * n + j] = newly * p[j];
      all.seen[i * n + j] = (newly + old) * p[j];
      again[j + 1] += (newly + old) * p[j];
      const on = (1 - p[j]) * (later[j + 1] ?? 0);
      newly *= on;
      old *= on;
    }
    all.released[i] = marked + again[i];
  }
  const counts = ({ released, seen }: typeof all): Counts => ({
    stratum: "all animals",
    occasions: n + 1,
    released,
    seen: { rows: n, columns: n, data: seen },
    animals: Number.NaN,
  });
  return { all: counts(all), fresh: counts(fresh) };
}

const frameOf = (n: number): Frame => ({
  strata: ["all animals"],
  intervals: n,
  lengths: new Float64Array(n).fill(1),
  forced: [],
  effort: undefined,
});
const filled = (n: number, value: number) => new Float64Array(n).fill(value);

describe("truth comes back from expected counts", () => {
  test("time since marking: .40 in the first interval, .80 later, recapture .50 (methods §7)", () => {
    const n = 7;
    const { all, fresh } = expectedCounts(filled(n, 0.4), filled(n, 0.8), filled(n, 0.5), 100);
    const { first, later } = sinceMarking(all, fresh, 0);
    const frame = markingFrame(frameOf(n));
    const fit = fitModel(
      [later, first],
      designOf(frame, covariateSurvival(frame, []), constantRecapture(frame)),
    );
    expect(fit.survival[0].value).toBeCloseTo(0.8, 8);
    expect(fit.survival[n].value).toBeCloseTo(0.4, 8);
    expect(fit.recapture[0].value).toBeCloseTo(0.5, 8);
    expect(fit.names).toContain("first interval after marking");
  });

  test("without it the same counts give a survival between the two", () => {
    const n = 7;
    const { all } = expectedCounts(filled(n, 0.4), filled(n, 0.8), filled(n, 0.5), 100);
    const frame = frameOf(n);
    const fit = fitModel(
      [sufficientStatistics(all)],
      designOf(frame, covariateSurvival(frame, []), constantRecapture(frame)),
    );
    expect(fit.survival[0].value).toBeGreaterThan(0.45);
    expect(fit.survival[0].value).toBeLessThan(0.75);
  });

  test("two strata with covariates of their own", () => {
    const n = 8;
    const random = randomStream(3, "own covariates", 0);
    const x = Float64Array.from({ length: 2 * n }, () => random.normal());
    const s = x.map((value, row) => 1 / (1 + Math.exp(-(0.6 + (row >= n ? 0.5 : 0) - 0.7 * value))));
    const frame: Frame = { ...frameOf(n), strata: ["a", "b"] };
    const data = [0, 1].map((g) => {
      const own = s.subarray(g * n, (g + 1) * n);
      return sufficientStatistics(expectedCounts(own, own, filled(n, 0.6), 80).all);
    });
    const part = covariateSurvival(frame, [{ name: "rain", values: x }]);
    const fit = fitModel(data, designOf(frame, part, constantRecapture(frame)));
    expect([...fit.estimates.subarray(0, 3)].map((value) => Number(value.toFixed(7)))).toEqual([
      0.6, 0.5, -0.7,
    ]);
    expect(fit.recapture[0].value).toBeCloseTo(0.6, 8);
  });

  test("intervals split into years, each with its own covariate: φ is the product over years", () => {
    // intervals of 1, 2, 1, 3 and 1 years
    const yearsOf = Int32Array.of(0, 1, 1, 2, 3, 3, 3, 4);
    const random = randomStream(3, "split", 0);
    const x = Float64Array.from(yearsOf, () => random.normal());
    const s = x.map((value) => 1 / (1 + Math.exp(-(0.9 - 0.6 * value))));
    const phi = new Float64Array(5).fill(1);
    yearsOf.forEach((interval, year) => {
      phi[interval] *= s[year];
    });
    const counts = expectedCounts(phi, phi, filled(5, 0.55), 200).all;
    const frame: Frame = { ...frameOf(8), yearsOf };
    const data = [splitStatistics(sufficientStatistics(counts), yearsOf)];
    const part = covariateSurvival(frame, [{ name: "rain", values: x }]);
    const fit = fitModel(data, designOf(frame, part, constantRecapture(frame)));
    expect(fit.estimates[0]).toBeCloseTo(0.9, 7);
    expect(fit.estimates[1]).toBeCloseTo(-0.6, 7);
    expect(fit.recapture[0].value).toBeCloseTo(0.55, 7);
    // one survival per interval: the years of an interval share it, and their product is φ
    const each = fitModel(data, designOf(frame, intervalSurvival(frame), constantRecapture(frame)));
    expect(each.parameters).toBe(6);
    const products = new Float64Array(5).fill(1);
    each.survival.forEach((one) => {
      products[yearsOf[one.interval]] *= one.value;
    });
    products.forEach((value, t) => {
      expect(value).toBeCloseTo(phi[t], 7);
    });
  });
});
