import { InputError } from "../errors.ts";
import type { Transform } from "./options.ts";

interface Rule {
  readonly forward: (x: number) => number;
  readonly back: (y: number) => number;
  readonly allows: (x: number) => boolean;
  readonly expected: string;
}

const RULES: Readonly<Record<Transform, Rule>> = {
  log: { forward: Math.log, back: Math.exp, allows: (x) => x > 0, expected: "values above 0" },
  // log1p and expm1 keep the digits of values near 0 that log(1 + x) would lose.
  log1p: { forward: Math.log1p, back: Math.expm1, allows: (x) => x > -1, expected: "values above −1" },
  "square root": {
    forward: Math.sqrt,
    back: (y) => y * y,
    allows: (x) => x >= 0,
    expected: "values of 0 or more",
  },
  logit: {
    forward: (x) => Math.log(x) - Math.log1p(-x),
    back: (y) => 1 / (1 + Math.exp(-y)),
    allows: (x) => x > 0 && x < 1,
    expected: "values above 0 and below 1",
  },
};

/**
 * Values on the transformed scale; missing stays missing. Throws `covariates.impossible` for a value the transform
 * has no answer to, naming the covariate and the row.
 */
export function transformed(
  values: ArrayLike<number>,
  transform: Transform | undefined,
  covariate: string,
  rowName: (t: number) => string,
): Float64Array {
  if (transform === undefined) return Float64Array.from(values);
  const rule = RULES[transform];
  return Float64Array.from(values, (value, t) => {
    if (Number.isNaN(value) || rule.allows(value)) return rule.forward(value);
    throw new InputError({
      name: "covariates.impossible",
      expected: `${rule.expected} for ${transform}`,
      found: String(value),
      where: { cell: `${covariate}, ${rowName(t)}` },
      remedy: "choose another transform for this covariate, or none",
    });
  });
}

/** Back to the original unit. */
export function backTransformed(value: number, transform: Transform | undefined): number {
  return transform === undefined ? value : RULES[transform].back(value);
}
