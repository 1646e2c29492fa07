import { describe, expect, test } from "vitest";
import { randomStream } from "../../src/math/random.ts";
import { drawCaptures } from "../../src/simulate/draw.ts";
import { analysisOfDeviance } from "../../src/survival/analysis-of-deviance.ts";
import { covariateSurvival, type Frame } from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { compareRecapture, designOf, recapturePart } from "../../src/survival/recapture-choice.ts";

/**
 * The recapture trap: weather acts on being seen (0.7 on the logit per sd, mean recapture .6) and not on survival
 * (.72), 18 occasions, 22 newly marked at each. How often is the weather's analysis of deviance on survival "significant"
 * under a constant recapture, and under what `recapture: choose` takes?
 */
const DATA_SETS = 1000;
const N = 17;

function draw(replicate: number, onRecapture: number, onSurvival: number) {
  const random = randomStream(5, `recapture trap ${onRecapture} ${onSurvival}`, replicate);
  const x = Float64Array.from({ length: N }, () => random.normal());
  const logistic = (eta: number) => 1 / (1 + Math.exp(-eta));
  const data = [
    drawCaptures(
      {
        stratum: "all",
        marked: new Float64Array(N).fill(22),
        survival: x.map((value) => logistic(Math.log(0.72 / 0.28) + onSurvival * value)),
        recapture: x.map((value) => logistic(Math.log(0.6 / 0.4) + onRecapture * value)),
      },
      random,
    ),
  ];
  const covariate = { name: "weather", values: x };
  const frame: Frame = {
    strata: ["all"],
    intervals: N,
    lengths: new Float64Array(N).fill(1),
    forced: [],
    effort: undefined,
    recaptureCovariates: [covariate],
  };
  return { data, frame, covariate };
}

function fooled(onRecapture: number, onSurvival: number) {
  const shares = { constant: 0, chosen: 0, "each occasion": 0 };
  const parts = new Map<string, number>();
  for (let replicate = 0; replicate < DATA_SETS; replicate++) {
    const { data, frame, covariate } = draw(replicate, onRecapture, onSurvival);
    const compared = compareRecapture(data, frame, "choose");
    parts.set(compared.chosen, (parts.get(compared.chosen) ?? 0) + 1);
    for (const [key, part] of [
      ["constant", "constant"],
      ["chosen", compared.chosen],
      ["each occasion", "each occasion"],
    ] as const) {
      const recapture = recapturePart(frame, part);
      const fitted = (covariates: (typeof covariate)[]) =>
        fitModel(data, designOf(frame, covariateSurvival(frame, covariates), recapture));
      const interval = compareRecapture(data, frame, part).intervalFit;
      if (analysisOfDeviance(fitted([]), fitted([covariate]), interval).p < 0.05) shares[key]++;
    }
  }
  const share = (value: number) => Number((value / DATA_SETS).toFixed(3));
  const row = {
    "on recapture": onRecapture,
    "on survival": onSurvival,
    "F < .05, constant": share(shares.constant),
    "F < .05, as chosen by default": share(shares.chosen),
    "F < .05, each occasion": share(shares["each occasion"]),
    chose: [...parts].map(([part, count]) => `${part} ${share(count)}`).join(", "),
  };
  console.table([row]);
  return row;
}

describe("weather that acts on recapture alone", () => {
  test("fools a constant recapture in most data sets and the default about as often as its level", () => {
    const row = fooled(0.7, 0);
    expect(row["F < .05, constant"]).toBeGreaterThan(0.4);
    expect(row["F < .05, as chosen by default"]).toBeLessThan(0.1);
  });

  test("with no weather on either nothing is fooled, with weather on survival the default still sees it", () => {
    expect(fooled(0, 0)["F < .05, as chosen by default"]).toBeLessThan(0.08);
    const acting = fooled(0, -0.5);
    expect(acting["F < .05, as chosen by default"]).toBeGreaterThan(0.8 * acting["F < .05, constant"]);
  });
});
