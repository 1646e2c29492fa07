import { mean, sampleSd } from "../../src/math/quantile.ts";
import { randomStream } from "../../src/math/random.ts";
import type { ScreenOptions } from "../../src/screen/options.ts";
import type { ScreenProblem } from "../../src/screen/problem.ts";
import { drawCaptures } from "../../src/simulate/draw.ts";
import { constantRecapture, type Frame, type NamedColumn } from "../../src/survival/design.ts";
import { compareRecapture } from "../../src/survival/recapture-choice.ts";

export function standardise(values: Float64Array): Float64Array {
  const [centre, sd] = [mean(values), sampleSd(values)];
  return values.map((value) => (value - centre) / sd);
}

export interface DrawnStudy {
  readonly problem: ScreenProblem;
  readonly recapture: ReturnType<typeof compareRecapture>;
}

/** A study drawn from known effects: the first covariates have the effects given, the others none. */
export function drawStudy(
  seed: number,
  shape: {
    readonly intervals: number;
    readonly covariates: number;
    readonly marked: number;
    readonly residual: number;
  },
  effects: readonly number[],
  recapture = 0.75,
): DrawnStudy {
  const n = shape.intervals;
  const random = randomStream(seed, "drawn study", 0);
  const covariates: NamedColumn[] = Array.from({ length: shape.covariates }, (_, k) => ({
    name: `x${k + 1}`,
    values: standardise(Float64Array.from({ length: n }, () => random.normal())),
  }));
  const survival = Float64Array.from({ length: n }, (_, t) => {
    const eta = effects.reduce((sum, beta, k) => sum + beta * covariates[k].values[t], 0.9);
    return 1 / (1 + Math.exp(-eta - shape.residual * random.normal()));
  });
  const data = [
    drawCaptures(
      {
        stratum: "all",
        marked: new Float64Array(n).fill(shape.marked),
        survival,
        recapture: new Float64Array(n).fill(recapture),
      },
      random,
    ),
  ];
  const frame: Frame = {
    strata: ["all"],
    intervals: n,
    lengths: new Float64Array(n).fill(1),
    forced: [],
    effort: undefined,
  };
  return {
    problem: { data, frame, recapture: constantRecapture(frame), covariates },
    recapture: compareRecapture(data, frame, "constant"),
  };
}

export const SCREEN: ScreenOptions = {
  steps: 60,
  downTo: 0.001,
  gamma: 1,
  chooseBy: "BIC",
  sampleSize: "releases",
  fit: "shrunken",
  permutations: 19,
};

/** Runs tasks in this process, in order. */
export const inProcess = (tasks: Readonly<Record<string, (input: never) => unknown>>) => ({
  map: async <Input, Output>(task: string, inputs: readonly Input[]): Promise<Output[]> =>
    inputs.map((input) => tasks[task](input as never) as Output),
});
