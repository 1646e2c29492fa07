import type { Place } from "../errors.ts";
import { InputError } from "../errors.ts";
import type { DeriveOptions } from "./options.ts";

const WORDS: Readonly<Record<DeriveOptions["rule"], (of: readonly string[]) => string>> = {
  difference: ([a, b]) => `${a} minus ${b}`,
  ratio: ([a, b]) => `${a} divided by ${b}`,
  product: (of) => `product of ${of.join(" and ")}`,
  square: ([a]) => `square of ${a}`,
  mean: (of) => `mean of ${of.join(", ")}`,
};

/** How many columns each rule takes: [least, most]. */
const TAKES: Readonly<Record<DeriveOptions["rule"], readonly [number, number]>> = {
  difference: [2, 2],
  ratio: [2, 2],
  product: [2, Number.POSITIVE_INFINITY],
  square: [1, 1],
  mean: [1, Number.POSITIVE_INFINITY],
};

/** A derived covariate's definition in words. */
export function deriveText({ rule, of }: DeriveOptions): string {
  return WORDS[rule](of);
}

/** Throws `covariates.derive-count` where a rule is given more or fewer columns than it takes. */
export function checkDerive({ name, rule, of }: DeriveOptions): void {
  const [least, most] = TAKES[rule];
  if (of.length >= least && of.length <= most) return;
  const many = most === least ? String(least) : `at least ${least}`;
  throw new InputError({
    name: "covariates.derive-count",
    expected: `${many} covariate${least === 1 && most === 1 ? "" : "s"} for a ${rule}`,
    found: of.length === 0 ? "none" : `${of.length}: ${of.join(", ")}`,
    where: { cell: `derive: ${name}` },
    remedy: "name as many covariates as the rule takes",
  });
}

/**
 * One row of a derived covariate: a − b, a / b, Π, a², or the mean of the columns. Missing where any of them is.
 * Throws `covariates.impossible` for a ratio to 0.
 */
function deriveOne({ name, rule }: DeriveOptions, of: readonly number[], where: Place): number {
  switch (rule) {
    case "difference":
      return of[0] - of[1];
    case "ratio":
      if (of[1] !== 0) return of[0] / of[1];
      throw new InputError({
        name: "covariates.impossible",
        expected: `a number other than 0 to divide by in ${name}`,
        found: "0",
        where,
        remedy: "take a difference, or leave the covariate out",
      });
    case "product":
      return of.reduce((product, value) => product * value, 1);
    case "square":
      return of[0] * of[0];
    case "mean":
      return of.reduce((sum, value) => sum + value, 0) / of.length;
  }
}

/** A derived column of the given columns, row by row. */
export function deriveColumn(
  options: DeriveOptions,
  columns: readonly ArrayLike<number>[],
  rowName: (t: number) => string,
): Float64Array {
  return Float64Array.from({ length: columns[0].length }, (_, t) =>
    deriveOne(
      options,
      columns.map((column) => column[t]),
      { cell: `${options.name}, ${rowName(t)}` },
    ),
  );
}
