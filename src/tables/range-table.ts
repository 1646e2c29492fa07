import type { OutOfRange } from "../covariates/apply.ts";
import { number, text } from "./columns.ts";
import type { Table } from "./table.ts";

/** New values that lie outside what the recorded preparation was made on. */
export function outOfRangeTable(outside: readonly OutOfRange[]): Table {
  return {
    name: "out-of-range",
    title: "Values outside the recorded range",
    description: "One row per covariate and new interval whose value no recorded interval reached.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      text("interval", "interval", "name of the new interval"),
      number("value", "value", "as in unit", "value over the window, before the transform"),
      text("unit", "unit", "unit of the value and of the recorded range"),
      number("recorded_least", "recorded least", "as in unit", "smallest recorded value"),
      number("recorded_greatest", "recorded greatest", "as in unit", "largest recorded value"),
      number("standardised", "standardised", "sd", "the value on the recorded scale"),
    ],
    rows: outside.map((one) => [
      one.covariate,
      one.interval,
      one.value,
      one.unit,
      one.least,
      one.greatest,
      one.standard,
    ]),
  };
}
