import { describe, expect, test } from "vitest";
import { principalComponents } from "../../src/components/components.ts";
import { componentsJson, readComponents, recordedScores } from "../../src/components/recorded.ts";
import { fromRows } from "../../src/data/matrix.ts";
import { InputError } from "../../src/errors.ts";

const names = ["a", "b", "c"];
const matrix = fromRows([
  [1, 2, 0.5],
  [2, 1.5, -1],
  [4, 0.2, 2],
  [3, 3, 1],
  [0, 1, 0],
]);
const made = principalComponents(matrix, names, { type: "number", number: 2 });
const recorded = readComponents(JSON.parse(JSON.stringify(componentsJson(made))), "components.json");

describe("recorded components", () => {
  test("the recorded rows get back their own scores, whatever the order of the columns", () => {
    expect(recordedScores(recorded, matrix, names)).toEqual(made.scores);
    const turned = fromRows([0, 1, 2, 3, 4].map((i) => [2, 0, 1].map((k) => matrix.data[i * 3 + k])));
    expect(recordedScores(recorded, turned, ["c", "a", "b"])).toEqual(made.scores);
  });

  test("a missing cell leaves the row's scores missing, and no other's", () => {
    const scores = recordedScores(
      recorded,
      fromRows([
        [Number.NaN, 1, 1],
        [1, 2, 0.5],
      ]),
      names,
    );
    expect(scores.data[0]).toBeNaN();
    expect(scores.data[3]).toBeCloseTo(made.scores.data[0], 12);
  });

  test("a covariate that is not there, and contents that are no components, are refused by name", () => {
    expect(() => recordedScores(recorded, matrix, ["a", "b", "x"])).toThrow(InputError);
    const good = componentsJson(made) as Record<string, unknown>;
    for (const bad of [
      undefined,
      [],
      { ...good, layout: 2 },
      { ...good, kept: 9 },
      { ...good, scale: [1, 0, 1] },
      { ...good, loadings: [[1], [2], [3]] },
    ])
      expect(() => readComponents(bad, "f.json")).toThrow(
        /components.recorded-unreadable|recorded components/,
      );
  });
});
