import type { CovariateDefinition, Statistic } from "./options.ts";
import { windowText } from "./window.ts";

function pastText(
  what: string,
  side: string,
  statistic: { readonly threshold: number; readonly orEqual: boolean },
) {
  return `${what} ${statistic.orEqual ? "at or " : ""}${side} ${signed(statistic.threshold)}`;
}

/** A number with a true minus, as words are printed. */
function signed(value: number): string {
  return String(value).replace("-", "\u2212");
}

/** A statistic in words, to be followed by `of` and the variable. */
export function statisticText(statistic: Statistic, unit: string): string {
  switch (statistic.type) {
    case "sd":
      return "standard deviation (n − 1)";
    case "quantile":
      return `${statistic.probability} quantile (type 7)`;
    case "days below":
    case "days above":
    case "share below":
    case "share above":
    case "longest run below":
    case "longest run above":
    case "first day below":
    case "first day above":
    case "last day below":
    case "last day above":
    case "sum above":
    case "mean above": {
      const cut = statistic.type.lastIndexOf(" ");
      const [what, side] = [statistic.type.slice(0, cut), statistic.type.slice(cut + 1)];
      return `${pastText(what === "share" ? "share of days" : what, side, statistic)} ${unit}`;
    }
    case "degree-days": {
      const cap = Number.isFinite(statistic.cap) ? `, capped at ${signed(statistic.cap)} ${unit},` : "";
      return `degree-days above ${signed(statistic.base)} ${unit}${cap}`;
    }
    case "degree-days below":
      return `degree-days below ${signed(statistic.base)} ${unit}`;
    case "degree-days of extremes": {
      const cap = Number.isFinite(statistic.cap) ? `, capped at ${signed(statistic.cap)} ${unit}` : "";
      return `degree-days above ${signed(statistic.base)} ${unit}${cap} (method ${statistic.method})`;
    }
    case "trend":
      return "linear trend per day";
    case "largest sums":
    case "largest means": {
      const what = statistic.type === "largest sums" ? "sum" : "mean";
      const many =
        statistic.count === 1 ? `largest ${what}` : `mean of the ${statistic.count} largest ${what}s`;
      return `${many} over ${statistic.days} day${statistic.days === 1 ? "" : "s"}`;
    }
    case "growing season":
      return "growing-season length (ETCCDI)";
    case "index":
      return `${statistic.index} (ETCCDI)`;
    case "R95pTOT":
      return `R95pTOT (ETCCDI, base ${statistic.base.from} to ${statistic.base.to})`;
    case "SPI":
      return `standardised precipitation index (base ${statistic.base.from} to ${statistic.base.to})`;
    default:
      return statistic.type;
  }
}

/** The unit of a statistic of values in `unit`. */
export function statisticUnit(statistic: Statistic, unit: string): string {
  switch (statistic.type) {
    case "days below":
    case "days above":
    case "longest run below":
    case "longest run above":
    case "first day below":
    case "first day above":
    case "last day below":
    case "last day above":
    case "growing season":
      return "days";
    case "share below":
    case "share above":
    case "SPI":
      return "1";
    case "degree-days":
    case "degree-days below":
    case "degree-days of extremes":
      return `${unit} days`;
    case "trend":
      return `${unit} per day`;
    case "index":
      return ["TXx", "TNn", "Rx1day", "Rx5day", "SDII", "PRCPTOT"].includes(statistic.index) ? unit : "days";
    default:
      return unit;
  }
}

/** `sum of rain over Nov to Feb, mean of 6 stations`, and whether gaps are filled. */
export function definitionText(definition: CovariateDefinition, sites: readonly string[]): string {
  const { window, statistic, unit, join, anomaly, series, second, infill, weights } = definition;
  const variables = [series, second ?? []].flatMap((list) => (list.length > 0 ? [list[0].variable] : []));
  const what =
    anomaly === undefined
      ? variables.join(" and ")
      : `departures of ${variables.join(" and ")} from the ${anomaly.by}'s mean of ${anomaly.base.from} to ${anomaly.base.to}`;
  const head = `${statisticText(statistic, unit)} of ${what} over ${windowText(window)}`;
  const filled =
    infill === undefined
      ? ""
      : `, gaps of up to ${infill.longest} day${infill.longest === 1 ? "" : "s"} filled by ${infill.method} on neighbours`;
  if (sites.length === 1) return `${head}, at ${sites[0]}${filled}`;
  const how = join === "mean of days" ? "of the daily mean of" : "mean of";
  const weighted = weights === undefined ? "" : `, ${weights.words}`;
  return `${head}, ${how} ${sites.length} stations${weighted}${filled}`;
}

/** The rule of completeness in words. */
export function completenessText({ complete, allowedMissing }: CovariateDefinition): string {
  const rule =
    complete.type === "share"
      ? `a share of ${complete.share} of the days`
      : complete.type === "wmo"
        ? "WMO-No. 1203 (2017)"
        : "the 5/3 rule";
  return allowedMissing === undefined ? rule : `${rule}; ${allowedMissing} missing days allowed`;
}
