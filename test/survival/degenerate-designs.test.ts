import { describe, expect, test } from "vitest";
import { InputError } from "../../src/errors.ts";
import { countsFrom, firstReleases, type History } from "../../src/study/histories.ts";
import { covariateSurvival, type Frame } from "../../src/survival/design.ts";
import { type Fit, fitModel } from "../../src/survival/fit.ts";
import { markingFrame } from "../../src/survival/marking-frame.ts";
import { profileInterval } from "../../src/survival/profile-interval.ts";
import { compareRecapture, designOf, recapturePart } from "../../src/survival/recapture-choice.ts";
import { sinceMarking } from "../../src/survival/since-marking.ts";
import { splitStatistics } from "../../src/survival/split-statistics.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";

const OCCASIONS = 6;
const animal = (...seen: number[]): History => ({ stratum: "all", seen, lost: false, number: 5 });
const always = [0, 1, 2, 3, 4].map((t) => animal(...Array.from({ length: OCCASIONS - t }, (_, i) => t + i)));
const mixed = [
  animal(0, 1, 3),
  animal(0, 2),
  animal(1, 2, 5),
  animal(1),
  animal(2, 4, 5),
  animal(2),
  animal(3, 4),
  animal(3),
  animal(4, 5),
  animal(4),
  animal(0),
];
const x = { name: "x", values: Float64Array.of(1, -1, 0.5, -0.5, 0.2) };

interface Row {
  readonly title: string;
  readonly histories: readonly History[];
  readonly covariates: readonly { name: string; values: Float64Array }[];
  /** The refusal's name, or what must hold of the fit. */
  readonly expect: string | ((fit: Fit) => void);
}

const TABLE: readonly Row[] = [
  {
    title: "nobody met again",
    histories: [animal(0), animal(1), animal(3)],
    covariates: [],
    expect: "survival.nobody-met-again",
  },
  {
    title: "one animal, met once",
    histories: [animal(0)],
    covariates: [],
    expect: "survival.nobody-met-again",
  },
  {
    title: "one animal met again",
    histories: [animal(0, 1)],
    covariates: [],
    expect: (fit) => expect([...fit.atBound, ...fit.notSeparable.flat()].length).toBeGreaterThan(0),
  },
  {
    title: "all always seen: rates at 1, named",
    histories: always,
    covariates: [],
    expect: (fit) => {
      expect(fit.atBound.length).toBeGreaterThan(0);
      for (const one of fit.survival) expect(one.value).toBeGreaterThan(0.999);
    },
  },
  {
    title: "duplicate columns: named as not to be told apart, the fit itself right",
    histories: mixed,
    covariates: [x, { ...x, name: "x again" }],
    expect: (fit) => {
      expect(fit.notSeparable.flat()).toEqual(expect.arrayContaining(["x", "x again"]));
      expect(fit.parameters).toBe(fit.names.length - 1);
    },
  },
  {
    title: "a gap in a column",
    histories: mixed,
    covariates: [{ name: "gap", values: Float64Array.of(1, Number.NaN, 0, 0, 1) }],
    expect: "survival.column-not-finite",
  },
];

const frame: Frame = {
  strata: ["all"],
  intervals: OCCASIONS - 1,
  lengths: new Float64Array(OCCASIONS - 1).fill(1),
  forced: [],
  effort: undefined,
};
/** The third interval is of two years. */
const yearsOf = Int32Array.of(0, 1, 2, 2, 3, 4);

/** The fit, no number of which may be NaN but standard errors and intervals of what is named. */
function fitOf({ histories, covariates }: Row, marking: boolean, split: boolean): Fit {
  const counts = countsFrom(histories, OCCASIONS);
  const parts = sinceMarking(counts[0], firstReleases(histories, OCCASIONS)[0], 0);
  const whole = marking ? [parts.later, parts.first] : [sufficientStatistics(counts[0])];
  const data = split ? whole.map((one) => splitStatistics(one, yearsOf)) : whole;
  const bare: Frame = split
    ? { ...frame, intervals: 6, lengths: new Float64Array(6).fill(1), yearsOf }
    : frame;
  const shape = marking ? markingFrame(bare) : bare;
  const columns = covariates.map(({ name, values }) => ({
    name,
    values: split ? Float64Array.from(yearsOf, (t) => values[t]) : values,
  }));
  const { chosen } = compareRecapture(data, shape, "choose");
  const design = designOf(shape, covariateSurvival(shape, columns), recapturePart(shape, chosen));
  const fit = fitModel(data, design);
  for (const value of fit.estimates) expect(Number.isFinite(value)).toBe(true);
  expect(Number.isFinite(fit.minus2LogL)).toBe(true);
  const named = [...fit.atBound, ...fit.notSeparable.flat()];
  fit.names.forEach((name, k) => {
    expect(Number.isFinite(fit.se[k]) || named.includes(name)).toBe(true);
    if (!named.includes(name))
      expect(profileInterval(data, design, fit, k).low).toBeLessThan(fit.estimates[k]);
  });
  for (const one of [...fit.survival, ...fit.recapture]) expect(Number.isFinite(one.value)).toBe(true);
  return fit;
}

describe.each([
  { marking: false, split: false },
  { marking: true, split: false },
  { marking: false, split: true },
  { marking: true, split: true },
])("degenerate data, time since marking $marking, split years $split", ({ marking, split }) => {
  test.each(TABLE)("$title: a right answer or a named refusal", (row) => {
    if (typeof row.expect === "string") {
      let name: string | undefined;
      try {
        fitOf(row, marking, split);
      } catch (error) {
        if (!(error instanceof InputError)) throw error;
        name = error.facts.name;
      }
      expect(name).toBe(row.expect);
    } else row.expect(fitOf(row, marking, split));
  });
});
