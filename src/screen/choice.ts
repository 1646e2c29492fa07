import { InputError } from "../errors.ts";
import { aicc, bic } from "../survival/criteria.ts";
import type { ScreenOptions } from "./options.ts";
import type { LassoPath } from "./path.ts";

/** The criteria of one λ. */
export interface CriterionRow {
  readonly lambda: number;
  readonly active: number;
  /** Non-zero β + unpenalised parameters. */
  readonly parameters: number;
  readonly minus2LogL: number;
  /** −2 log L of the unpenalised refit on the same covariates. */
  readonly minus2LogLRefit: number;
  readonly bic: number;
  /** NaN where n − k − 1 ≤ 0. */
  readonly aicc: number;
}

export interface PathChoice {
  readonly rows: readonly CriterionRow[];
  /** Index of the chosen λ. */
  readonly index: number;
  /** Indices of the λ within 2 units of the least value. */
  readonly band: readonly number[];
}

/**
 * BIC = −2 log L + df·log n and AICc along the path, at the shrunken solutions or at the refits; the least value
 * wins, ties go to the sparser model, which comes first. Rows with n − k − 1 ≤ 0 are not chosen. Throws
 * `screen.no-criterion` where it is nowhere defined.
 */
export function chooseOnPath(
  path: LassoPath,
  unpenalised: number,
  sampleSize: number,
  options: Pick<ScreenOptions, "chooseBy" | "fit">,
  refit: (active: readonly number[]) => number,
): PathChoice {
  const rows = path.steps.map((step): CriterionRow => {
    const parameters = unpenalised + step.active.length;
    const minus2LogLRefit = refit(step.active);
    const used = options.fit === "refit" ? minus2LogLRefit : step.minus2LogL;
    return {
      lambda: step.lambda,
      active: step.active.length,
      parameters,
      minus2LogL: step.minus2LogL,
      minus2LogLRefit,
      bic: bic(used, parameters, sampleSize),
      aicc: aicc(used, parameters, sampleSize),
    };
  });
  // with as many parameters as observations a criterion ranks nothing, whichever it is
  const value = (row: CriterionRow) => {
    if (sampleSize - row.parameters - 1 <= 0) return Number.NaN;
    return options.chooseBy === "BIC" ? row.bic : row.aicc;
  };
  const index = rows.reduce(
    (best, row, i) =>
      best < 0 ? (Number.isNaN(value(row)) ? -1 : i) : value(row) < value(rows[best]) - 1e-9 ? i : best,
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
  const least = value(rows[index]);
  const band = rows.flatMap((row, i) => (value(row) <= least + 2 ? [i] : []));
  return { rows, index, band };
}
