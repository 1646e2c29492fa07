import { InputError } from "../errors.ts";
import type { CollinearityOptions } from "./options.ts";

/**
 * The columns left after the user's decisions, as indices. Throws `collinearity.unknown-covariate` for a name that is
 * no column (in decisions or in the order of priority) and `collinearity.decision-contradicts` where a column that is
 * to be kept is also to be dropped.
 */
export function applyDecisions(
  names: readonly string[],
  options: Pick<CollinearityOptions, "decisions" | "priority">,
): number[] {
  const known = (name: string, cell: string) => {
    if (names.includes(name)) return;
    throw new InputError({
      name: "collinearity.unknown-covariate",
      expected: `one of the covariates ${names.map((one) => JSON.stringify(one)).join(", ")}`,
      found: JSON.stringify(name),
      where: { cell },
      remedy: "name a covariate of the matrix; one that was left out for missing cells needs no decision",
    });
  };
  options.priority?.forEach((name, at) => {
    known(name, `collinearity.priority[${at}]`);
  });
  const dropped = new Set(options.decisions.map(({ drop }) => drop));
  options.decisions.forEach(({ drop, keep }, at) => {
    known(drop, `collinearity.decisions[${at}].drop`);
    if (keep === undefined) return;
    known(keep, `collinearity.decisions[${at}].keep`);
    if (!dropped.has(keep)) return;
    throw new InputError({
      name: "collinearity.decision-contradicts",
      expected: "each covariate either kept or dropped",
      found: `${JSON.stringify(keep)} both kept (in place of ${JSON.stringify(drop)}) and dropped`,
      where: { cell: `collinearity.decisions[${at}]` },
      remedy: "drop one of the two decisions",
    });
  });
  return names.map((_, k) => k).filter((k) => !dropped.has(names[k]));
}
