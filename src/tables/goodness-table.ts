import type { Occasion } from "../data/occasion.ts";
import type { GoodnessOfFit } from "../survival/goodness-of-fit.ts";
import { number, text, truth, whole } from "./columns.ts";
import type { Cell, Table } from "./table.ts";

const ALL_STRATA = "all strata";
const ALL_OCCASIONS = "all occasions";

/** Fit of the general model: every table that was tested, the sums over occasions, the sums over components. */
export function goodnessTable(goodness: GoodnessOfFit, occasions: readonly Occasion[]): Table {
  const missing = goodness.missing.map(({ component }) => `"${component}"`);
  return {
    name: "goodness-of-fit",
    title: "Fit of the general model",
    description:
      "The model in which survival and recapture differ for every interval and occasion, tested by tables of two rows " +
      "at each occasion and summed (Burnham et al. 1987; Pradel 1993). The variance inflation between animals is not " +
      `used in any criterion or standard error yet.${missing.length === 0 ? "" : ` Not given: ${missing.join(" and ")}, since ${goodness.missing[0].reason}; the sums lack them.`}`,
    columns: [
      text("stratum", "stratum", `stratum of animals; "${ALL_STRATA}" for sums over several`),
      text("component", "component", "the two groups of animals: what is compared between them"),
      text("occasion", "occasion", `where the groups are told apart; "${ALL_OCCASIONS}" for sums`),
      number("chi_square", "χ²", "1", "Pearson's, without continuity correction"),
      whole("df", "df", "1", "degrees of freedom; 0 where there is nothing to test"),
      number("p", "p", "1", "upper tail of χ²; mid-p of the exact distribution where exact"),
      whole("pooled", "pooled", "columns", "columns joined to a neighbour: fewer than 2 animals expected"),
      truth("exact", "exact", "a sparse table of two columns, judged by its exact distribution"),
      number(
        "direction",
        "direction",
        "1",
        "√χ² with a sign; positive if the first group does it more often",
      ),
      text("first_group", "first group", "animals of the first group, column by column"),
      text("second_group", "second group", "animals of the second group, column by column"),
      number("inflation", "ĉ between animals", "1", "χ²/df of the sum, never below 1"),
    ],
    rows: [
      ...goodness.rows.map((one): Cell[] => [
        one.stratum,
        one.component,
        occasions[one.occasion].name,
        one.chiSquare,
        one.df,
        one.p,
        one.pooled,
        one.exact,
        one.direction,
        one.first.join(", "),
        one.second.join(", "),
        undefined,
      ]),
      ...goodness.components.map((one): Cell[] =>
        sumRow(one.stratum, one.component, one, one.direction, undefined),
      ),
      ...goodness.sums.flatMap((one): Cell[][] => [
        sumRow(one.stratum, "all components", one, undefined, one.betweenAnimals),
        ...(missing.length > 0
          ? []
          : [
              sumRow(
                one.stratum,
                "all but the first: survival after first marking apart",
                one.afterMarking,
                undefined,
                one.betweenAnimalsAfterMarking,
              ),
            ]),
      ]),
    ],
  };
}

function sumRow(
  stratum: string | undefined,
  component: string,
  sum: { readonly chiSquare: number; readonly df: number; readonly p: number },
  direction: number | undefined,
  inflation: number | undefined,
): Cell[] {
  const nothing = undefined;
  return [
    stratum ?? ALL_STRATA,
    component,
    ALL_OCCASIONS,
    sum.chiSquare,
    sum.df,
    sum.p,
    nothing,
    nothing,
    direction,
    nothing,
    nothing,
    inflation,
  ];
}
