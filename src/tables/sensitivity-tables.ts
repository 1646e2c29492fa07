import type { Analysis, Sensitivity } from "../compare/sensitivity.ts";
import { number, text, truth } from "./columns.ts";
import type { Table } from "./table.ts";

/** Every analysis with what it selects. */
export function sensitivityTables(sensitivity: Sensitivity): readonly Table[] {
  const { analyses, tried, search } = sensitivity;
  const whole =
    search === undefined
      ? `${tried} analyses were run; no p of a single one allows for that.`
      : `${tried} analyses were run; family-wise p of the whole search ${search.p} over ${search.replicates} permutations of years.`;
  return [
    {
      name: "sensitivity",
      title: "Other ways to do the study",
      description: `The study as it stands and the alternatives stated in the pipeline file. ${whole}`,
      columns: [
        text("analysis", "analysis", "name of the alternative"),
        text("changes", "what differs", "from the study as it stands"),
        text("chosen_by_years", "chosen, counting years", "covariates"),
        text("rivals", "not to be told from them", "covariates that could stand in their place"),
        text("chosen_by_animals", "chosen, counting animals", "covariates"),
        number("share", "deviance explained", "1", "share between years, of the choice by years"),
        number("gain", "gain", "1", "of the choice by years over none, after its price"),
        text("recapture", "recapture", "its part"),
        text("failed", "not run because", "empty where it was run"),
      ],
      rows: analyses.map((one) => [
        one.name,
        one.changes,
        one.byYears.join(", "),
        one.rivals.map(({ chosen, others }) => `${chosen}: ${others.join(" or ")}`).join("; "),
        one.byAnimals.join(", "),
        one.share,
        one.gain,
        one.recapture,
        one.failed ?? "",
      ]),
    },
    {
      name: "sensitivity-selection",
      title: "What is selected where",
      description: "One row per analysis and candidate.",
      columns: [
        text("analysis", "analysis", "name of the alternative"),
        text("covariate", "covariate", "name of the covariate"),
        truth("by_years", "by years", "chosen counting years"),
        truth("rival", "rival", "could stand in the place of one chosen"),
        truth("by_animals", "by animals", "chosen counting animals"),
      ],
      rows: analyses.flatMap((one) =>
        one.candidates.map((name) => [
          one.name,
          name,
          one.byYears.includes(name),
          isRival(one, name),
          one.byAnimals.includes(name),
        ]),
      ),
    },
  ];
}

function isRival({ rivals }: Analysis, name: string): boolean {
  return rivals.some(({ others }) => others.includes(name));
}
