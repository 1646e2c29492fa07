import type { IntervalCovariate } from "../aggregate/result.ts";
import { isoDay } from "../data/day.ts";
import type { Matrix } from "../data/matrix.ts";
import { number, text, truth, uniqueSlugs, whole } from "./columns.ts";
import type { StudyResult } from "./study-result.ts";
import type { Table } from "./table.ts";

export function intervalValuesTable(study: StudyResult): Table {
  return {
    name: "interval-values",
    title: "Covariates by interval, with completeness",
    description:
      "One row per covariate and interval: the value before preparation, its window and what it rests on.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      text("theme", "theme", "theme of the covariate"),
      text("interval", "interval", "name of the interval"),
      number("value", "value", "as in unit", "value over the window; empty if missing"),
      text("unit", "unit", "unit of the value"),
      text("first_day", "first day", "first day of the window"),
      text("last_day", "last day", "last day of the window"),
      whole("days_due", "days due", "days", "days of the window"),
      number("days_covered", "days covered", "days", "days with observations"),
      whole("days_infilled", "days infilled", "days", "station-days whose value was filled from neighbours"),
      whole("longest_gap", "longest gap", "days", "longest run of days without observations"),
      truth("scaled", "scaled", "a sum scaled up by due over covered"),
      text("stations", "stations", "stations that gave a value"),
      text("missing_because", "missing because", "the rule of completeness that failed"),
    ],
    rows: study.covariates.flatMap((covariate) =>
      covariate.values.map((one, t) => [
        covariate.name,
        covariate.theme,
        study.intervals[t].name,
        one.value,
        covariate.unit,
        one.period === undefined ? undefined : isoDay(one.period.start),
        one.period === undefined ? undefined : isoDay(one.period.end - 1),
        one.period === undefined ? undefined : one.daysDue,
        one.period === undefined ? undefined : one.daysCovered,
        one.period === undefined ? undefined : (one.daysInfilled ?? 0),
        one.period === undefined ? undefined : one.longestGap,
        one.scaled,
        one.stations.join("; ") || undefined,
        one.failed,
      ]),
    ),
  };
}

/** The clean matrix: a row per interval, a column per covariate. */
function wide(
  study: StudyResult,
  matrix: Matrix,
  name: string,
  title: string,
  unitOf: (k: number) => string,
): Table {
  const { names, recipes, rows } = study.matrix;
  const slugs = uniqueSlugs(["interval", ...names]).slice(1);
  return {
    name,
    title,
    description: `${title}: one row per interval, one column per covariate; an empty cell is a missing value.`,
    columns: [
      text("interval", "interval", "name of the interval"),
      ...names.map((covariate, k) => number(slugs[k], covariate, unitOf(k), recipes[k].definition)),
    ],
    rows: rows.map((row, t) => [
      row,
      ...Array.from(matrix.data.subarray(t * matrix.columns, (t + 1) * matrix.columns)),
    ]),
  };
}

export function rawMatrixTable(study: StudyResult): Table {
  return wide(
    study,
    study.matrix.raw,
    "covariates",
    "Covariates in their units",
    (k) => study.matrix.recipes[k].unit,
  );
}

export function standardMatrixTable(study: StudyResult): Table {
  return wide(study, study.matrix.standard, "covariates-standardised", "Covariates as prepared", () => "sd");
}

/** Σ days covered / Σ days due; missing for values that came ready-made, without windows. */
function coverage({ values }: IntervalCovariate): number | undefined {
  const due = values.reduce((sum, one) => sum + one.daysDue, 0);
  return due === 0 ? undefined : values.reduce((sum, one) => sum + one.daysCovered, 0) / due;
}

function infilled({ values }: IntervalCovariate): number | undefined {
  if (values.every((one) => one.period === undefined)) return undefined;
  return values.reduce((sum, one) => sum + (one.daysInfilled ?? 0), 0);
}

export function dictionaryTable(study: StudyResult): Table {
  const recipes = new Map(study.matrix.recipes.map((one) => [one.name, one]));
  const slugs = uniqueSlugs(["interval", ...study.matrix.names]).slice(1);
  const column = new Map(study.matrix.names.map((name, k) => [name, slugs[k]]));
  const left = new Map(study.leftOut.map((one) => [one.name, one.reason]));
  const described = new Map(study.covariates.map((one) => [one.name, one]));
  const names = [...new Set([...described.keys(), ...recipes.keys()])];
  return {
    name: "covariate-dictionary",
    title: "Covariate dictionary",
    description: "What each covariate is, where it comes from, and the constants of its preparation.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      text("column", "column", "its column in the matrices; empty if left out"),
      text("theme", "theme", "theme of the covariate"),
      text("unit", "unit", "unit before the transform"),
      text("definition", "definition", "statistic, variable, place and window in words"),
      text("statistic", "statistic", "what the values of a window are made into"),
      text("window", "window", "the period of each interval"),
      text("complete", "completeness", "the rule by which a window counts as complete"),
      text("files", "files", "files it was made from"),
      whole("intervals_with_value", "intervals with a value", "1", "intervals that have a value"),
      number("coverage", "coverage", "1", "days with observations over days due, all windows together"),
      whole(
        "days_infilled",
        "days infilled",
        "days",
        "station-days filled from neighbours, all windows together",
      ),
      text("transform", "transform", "transform applied first"),
      text("detrend", "detrend", "detrending applied next"),
      number("centre", "centre", "as in unit, transformed", "subtracted"),
      number("scale", "scale", "as in unit, transformed", "divided by"),
      whole("filled", "filled cells", "1", "missing cells replaced by the column mean"),
      text("left_out_because", "left out because", "why it did not enter the matrix"),
    ],
    rows: names.map((name) => {
      const recipe = recipes.get(name);
      const source = described.get(name);
      return [
        name,
        column.get(name),
        recipe?.theme ?? source?.theme,
        recipe?.unit ?? source?.unit,
        recipe?.definition ?? source?.definition,
        source?.statistic,
        source?.window,
        source?.complete,
        source?.files.join("; ") || undefined,
        source?.values.filter((one) => !Number.isNaN(one.value)).length,
        source === undefined ? undefined : coverage(source),
        source === undefined ? undefined : infilled(source),
        recipe?.transform,
        recipe?.detrend,
        recipe?.centre,
        recipe?.scale,
        recipe?.filled.length,
        left.get(name),
      ];
    }),
  };
}
