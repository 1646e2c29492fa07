import { expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { drawCaptures, drawStrata } from "../../src/simulate/draw.ts";
import { drawStudy } from "../../src/simulate/replicate.ts";
import { actingPerSd, newlyMarked, perSd, studyDesign } from "../../src/simulate/study-design.ts";
import {
  constantRecapture,
  covariateSurvival,
  type Frame,
  type NamedColumn,
} from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { markingFrame, onLaterIntervals } from "../../src/survival/marking-frame.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { splitStatistics } from "../../src/survival/split-statistics.ts";
import type { SufficientStatistics } from "../../src/survival/statistics.ts";

const N = 6;
const all = (value: number, n = N) => new Float64Array(n).fill(value);
const MARKED = Float64Array.of(300, 0, 200, 500, 100, 400);
const stream = () => randomStream(3, "draw", 0);
const COUNTS = ["alive", "seen", "passed", "lastSeen"] as const;
const bare: Frame = { strata: ["all"], intervals: N, lengths: all(1), forced: [], effort: undefined };

/** The later and the first intervals of animals marked by `MARKED`. */
function sinceMarking(first: number, later: number): readonly SufficientStatistics[] {
  const recapture = all(0.5);
  return drawStrata(
    [
      { stratum: "later", marked: all(0), survival: all(later), recapture },
      { stratum: "first", marked: MARKED, survival: all(first), recapture, becomes: 0 },
    ],
    stream(),
  );
}

test("with equal rates the first and later intervals are one stratum cut in two, animal by animal", () => {
  const [later, first] = sinceMarking(0.7, 0.7);
  const whole = drawCaptures(
    { stratum: "all", marked: MARKED, survival: all(0.7), recapture: all(0.5) },
    stream(),
  );
  for (const key of COUNTS)
    expect(
      later[key].map((value, t) => value + first[key][t]),
      key,
    ).toEqual(whole[key]);
  expect(later.releases + first.releases).toBe(whole.releases);
  expect(first.becomes).toBe(0);
  expect(newlyMarked(first)).toEqual(MARKED);
});

test("survival of .40 in the first interval and .80 later comes back within 3 standard errors", () => {
  const frame = markingFrame(bare);
  const design = designOf(frame, covariateSurvival(frame, []), constantRecapture(frame));
  const { survival, recapture } = fitModel(sinceMarking(0.4, 0.8), design);
  for (const [row, truth] of [
    [survival[0], 0.8],
    [survival[N], 0.4],
    [recapture[0], 0.5],
  ] as const)
    expect(Math.abs(row.value - truth)).toBeLessThan(3 * row.se);
});

test("where a year ends at no occasion nobody is seen or passed over, and survival is that of all its years", () => {
  // intervals of 1, 2, 1 and 2 years
  const yearsOf = Int32Array.of(0, 1, 1, 2, 3, 3);
  const closed = Uint8Array.of(0, 1, 0, 0, 1, 0);
  const marked = Float64Array.of(3000, 2000, 0, 2500, 1000, 0);
  const truth = {
    stratum: "a",
    marked,
    survival: Float64Array.of(0.8, 0.5, 0.9, 0.6, 0.7, 0.7),
    recapture: all(0.6),
  };
  const [drawn] = drawStrata([truth], stream(), closed);
  // put together over intervals and split again, nothing is lost
  const last = [0, 2, 3, 5];
  const first = [0, 1, 3, 4];
  const over = (values: Float64Array, at: readonly number[]) => Float64Array.from(at, (t) => values[t]);
  const whole = {
    ...drawn,
    alive: over(drawn.alive, last),
    seen: over(drawn.seen, last),
    passed: over(drawn.passed, last),
    lastSeen: over(drawn.lastSeen, first),
  };
  expect(splitStatistics(whole, yearsOf)).toEqual(drawn);
  expect(newlyMarked(drawn)).toEqual(marked);
  const fit = fitModel([whole], {
    ...designOf(
      { ...bare, intervals: 4 },
      covariateSurvival({ ...bare, intervals: 4 }, indicators(4)),
      constantRecapture({ ...bare, intervals: 4 }),
    ),
    lengths: all(1, 4),
  });
  [0.8, 0.45, 0.6, 0.49].forEach((value, t) => {
    expect(Math.abs(fit.survival[t].value - value), `interval ${t + 1}`).toBeLessThan(
      3.5 * fit.survival[t].se,
    );
  });
});

/** One column for each interval but the first. */
function indicators(n: number): NamedColumn[] {
  return Array.from({ length: n - 1 }, (_, k) => ({
    name: `interval ${k + 2}`,
    values: Float64Array.from({ length: n }, (_v, t) => (t === k + 1 ? 1 : 0)),
  }));
}

test("an effect moves the rows that its covariate has values in", () => {
  const frame: Frame = { ...bare, strata: ["a", "b"] };
  // the same but for its sign in the other stratum
  const x = Float64Array.of(-1, 1, -1, 1, -1, 1);
  const covariates = [{ name: "x", values: Float64Array.of(...x, ...x.map((value) => -value)) }];
  const strata = ["a", "b"].map((stratum) => ({
    stratum,
    marked: all(4000),
    baseline: all(0),
    recapture: all(1),
  }));
  const world = { frame, recapture: { known: 1 }, covariates, strata };
  const { data } = drawStudy(world, { effects: [{ covariate: 0, perSd: 2 }], residual: 0 }, stream());
  data.forEach(({ alive, lastSeen }, g) => {
    x.forEach((value, t) => {
      const share = alive[t] / (alive[t] + lastSeen[t]);
      const up = value * (g === 0 ? 1 : -1) > 0;
      expect(share > 0.8, `stratum ${g + 1}, interval ${t + 1}`).toBe(up);
      expect(share < 0.2).toBe(!up);
    });
  });
});

test("the design of a study with time since marking marks into the first interval alone", () => {
  const frame = markingFrame(bare);
  const problem = {
    data: sinceMarking(0.4, 0.8),
    frame,
    recapture: constantRecapture(frame),
    covariates: [],
  };
  const { strata } = studyDesign(problem);
  expect(strata.map((one) => one.marked)).toEqual([all(0), MARKED]);
  expect(strata.map((one) => one.becomes)).toEqual([undefined, 0]);
  const again = drawStudy({ ...problem, strata }, { effects: [], residual: 0 }, stream());
  expect(again.data.map((one) => one.becomes)).toEqual([undefined, 0]);
  expect(newlyMarked(again.data[1])).toEqual(MARKED);
});

test("an effect is per sd over intervals, also of a covariate that acts on later intervals alone", () => {
  const frame = markingFrame(bare);
  const x = Float64Array.of(3, 5, 4, 8, 6, 7);
  const strata = [undefined, 0].map((becomes, g) => ({
    stratum: frame.strata[g],
    marked: MARKED,
    baseline: all(0),
    recapture: all(1),
    ...(becomes === undefined ? {} : { becomes }),
  }));
  const world = { frame, recapture: { known: 1 }, covariates: [], strata };
  const expected = Array.from(perSd(x));
  const later = onLaterIntervals(frame, { name: "x", values: x }).values;
  expect(Array.from(actingPerSd(world, later))).toEqual([...expected, ...all(0)]);
  expect(Array.from(actingPerSd(world, x))).toEqual(expected);
  const both = Float64Array.of(...x, ...x);
  expect(Array.from(actingPerSd(world, both))).toEqual([...expected, ...expected]);
});
