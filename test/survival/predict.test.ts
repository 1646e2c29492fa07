import { expect, test } from "vitest";
import { constantRecapture, covariateSurvival, type Frame } from "../../src/survival/design.ts";
import { fitModel } from "../../src/survival/fit.ts";
import { markingFrame, onLaterIntervals } from "../../src/survival/marking-frame.ts";
import { predictedSurvival } from "../../src/survival/predict.ts";
import { designOf } from "../../src/survival/recapture-choice.ts";
import { drawnProblem, normals } from "./small-problem.ts";

const N = 12;
const { data, frame: two } = drawnProblem(N, 2, 0, 40, 0.2);
const frame: Frame = { ...two, lengths: new Float64Array(N).fill(1), effort: undefined };
const x = { name: "x", values: normals(N, 3) };
const fitted = (forced: Frame["forced"], covariates: Frame["forced"]) => {
  const own = { ...frame, forced };
  const design = designOf(own, covariateSurvival(own, covariates), constantRecapture(own));
  return { own, fit: fitModel(data, design) };
};
const logit = (rate: number) => Math.log(rate / (1 - rate));

test("at the values that intervals had, prediction and interval are those of the fit, chosen or forced", () => {
  for (const forced of [true, false]) {
    const { own, fit } = fitted(forced ? [x] : [], forced ? [] : [x]);
    const [{ name, points }] = predictedSurvival(own, forced ? [] : [x], fit);
    expect(name).toBe("x");
    frame.strata.forEach((stratum, g) => {
      const curve = points.filter((one) => one.stratum === stratum);
      // the ends of the observed range are values that an interval had
      const [least, most] = [Math.min(...x.values), Math.max(...x.values)];
      for (const value of [least, most]) {
        const row = fit.survival[g * N + x.values.indexOf(value)];
        const point = curve.find((one) => one.value === value);
        expect(point?.survival).toBeCloseTo(row.value, 10);
        expect(point?.low).toBeCloseTo(row.low, 8);
        expect(point?.high).toBeCloseTo(row.high, 8);
      }
      const seen = curve.filter((one) => one.observed);
      expect([seen[0].value, seen[seen.length - 1].value]).toEqual([least, most]);
      expect(curve.filter((one) => !one.observed).length).toBe(4);
      curve.forEach(({ value }, i) => {
        if (i > 0) expect(value).toBeGreaterThan(curve[i - 1].value);
      });
    });
  }
});

test("ĉ of 4 doubles the interval on the logit, ĉ below 1 leaves it", () => {
  const { own, fit } = fitted([], [x]);
  const widths = [1, 4, 0.25].map((inflation) =>
    predictedSurvival(own, [x], fit, inflation)[0].points.map(({ low, high }) => logit(high) - logit(low)),
  );
  widths[0].forEach((width, i) => {
    expect(widths[1][i] / width).toBeCloseTo(2, 8);
    expect(widths[2][i]).toBe(width);
  });
});

test("each of two covariates is followed with the other at its mean", () => {
  const y = { name: "y", values: normals(N, 4) };
  const { own, fit } = fitted([], [x, y]);
  const at = (name: string) => fit.estimates[fit.names.indexOf(name)];
  const curves = predictedSurvival(own, [x, y], fit);
  expect(curves.map((one) => one.name)).toEqual(["x", "y"]);
  for (const { name, points } of curves)
    for (const { stratum, value, survival } of points) {
      const own = stratum === frame.strata[0] ? 0 : fit.estimates[1];
      expect(logit(survival)).toBeCloseTo(fit.estimates[0] + own + at(name) * value, 10);
    }
});

test("a covariate that acts on later intervals predicts nothing in the first one after marking", () => {
  const whole = markingFrame(frame);
  const later = onLaterIntervals(whole, x);
  const design = designOf(whole, covariateSurvival(whole, [later]), constantRecapture(whole));
  const apart = data.flatMap((one, g) => [
    one,
    // nobody newly marked: the rows stand, and say nothing
    {
      ...one,
      alive: empty(),
      seen: empty(),
      passed: empty(),
      lastSeen: empty(),
      releases: 0,
      becomes: 2 * g,
    },
  ]);
  const [{ points }] = predictedSurvival(whole, [later], fitModel(apart, design));
  expect([...new Set(points.map((one) => one.stratum))]).toEqual(
    frame.strata.map((one) => `${one}, later intervals`),
  );
});

const empty = () => new Float64Array(N);
