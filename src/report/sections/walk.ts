import { isDated } from "../figures/axis-time.ts";
import { type Html, html, markup } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { extent } from "../scale.ts";

/** A slider along the path; hidden until the script is there to move it. */
export function walkBlock(input: ReportInput): Html | undefined {
  const { screened, matrix } = input;
  if (screened === undefined || screened.path.lambdaMax === 0) return undefined;
  const { path, choice, names, intervalFit, constantFit } = screened;
  const strata = new Set(intervalFit.survival.map((one) => one.stratum)).size;
  const n = intervalFit.survival.length / strata;
  const columns = names.map((name) => matrix.names.indexOf(name));
  // with forced covariates the curve needs columns that are not handed in by name: then only the names are shown
  const forced = constantFit.names.slice(strata).some((name) => matrix.names.includes(name));
  if (forced || columns.some((k) => k < 0) || matrix.standard.rows !== n) return undefined;
  const curve = (step: (typeof path.steps)[number]) =>
    Array.from({ length: n }, (_, t) => {
      let eta = step.estimates[0];
      names.forEach((_name, k) => {
        eta += step.coefficients[k] * matrix.standard.data[t * matrix.standard.columns + columns[k]];
      });
      return Math.round(1000 / (1 + Math.exp(-eta))) / 1000;
    });
  const at = input.intervals.map((one, t) => (isDated(input) ? (one.start + one.end) / 2 : t + 1));
  const [low, high] = extent(at);
  const data = {
    lambdas: path.steps.map((one) => Number(one.lambda.toPrecision(4))),
    names,
    active: path.steps.map((one) => one.active),
    survival: path.steps.map(curve),
    // positions in the small drawing, 0 … 1
    at: at.map((one) => Math.round(10_000 * ((one - low) / (high - low || 1))) / 10_000),
    own: intervalFit.survival.slice(0, n).map((one) => Math.round(1000 * one.value) / 1000),
  };
  // "<" must not end the script element early
  const json = JSON.stringify(data).replace(/</g, "\\u003c");
  const stratum = intervalFit.survival[0]?.stratum ?? "";
  return html`<div class="walk" hidden data-start="${choice.index}"><h3>Walk the path</h3><label>Penalty, weaker to the right <input type="range" min="0" max="${path.steps.length - 1}" value="${choice.index}"></label><output></output><svg viewBox="0 0 700 150" style="max-width:700px;width:100%" role="img" aria-label="Apparent annual survival at the penalty chosen with the slider"></svg><p>Line: apparent annual survival at this penalty${strata > 1 ? `, ${stratum}` : ""}, from 0 to 1; dots: one survival per interval. For looking only: the choice stands above.</p><script type="application/json">${markup(json)}</script></div>`;
}
