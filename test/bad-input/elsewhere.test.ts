import { describe, expect, test } from "vitest";
import { diagnose } from "../../src/collinearity/diagnose.ts";
import type { CollinearityOptions } from "../../src/collinearity/options.ts";
import { principalComponents, scoreRows } from "../../src/components/components.ts";
import { chooseKept } from "../../src/components/keep.ts";
import { applyPreparation } from "../../src/covariates/apply.ts";
import type { RawColumn } from "../../src/covariates/columns.ts";
import { undoRecipe } from "../../src/covariates/recipe.ts";
import { readPreparation } from "../../src/covariates/recorded.ts";
import { fromRows } from "../../src/data/matrix.ts";
import { CoveyError } from "../../src/errors.ts";
import { describeLayer } from "../../src/layers/layer.ts";
import { lostWorker, workerFile } from "../../src/pipeline/effects/parallel.ts";
import { assembleVariable } from "../../src/stations/assemble.ts";
import type { Block } from "../../src/stations/block.ts";
import { effectsOf, inMemory } from "../layers/effects.ts";

// Errors that the pipeline's own checks keep a user of the command line from, but not a user of the library or of a
// hand-written record: each raised where it stands.

async function raised(act: () => unknown): Promise<string> {
  try {
    await act();
  } catch (error) {
    if (error instanceof CoveyError) return error.facts.name;
    throw error;
  }
  return "nothing";
}

const collinear: CollinearityOptions = {
  warn: { correlation: 0.7, inflation: 10, condition: 30 },
  cluster: 0.7,
  decisions: [],
};
const decided = (...decisions: CollinearityOptions["decisions"]) => ({ ...collinear, decisions });
const square = fromRows([
  [1, 2],
  [2, 1],
  [3, 5],
  [4, 3],
]);
const STICK = { type: "broken stick" } as const;
const column = {
  name: "rain",
  theme: "rain",
  unit: "mm",
  definition: "rain",
  transform: null,
  detrend: "linear",
  trend: [0, 1],
  centre: 0,
  scale: 1,
  filled: [],
  range: null,
  last: null,
};
const recorded = (one: object) => ({ layout: 1, lastInterval: "a to b", end: null, columns: [one] });

/** A TIFF of directories, each of 1 × 1 bytes and the tags given (id, type, values of that type's size). */
function tiff(pages: readonly (readonly (readonly [number, number, readonly number[]])[])[]): Uint8Array {
  const bytes = new DataView(new ArrayBuffer(4096));
  bytes.setUint32(0, 0x49492a00);
  bytes.setUint32(4, 8, true);
  let at = 8;
  let free = 1024;
  pages.forEach((extra, p) => {
    const basic = [
      [256, 3, [1]],
      [257, 3, [1]],
      [258, 3, [8]],
      [259, 3, [1]],
      [262, 3, [1]],
      [273, 4, [4000]],
      [277, 3, [1]],
      [278, 3, [1]],
      [279, 4, [1]],
    ] as const;
    const tags = [...basic, ...extra];
    bytes.setUint16(at, tags.length, true);
    at += 2;
    for (const [id, type, values] of tags) {
      bytes.setUint16(at, id, true);
      bytes.setUint16(at + 2, type, true);
      bytes.setUint32(at + 4, values.length, true);
      if (type === 3) bytes.setUint16(at + 8, values[0], true);
      else if (type === 4) bytes.setUint32(at + 8, values[0], true);
      else {
        bytes.setUint32(at + 8, free, true);
        for (const value of values) {
          bytes.setFloat64(free, value, true);
          free += 8;
        }
      }
      at += 12;
    }
    bytes.setUint32(at, p + 1 < pages.length ? at + 4 : 0, true);
    at += 4;
  });
  return new Uint8Array(bytes.buffer);
}
const layerOf = (bytes: Uint8Array) => describeLayer(inMemory(bytes), effectsOf({}).files);

function block(kind: Block["kind"]): Block {
  const none = new Int32Array(0);
  const stations = { codes: 0, ids: ["0101"] };
  const rows = { starts: none, ends: none, raw: new Float64Array(0), stations };
  return { source: 0, entry: 0, variable: "rain", kind, unit: "mm", scale: 1, covers: "day", ...rows };
}

const source = { file: "rain.csv", lines: async () => [] };

const CASES: readonly (readonly [name: string, act: () => unknown])[] = [
  ["collinearity.constant-column", () => diagnose(fromRows([[1], [1], [1]]), ["a"], collinear)],
  ["collinearity.too-few-rows", () => diagnose(fromRows([[1], [2]]), ["a"], collinear)],
  ["collinearity.unknown-covariate", () => diagnose(square, ["a", "b"], decided({ drop: "c", note: "" }))],
  [
    "collinearity.decision-contradicts",
    () =>
      diagnose(
        square,
        ["a", "b"],
        decided({ drop: "a", keep: "b", note: "" }, { drop: "b", keep: "a", note: "" }),
      ),
  ],
  ["components.missing-cell", () => principalComponents(fromRows([[1], [Number.NaN], [3]]), ["a"], STICK)],
  ["components.constant-column", () => principalComponents(fromRows([[1], [1], [1]]), ["a"], STICK)],
  ["components.too-few-rows", () => principalComponents(fromRows([[1], [2]]), ["a"], STICK)],
  [
    "components.columns-differ",
    () => scoreRows(principalComponents(square, ["a", "b"], STICK), fromRows([[1]])),
  ],
  ["components.keep-value", () => chooseKept({ type: "number", number: 0 }, [1], { rows: 4, columns: 1 })],
  ["covariates.recipes-unreadable", () => readPreparation({ layout: 99 }, "recipes.json")],
  [
    "covariates.apply-undated",
    () => {
      const undated = [{ name: "b to c", start: Number.NaN, end: Number.NaN, length: 1, index: 0 }];
      const rain: RawColumn = {
        ...column,
        values: Float64Array.of(1),
        reasons: [undefined],
        base: undefined,
      };
      return applyPreparation(readPreparation(recorded(column), "recipes.json"), [rain], undated);
    },
  ],
  [
    "covariates.no-start",
    () =>
      undoRecipe(
        readPreparation(recorded({ ...column, detrend: "difference" }), "r").columns[0],
        [0],
        [2001],
      ),
  ],
  ["layers.unsupported-pages", () => layerOf(tiff([[], []]))],
  ["layers.unsupported-georeference", () => layerOf(tiff([[[33922, 12, [0, 0, 0, 8, 50, 0]]]]))],
  ["machine.not-built", () => workerFile("file:///nowhere/at/all/parallel.js")],
  [
    "machine.worker-lost",
    () => {
      throw lostWorker(new Error("Worker terminated: out of memory"));
    },
  ],
  [
    "stations.kinds-differ",
    () => assembleVariable([block("total"), block("mean")], { keep: "none", except: [] }, [source]),
  ],
];

describe("errors behind the pipeline's own checks", () => {
  test.each(CASES)("%s", async (name, act) => {
    expect(await raised(act)).toBe(name);
  });
});
