import type { Statistic } from "../aggregate/options.ts";
import type { DeriveOptions } from "../covariates/options.ts";

/** The unit of a statistic of values in `unit`: counts and runs of days are days, shares plain numbers. */
export function unitAfter(statistic: Statistic, unit: string): string {
  const { type } = statistic;
  if (type === "index")
    return ["TXx", "TNn", "Rx1day", "Rx5day", "SDII", "PRCPTOT"].includes(statistic.index) ? unit : "days";
  if (type.startsWith("share ") || type === "SPI") return "1";
  if (type.startsWith("degree-days")) return `${unit} days`;
  if (type === "trend") return `${unit} per day`;
  if (/^(?:days|longest run|first day|last day) /.test(type) || type === "growing season") return "days";
  return unit;
}

/** The unit of a derived column where the pipeline file does not say it. */
export function derivedUnit(rule: DeriveOptions["rule"], of: readonly string[]): string {
  const [a = "1", b = a] = of;
  switch (rule) {
    case "ratio":
      return a === b ? "1" : b === "1" ? a : `${a}/${b}`;
    case "product":
      return a === "1" ? b : b === "1" ? a : a === b ? `${a}^2` : `${a}*${b}`;
    case "square":
      return a === "1" ? "1" : `${a}^2`;
    default:
      return a;
  }
}
