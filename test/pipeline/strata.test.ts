import { describe, expect, test } from "vitest";
import { survivalStrata } from "../../src/pipeline/strata.ts";
import { parsePipeline } from "../../src/spec/parse.ts";
import { stratumLabel, stratumValues } from "../../src/study/histories.ts";
import { covariateSurvival, type Frame, intervalSurvival, withStrata } from "../../src/survival/design.ts";
import { markingFrame } from "../../src/survival/marking-frame.ts";

const spec = (survival: string) =>
  parsePipeline(
    `covey: 1
study: { title: Strata }
data: .
output: out
captures: { layout: zero-one, file: c.csv, animal: mark, columns: [a, b, c], strata: [sex, site] }
ready-made: { w: { file: w.csv, interval: i, columns: { n: { unit: cm }, s: { unit: cm } } } }
covariates: [{ name: n, theme: t, from: w.n }, { name: s, theme: t, from: w.s }]
survival: ${survival}
`,
    "p.yaml",
  );
const strata = ["f", "m"].flatMap((sex) =>
  ["north", "south"].map((site) => stratumLabel(["sex", "site"], [sex, site])),
);
const frameOf = (survival: string): Frame => ({
  strata,
  intervals: 2,
  lengths: new Float64Array([1, 1]),
  forced: [],
  effort: undefined,
  ...survivalStrata(spec(survival), strata, 2),
});
const part = (one: { readonly names: readonly string[]; readonly columns: readonly Float64Array[] }) =>
  one.names.map((name, k) => `${name}: ${Array.from(one.columns[k]).join("")}`);

test("the values of a label come back, with commas and underscores in them", () => {
  const columns = ["age_at_ringing", "site", "sex"];
  for (const values of [
    ["adult", "north, upper", "f"],
    ["1, 2", "", "site: m"],
  ])
    expect(stratumValues(columns, stratumLabel(columns, values))).toEqual(values);
  expect(stratumValues([], "all animals")).toEqual([]);
});

describe("which strata shift survival", () => {
  test("all columns of the captures where nothing is said", () => {
    expect(covariateSurvival(frameOf("{}"), []).names.slice(1)).toEqual([
      "sex: f, site: south against sex: f, site: north",
      "sex: m, site: north against sex: f, site: north",
      "sex: m, site: south against sex: f, site: north",
    ]);
  });

  test("those named; recapture keeps all; none where the list is empty", () => {
    const frame = frameOf("{ strata: [site] }");
    expect(part(covariateSurvival(frame, [])).slice(1)).toEqual([
      "site: south against site: north: 00110011",
    ]);
    expect(withStrata(frame, { words: "", names: [], columns: [] }).names.length).toBe(3);
    expect(covariateSurvival(frameOf("{ strata: [] }"), []).names.length).toBe(1);
  });

  test("with time since marking each of them stands for later and first intervals", () => {
    expect(part(covariateSurvival(markingFrame(frameOf("{ strata: [site] }")), [])).slice(1)).toEqual([
      "site: south against site: north: 0000111100001111",
      "first interval after marking: 0011001100110011",
    ]);
  });
});

describe("one survival per interval beside covariates by stratum", () => {
  const own = "covariates by stratum: { x: { by: site, values: { north: n, south: s } } }";

  test("is one per interval and level that covariates or survival tell apart", () => {
    expect(part(intervalSurvival(frameOf(`{ strata: [site], ${own} }`)))).toEqual([
      "survival of interval 1, sex: f, site: north: 10001000",
      "survival of interval 1, sex: f, site: south: 00100010",
      "survival of interval 2, sex: f, site: north: 01000100",
      "survival of interval 2, sex: f, site: south: 00010001",
    ]);
    expect(intervalSurvival(frameOf(`{ strata: [], ${own} }`)).names.length).toBe(4);
    expect(intervalSurvival(frameOf(`{ ${own} }`)).names.length).toBe(8);
  });

  test("with time since marking the first interval still differs by one coefficient", () => {
    const { names } = intervalSurvival(markingFrame(frameOf(`{ strata: [site], ${own} }`)));
    expect(names.length).toBe(5);
    expect(names[4]).toBe("first interval after marking");
  });
});
