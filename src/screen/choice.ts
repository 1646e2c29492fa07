import { InputError } from "../errors.ts";
import { type Criteria, checkInflation, criteriaOf, criterionValue } from "./criterion.ts";
import type { ScreenOptions } from "./options.ts";
import type { LassoPath } from "./path.ts";

/** The criteria of one λ. */
export interface CriterionRow extends Criteria {
  readonly lambda: number;
  readonly active: number;
  /** Non-zero β + unpenalised parameters. */
  readonly parameters: number;
  readonly minus2LogL: number;
  /** −2 log L of the unpenalised refit on the same covariates. */
  readonly minus2LogLRefit: number;
  /** The criterion asked for; NaN where n − k − 1 ≤ 0. */
  readonly criterion: number;
}

export interface PathChoice {
  readonly rows: readonly CriterionRow[];
  /** Index of the chosen λ. */
  readonly index: number;
  /** Indices of the λ within 2 units of the least value. */
  readonly band: readonly number[];
}

/**
 * BIC, AICc, extended BIC, QBIC and QAICc (see `criteria.ts`) along the path, at the shrunken solutions or at the refits;
 * the least value of the one asked for wins, ties go to the sparser model, which comes first. Rows with n − k − 1 ≤ 0
 * are not chosen. Throws `screen.no-criterion` where it is nowhere defined, and what `checkInflation` throws.
 */
export function chooseOnPath(
  path: LassoPath,
  unpenalised: number,
  sampleSize: number,
  options: Pick<ScreenOptions, "chooseBy" | "fit" | "betweenAnimals">,
  refit: (active: readonly number[]) => number,
): PathChoice {
  const betweenAnimals = options.betweenAnimals ?? Number.NaN;
  checkInflation(options.chooseBy, betweenAnimals);
  const setting = { sampleSize, covariates: path.weights.length, betweenAnimals };
  const rows = path.steps.map((step): CriterionRow => {
    const active = step.active.length;
    const parameters = unpenalised + active;
    const minus2LogLRefit = refit(step.active);
    const minus2LogL = options.fit === "refit" ? minus2LogLRefit : step.minus2LogL;
    const criteria = criteriaOf({ minus2LogL, parameters, active }, setting);
    return {
      lambda: step.lambda,
      active,
      parameters,
      minus2LogL: step.minus2LogL,
      minus2LogLRefit,
      ...criteria,
      criterion: criterionValue(options.chooseBy, criteria, parameters, sampleSize),
    };
  });
  const index = rows.reduce(
    (best, row, i) =>
      best < 0
        ? Number.isNaN(row.criterion)
          ? -1
          : i
        : row.criterion < rows[best].criterion - 1e-9
          ? i
          : best,
    -1,
  );
  if (index < 0)
    throw new InputError({
      name: "screen.no-criterion",
      expected: "a sample size above the number of parameters plus 1",
      found: `${options.chooseBy} with n = ${sampleSize} and ${unpenalised} unpenalised parameters`,
      where: { cell: "screen.sample size" },
      remedy: "count releases or animals, or keep the recapture part constant",
    });
  const least = rows[index].criterion;
  const band = rows.flatMap((row, i) => (row.criterion <= least + 2 ? [i] : []));
  return { rows, index, band };
}
