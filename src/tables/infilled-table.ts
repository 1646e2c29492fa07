import type { IntervalCovariate } from "../aggregate/result.ts";
import { isoDay } from "../data/day.ts";
import { number, text } from "./columns.ts";
import type { Table } from "./table.ts";

/** Every value that was filled from neighbours; no table where none was. */
export function infilledTables(covariates: readonly IntervalCovariate[]): readonly Table[] {
  const rows = covariates.flatMap(({ name, infilled }) =>
    (infilled ?? []).map((one) => [
      name,
      one.station,
      one.variable,
      isoDay(one.period.start),
      isoDay(one.period.end - 1),
      one.value,
      one.unit,
    ]),
  );
  if (rows.length === 0) return [];
  return [
    {
      name: "infilled-values",
      title: "Infilled values",
      description:
        "One row per value that was not measured but filled from neighbouring stations; the findings tell each station's leave-one-out error.",
      columns: [
        text("covariate", "covariate", "covariate it was filled for"),
        text("station", "station", "identifier of the station"),
        text("variable", "variable", "variable that was filled"),
        text("first_day", "first day", "first day of the value's period"),
        text("last_day", "last day", "last day of it, included"),
        number("value", "value", "as in unit", "the filled value"),
        text("unit", "unit", "unit of the value"),
      ],
      rows,
    },
  ];
}
