import type { Cast } from "../cast.ts";
import { type Html, html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, show } from "../numbers.ts";
import { covariateList, covariateName, grid } from "../parts.ts";

/** After selection: profile intervals, survival over the observed range, and the other penalties beside the one used. */
export function refitsBlock(input: ReportInput, cast: Cast): Html | undefined {
  const { screened } = input;
  if (screened === undefined) return undefined;
  const inflation = screened.options.betweenAnimals;
  return html`<h3>After selection: how large, and over which range</h3>${profiles(input, cast)}
${predicted(input, cast)}
<p>Intervals are by profile likelihood${inflation !== undefined && inflation > 1 && ` and widened by ĉ between animals (${show(inflation)})`}; they take what these data chose as if it had been fixed before looking, and so are too narrow. Beyond the observed range nothing in the data speaks of survival: predictions there are marked in the table predicted-survival and are not to be used.</p>
${penalties(input, cast)}`;
}

function profiles({ screened }: ReportInput, cast: Cast): Html | undefined {
  const profiles = screened?.byYears.profiles ?? [];
  if (profiles.length === 0)
    return html`<p>Counting years, no covariate is in the model, so there is no effect to report.</p>`;
  return grid(
    cast,
    "Effects of the model chosen by years, with profile intervals",
    [
      { text: "covariate" },
      { text: "effect on logit survival", unit: "per sd", look: "n" },
      { text: "95 % profile interval", look: "n" },
      { text: "why in the model", look: "w" },
    ],
    profiles.map((one) => ({
      covariate: one.name,
      cells: [
        covariateName(cast, one.name),
        show(one.estimate),
        `${end(one.low)} to ${end(one.high)}`,
        screened?.byYears.names.includes(one.name) ? "chosen on these data" : "always in the model",
      ],
    })),
  );
}

function end(value: number): string {
  if (value === Number.POSITIVE_INFINITY) return "∞";
  if (value === Number.NEGATIVE_INFINITY) return "−∞";
  return Number.isNaN(value) ? "not determined" : show(value);
}

/** Survival at the least and the greatest value that was observed. */
function predicted({ screened }: ReportInput, cast: Cast): Html | undefined {
  const rows = (screened?.byYears.predicted ?? []).flatMap(({ name, points }) => {
    const strata = [...new Set(points.map((one) => one.stratum))];
    return strata.map((stratum) => {
      const own = points.filter((one) => one.stratum === stratum && one.observed);
      const [least, most] = [own[0], own[own.length - 1]];
      const text = (one: typeof least) => `${show(one.survival)} (${show(one.low)} to ${show(one.high)})`;
      return { covariate: name, cells: [covariateName(cast, name), stratum, text(least), text(most)] };
    });
  });
  if (rows.length === 0) return undefined;
  return grid(
    cast,
    "Predicted apparent annual survival, other covariates at their mean",
    [
      { text: "covariate" },
      { text: "stratum", look: "w" },
      { text: "at the least value observed", look: "n" },
      { text: "at the greatest value observed", look: "n" },
    ],
    rows,
  );
}

function penalties({ screened }: ReportInput, cast: Cast): Html | undefined {
  if (screened === undefined || screened.names.length === 0) return undefined;
  const { plain, ridge, names, byAnimals } = screened;
  const least = ridge.steps[ridge.index];
  return html`<p>Beside the adaptive lasso (${covariateList(cast, byAnimals.names)}) the lasso with equal weights chooses, by the same criterion, ${covariateList(
    cast,
    plain.chosen.map((k) => names[k]),
  )}. Ridge, which chooses nothing and lets correlated covariates share what they explain, spends ${brief(least.effective)} effective parameters at its least AICc. The effects of all three stand in the table penalised-effects; no verdict rests on them.</p>`;
}
