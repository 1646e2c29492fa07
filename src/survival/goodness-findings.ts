import type { RawFinding } from "../data/finding.ts";
import type { ComponentSum, GoodnessOfFit } from "./goodness-of-fit.ts";
import { COMPONENTS } from "./goodness-tables.ts";

/** The usual level, by convention; a finding is a hint to look, not a verdict. */
const LEVEL = 0.05;

/**
 * Findings where the sum over occasions and strata of the first component (transience) or the third (trap dependence)
 * has p < .05. The subject is `all animals`, or the only stratum.
 */
export function goodnessFindings(goodness: GoodnessOfFit): RawFinding[] {
  return [transience(goodness), trapDependence(goodness)].flatMap((one) => (one === undefined ? [] : [one]));
}

function transience(goodness: GoodnessOfFit): RawFinding | undefined {
  const sum = significant(goodness, 0);
  if (sum === undefined) return undefined;
  const [newly, before] = shares(goodness, 0);
  return {
    kind: "transience",
    subject: sum.stratum ?? "all animals",
    message:
      `newly marked animals were met again in ${newly}, animals seen before in ${before} ` +
      `(${chi(sum)}, occasions with both)${where(goodness, 0)}`,
    remedy:
      sum.direction < 0
        ? "if visitors were marked, survival after marking is read too low: leave first captures out, or make visitors a stratum of their own"
        : "look for marks lost or misread, or for ages that differ in survival, and split those animals into strata",
  };
}

function trapDependence(goodness: GoodnessOfFit): RawFinding | undefined {
  const sum = significant(goodness, 2);
  if (sum === undefined) return undefined;
  const [met, passed] = shares(goodness, 2);
  return {
    kind: "trap-dependence",
    subject: sum.stratum ?? "all animals",
    message:
      `of animals known to be alive, ${met} of those met were met at the next occasion too, ` +
      `${passed} of those passed over (${chi(sum)})${where(goodness, 2)}`,
    remedy:
      sum.direction > 0
        ? "some animals are easier to meet than others: look for places or observers that differ, and split the animals into strata"
        : "animals avoid being met again at once: look for handling or alternate visits that would explain it",
  };
}

/** The sum over strata of a component if its p is below the level. */
function significant({ components }: GoodnessOfFit, which: 0 | 2): ComponentSum | undefined {
  const sum = components.findLast((one) => one.component === COMPONENTS[which]);
  return sum !== undefined && sum.p < LEVEL ? sum : undefined;
}

/** `41 % (12 of 29)` for both rows, over the tables that were tested. */
function shares({ rows }: GoodnessOfFit, which: 0 | 2): [string, string] {
  const used = rows.filter((row) => row.component === COMPONENTS[which] && row.df > 0);
  const share = (row: "first" | "second") => {
    const inFirst = used.reduce((sum, one) => sum + one[row][0], 0);
    const all = used.reduce((sum, one) => sum + one[row][0] + one[row][1], 0);
    return `${Math.round((100 * inFirst) / all)} % (${inFirst} of ${all})`;
  };
  return [share("first"), share("second")];
}

function chi({ chiSquare, df, p }: ComponentSum): string {
  return `χ² = ${chiSquare.toFixed(1)}, df ${df}, p ${p < 0.001 ? "< 0.001" : `= ${p.toFixed(3)}`}`;
}

/** The strata that show it by themselves, where there are several. */
function where({ components }: GoodnessOfFit, which: 0 | 2): string {
  const own = components.filter((one) => one.component === COMPONENTS[which] && one.stratum !== undefined);
  const showing = own.filter((one) => one.p < LEVEL).map((one) => one.stratum);
  return own.length < 2 || showing.length === 0 ? "" : `; by itself in ${showing.join(" and ")}`;
}
