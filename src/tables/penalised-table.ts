import type { ScreenResult } from "../screen/screen.ts";
import { number, text, truth } from "./columns.ts";
import type { Table } from "./table.ts";

/** The three penalised fits side by side: what the weights do, and what happens where nothing is selected. */
export function penalisedTable(screened: ScreenResult): Table {
  const { path, choice, plain, ridge, names, options } = screened;
  const adaptive = path.steps[choice.index];
  const equal = plain.path.steps[plain.choice.index];
  const least = ridge.steps[ridge.index];
  return {
    name: "penalised-effects",
    title: "Adaptive lasso, plain lasso and ridge",
    description: `Shrunken effects on logit apparent annual survival. Both lassos at the λ of least ${options.chooseBy} (adaptive ${digits(adaptive.lambda)}, plain ${digits(equal.lambda)}); ridge at the strength ${digits(least.strength)} of least AICc, ${digits(least.effective)} effective parameters. Ridge selects nothing: correlated covariates share what they explain.`,
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      number("adaptive_lasso", "adaptive lasso", "logit per sd", "penalty weighted by the first estimate"),
      number("plain_lasso", "plain lasso", "logit per sd", "the same penalty on every covariate"),
      number("ridge", "ridge", "logit per sd", "squared penalty, strength by AICc"),
      truth("in_plain_lasso", "in plain lasso", "chosen by the plain lasso"),
    ],
    rows: names.map((name, k) => [
      name,
      adaptive.coefficients[k],
      equal.coefficients[k],
      least.coefficients[k],
      plain.chosen.includes(k),
    ]),
  };
}

function digits(value: number): string {
  return String(Number(value.toPrecision(4)));
}
