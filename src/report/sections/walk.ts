import type { Cast } from "../cast.ts";
import { isDated, yearTicks } from "../figures/axis-time.ts";
import { pathWidth } from "../figures/lambda.ts";
import { type Html, html, markup } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { covariateList, covariateName } from "../parts.ts";
import { extent } from "../scale.ts";
import { SCREEN } from "../size.ts";

/** Survival at each step of the path, and all that the slider moves. */
export interface Walk {
  readonly lambdas: readonly number[];
  readonly names: readonly string[];
  readonly active: readonly (readonly number[])[];
  readonly strata: readonly string[];
  /** By step, then stratum after stratum: apparent annual survival by interval. */
  readonly survival: readonly (readonly number[])[];
  /** One survival per interval, in the same order. */
  readonly own: readonly number[];
  /** Where the intervals stand in the small drawing, 0 … 1. */
  readonly at: readonly number[];
  /** Years, or numbers of intervals, and where they stand, 0 … 1. */
  readonly ticks: readonly (readonly [at: number, text: string])[];
  /** Of the two figures along the path, px, so that the slider moves a line in them. */
  readonly width: number;
}

export function walkOf(input: ReportInput): Walk | undefined {
  const { screened } = input;
  if (screened === undefined || screened.path.lambdaMax === 0) return undefined;
  const { path, names, intervalFit, survivalAlong } = screened;
  const rows = intervalFit.survival;
  const strata = [...new Set(rows.map((one) => one.stratum))];
  const n = rows.length / strata.length;
  // intervals split into years have more rows than the study has intervals: then rows stand in their order
  const dated = isDated(input) && n === input.intervals.length;
  const at = Array.from({ length: n }, (_, t) =>
    dated ? (input.intervals[t].start + input.intervals[t].end) / 2 : t,
  );
  const [low, high] = extent(at);
  return {
    lambdas: path.steps.map((one) => Number(one.lambda.toPrecision(4))),
    names,
    active: path.steps.map((one) => one.active),
    strata,
    width: pathWidth(SCREEN),
    survival: survivalAlong.map((one) => Array.from(one, thousandths)),
    own: rows.map((one) => thousandths(one.value)),
    at: at.map((one) => place(one, low, high)),
    ticks: dated
      ? yearTicks({ from: low, to: high, left: 0, right: DRAWN }).map(
          ({ day, text }) => [place(day, low, high), text] as const,
        )
      : at
          .filter((_, t) => t % Math.ceil(n / 20) === 0)
          .map((one) => [place(one, low, high), String(one + 1)] as const),
  };
}

/** Width of the small drawing's field, px. */
const DRAWN = 630;

/** Share of the way from `low` to `high`, to four places. */
function place(at: number, low: number, high: number): number {
  return Math.round(10_000 * ((at - low) / (high - low || 1))) / 10_000;
}

function thousandths(value: number): number {
  return Math.round(1000 * value) / 1000;
}

/** A slider along the path; hidden until the script is there to move it. */
export function walkBlock(input: ReportInput, cast: Cast): Html | undefined {
  const data = walkOf(input);
  if (data === undefined || input.screened === undefined) return undefined;
  const { byAnimals, choice, path } = input.screened;
  const forced = byAnimals.profiles.map((one) => one.name).filter((name) => !byAnimals.names.includes(name));
  // "<" must not end the script element early
  const json = JSON.stringify(data).replace(/</g, "\\u003c");
  const lines = data.strata.map(
    (name) =>
      html`<div class="pane"><h4>${data.strata.length > 1 && name}</h4><svg viewBox="0 0 700 172" role="img" aria-label="Apparent annual survival at the penalty chosen with the slider${data.strata.length > 1 && `, ${name}`}"></svg></div>`,
  );
  return html`<div class="walk" hidden data-start="${choice.index}"><h3>Walk the path</h3><label>Penalty λ, weaker to the right <input type="range" min="0" max="${path.steps.length - 1}" value="${choice.index}"></label><output></output><ul class="standing" aria-label="Covariates that stand at this penalty">${data.names.map((name, k) => html`<li data-k="${k}">${covariateName(cast, name)}</li>`)}</ul>${forced.length > 0 && html`<p>In the model at every penalty: ${covariateList(cast, forced)}.</p>`}${lines}<p>Line: apparent annual survival at this penalty; dots: one survival per interval, set at its middle. For looking only: the choice stands above.</p><script type="application/json">${markup(json)}</script></div>`;
}
