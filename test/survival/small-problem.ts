import { randomStream } from "../../src/math/random.ts";
import { drawCaptures } from "../../src/simulate/draw.ts";
import {
  constantRecapture,
  effortRecapture,
  type Frame,
  occasionRecapture,
} from "../../src/survival/design.ts";
import type { RandomIntervalProblem } from "../../src/survival/effects-design.ts";
import { sufficientStatistics } from "../../src/survival/statistics.ts";
import { countsOf } from "../support/reference.ts";

export const normals = (n: number, replicate: number) => {
  const random = randomStream(8, "laplace test", replicate);
  return Float64Array.from({ length: n }, () => random.normal());
};

/** Random counts with unequal intervals; the recapture part goes by the seed (constant, each occasion, effort, known). */
export function smallProblem(n: number, strata: number, seed: number, animals = 8): RandomIntervalProblem {
  const random = randomStream(8, "laplace counts", seed);
  const frame: Frame = {
    strata: Array.from({ length: strata }, (_, g) => `stratum ${g}`),
    intervals: n,
    lengths: Float64Array.from(normals(n, seed + 1), (z) => Math.exp(z / 3)),
    forced: [],
    effort: normals(n, seed + 2),
  };
  const counts = () => {
    const seen = Array.from({ length: n }, (_, i) =>
      Array.from({ length: n }, (_, j) =>
        j < i ? 0 : Math.floor((1 + random.uniform() * animals) / (1 + j - i)),
      ),
    );
    return countsOf(
      seen.map((row) => row.reduce((a, b) => a + b, 0) + 1 + Math.floor((random.uniform() * animals) / 2)),
      seen,
    );
  };
  return {
    data: frame.strata.map(() => sufficientStatistics(counts())),
    frame,
    recapture: [
      constantRecapture(frame),
      occasionRecapture(frame),
      effortRecapture(frame, frame.effort!),
      { known: 0.8 },
    ][seed % 4],
    covariates: [0, 1].map((k) => ({ name: `x${k}`, values: normals(n, seed + 10 + k) })),
  };
}

/** Drawn captures with survival near .65 that varies between intervals by `sd`, recapture near .7; parts as above. */
export function drawnProblem(
  n: number,
  strata: number,
  seed: number,
  marked: number,
  sd: number,
): RandomIntervalProblem {
  const { frame, recapture, covariates } = smallProblem(n, strata, seed);
  const random = randomStream(8, "drawn captures", seed);
  const residual = frame.lengths.map((length) => (sd * random.normal()) / Math.sqrt(length));
  const survival = residual.map((value, t) => (1 / (1 + Math.exp(-0.6 - value))) ** frame.lengths[t]);
  return {
    data: frame.strata.map((stratum) =>
      drawCaptures(
        {
          stratum,
          marked: new Float64Array(n).fill(marked),
          survival,
          recapture: new Float64Array(n).fill(0.7),
        },
        random,
      ),
    ),
    frame,
    recapture: "known" in recapture ? { known: 0.7 } : recapture,
    covariates,
  };
}
