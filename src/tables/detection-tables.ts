import type { Interval } from "../data/occasion.ts";
import type { Detection } from "../simulate/detect.ts";
import type { StudyDesign } from "../simulate/study-design.ts";
import type { Outcome, Share } from "../simulate/tally.ts";
import { number, text, whole } from "./columns.ts";
import type { Cell, Table, TableColumn } from "./table.ts";

const OUTCOME_COLUMNS: readonly (readonly [name: string, outcome: Outcome, what: string])[] = [
  ["exact", "exactly the truth", "the named covariates and no others are chosen"],
  ["with_others", "the truth with others", "all named covariates are chosen, and others"],
  ["part", "part of the truth", "some but not all named covariates are chosen, alone or with others"],
  ["wrong", "only wrong ones", "none of the named covariates is chosen, but others"],
  ["nothing", "nothing", "nothing is chosen; right where the effect is 0"],
];

/** A share and its Monte Carlo standard error. */
function shareColumns(name: string, title: string, what: string): TableColumn[] {
  return [
    number(name, title, "1", `share of replicates: ${what}`),
    number(`${name}_se`, `${title}, s.e.`, "1", `Monte Carlo standard error of ${name}`),
  ];
}

const cells = ({ share, se }: Share): Cell[] => [share, se];

/** What each rule finds over the grid of effect sizes. */
export function detectionTable(detection: Detection): Table {
  return {
    name: "detection",
    title: "What this study can detect",
    description:
      "The whole procedure over captures drawn from the study's own design: one row per size of effect and rule. Where the " +
      "effect is 0 no covariate acts, and whatever is chosen is wrong, the named ones too. The five shares from " +
      `"exact" to "nothing" add up to 1. Residual sd between years ${Number(detection.residual.toPrecision(4))} on the logit.`,
    columns: [
      text("covariates", "covariates that act", "named covariates, all with the same size of effect"),
      number("effect", "effect", "logit per sd", "size of the effect on apparent annual survival"),
      text("rule", "rule", "what the choice counts as evidence: years or animals"),
      whole("replicates", "replicates", "studies", "studies drawn"),
      ...shareColumns("found", "found", "all named covariates are chosen; a false find at effect 0"),
      number(
        "found_low",
        "found, from",
        "1",
        "lower end of the 95 % Monte Carlo interval of found (Wilson 1927)",
      ),
      number("found_high", "found, to", "1", "upper end of the same interval"),
      ...shareColumns(
        "found_or_rival",
        "found or rival",
        "as found, where a covariate named as a rival of a chosen one counts too",
      ),
      ...OUTCOME_COLUMNS.flatMap(([name, outcome, what]) => shareColumns(name, outcome, what)),
      ...shareColumns(
        "unrelated",
        "unrelated chosen",
        "something is chosen whose |r| with every true covariate is below .5",
      ),
    ],
    rows: detection.rows.map((row) => [
      detection.covariates.join(" + "),
      row.effect,
      row.rule,
      row.replicates,
      ...cells(row.found),
      row.found.low,
      row.found.high,
      ...cells(row.foundOrRival),
      ...OUTCOME_COLUMNS.flatMap(([, outcome]) => cells(row.outcomes[outcome])),
      ...cells(row.unrelated),
    ]),
  };
}

/** What the studies were drawn from, stratum by stratum and interval by interval. */
export function simulatedDesignTable(design: StudyDesign, intervals: readonly Interval[]): Table {
  return {
    name: "simulated-design",
    title: "What the studies were drawn from",
    description:
      "Survival before any effect and before the variation between years; both as estimated with one survival per stratum. " +
      "Losses on capture are not drawn.",
    columns: [
      text("stratum", "stratum", "stratum of animals"),
      text("interval", "interval", "name of the interval"),
      number("length", "length", "years", "length of the interval"),
      whole("newly_marked", "newly marked", "animals", "newly marked and released at its first occasion"),
      number("survival", "apparent annual survival", "1", "at mean covariates"),
      number("recapture", "recapture", "1", "at the occasion that closes the interval"),
    ],
    rows: design.strata.flatMap(({ stratum, marked, baseline, recapture }) =>
      intervals.map((interval, t) => [
        stratum,
        interval.name,
        interval.length,
        marked[t],
        1 / (1 + Math.exp(-baseline[t])),
        recapture[t],
      ]),
    ),
  };
}
