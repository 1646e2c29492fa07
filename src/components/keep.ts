import { InputError } from "../errors.ts";
import { quantile7 } from "../math/quantile.ts";
import type { Random } from "../math/random.ts";
import { symmetricEigenvalues } from "./eigenvalues.ts";
import type { KeepRule } from "./options.ts";

/** How many components stay, why, and the eigenvalues that chance alone gave (parallel analysis only). */
export interface Kept {
  readonly kept: number;
  readonly keptBecause: string;
  readonly parallel?: readonly number[];
}

/**
 * Expected shares of a stick broken at random into p pieces, largest first: b_k = (1/p) Σ_{i=k..p} 1/i (Jackson 1993,
 * Ecology 74:2204–2214). The stick has as many pieces as there are components with variance, which is fewer than
 * covariates where there are fewer intervals.
 */
export function brokenStick(p: number): number[] {
  const out = new Array<number>(p);
  let sum = 0;
  // From the smallest piece up, so that the small terms are added first.
  for (let k = p; k >= 1; k--) {
    sum += 1 / k;
    out[k - 1] = sum / p;
  }
  return out;
}

/**
 * Horn's parallel analysis (Horn 1965, Psychometrika 30:179–185): the quantile (type 7), over the replicates, of each
 * ordered eigenvalue of the correlation matrix of n × K independent normal values.
 */
export function parallelEigenvalues(
  size: { readonly rows: number; readonly columns: number },
  rule: { readonly replicates: number; readonly quantile: number },
  random: Random,
): number[] {
  const runs = Array.from({ length: rule.replicates }, () => noiseEigenvalues(size, random));
  const m = Math.min(size.rows - 1, size.columns);
  return Array.from({ length: m }, (_, j) =>
    quantile7(
      runs.map((run) => run[j]),
      rule.quantile,
    ),
  );
}

/** Eigenvalues, largest first, of the correlation matrix of independent normal columns; min(n − 1, K) of them. */
export function noiseEigenvalues(
  { rows, columns }: { readonly rows: number; readonly columns: number },
  random: Random,
): number[] {
  // Z'Z and Z Z' share their eigenvalues: take the smaller one, of columns or of rows. Plain loops and one array
  // throughout: this runs hundreds of times.
  const wide = columns > rows;
  const vectors = Array.from(
    { length: wide ? rows : columns },
    () => new Float64Array(wide ? columns : rows),
  );
  const one = new Float64Array(rows);
  for (let k = 0; k < columns; k++) {
    let sum = 0;
    for (let i = 0; i < rows; i++) {
      one[i] = random.normal();
      sum += one[i];
    }
    let squares = 0;
    for (let i = 0; i < rows; i++) {
      one[i] -= sum / rows;
      squares += one[i] * one[i];
    }
    const length = Math.sqrt(squares);
    for (let i = 0; i < rows; i++)
      if (wide) vectors[i][k] = one[i] / length;
      else vectors[k][i] = one[i] / length;
  }
  const side = vectors.length;
  const cross = new Float64Array(side * side);
  for (let a = 0; a < side; a++)
    for (let b = 0; b <= a; b++) {
      const x = vectors[a];
      const y = vectors[b];
      let sum = 0;
      for (let i = 0; i < x.length; i++) sum += x[i] * y[i];
      cross[a * side + b] = sum;
      cross[b * side + a] = sum;
    }
  return symmetricEigenvalues(cross, side).slice(0, Math.min(rows - 1, columns));
}

/**
 * Applies a rule to components with these sd, n × K as given. Broken stick, eigenvalue and parallel analysis keep the
 * leading components up to the first that does not pass; that may be none. Throws `components.keep-value` for a share,
 * number, quantile or number of replicates that makes no sense.
 */
export function chooseKept(
  rule: KeepRule,
  sd: readonly number[],
  size: { readonly rows: number; readonly columns: number },
  random?: Random,
): Kept {
  const eigenvalues = sd.map((value) => value ** 2);
  const share = eigenvalues.map((value) => value / size.columns);
  const m = sd.length;
  switch (rule.type) {
    case "broken stick": {
      const sticks = brokenStick(m);
      // A stick in one piece is no contest, and rounding must not decide one either.
      const kept = m === 1 ? 1 : leading(m, (j) => share[j] > sticks[j] + 1e-12);
      const told = (j: number) => `${percent(share[j])} against ${percent(sticks[j])}`;
      return { kept, keptBecause: because("broken stick", "share of variance", kept, m, told) };
    }
    case "eigenvalue": {
      // A hair above 1, so that an uncorrelated covariate's 1 is not kept by rounding.
      const kept = leading(m, (j) => eigenvalues[j] > 1 + 1e-9);
      const told = (j: number) => `${eigenvalues[j].toFixed(3)} against 1`;
      return { kept, keptBecause: because("eigenvalue above 1", "eigenvalue", kept, m, told) };
    }
    case "parallel": {
      check("quantile", rule.quantile, rule.quantile > 0 && rule.quantile < 1, "a number between 0 and 1");
      check("replicates", rule.replicates, whole(rule.replicates), "a whole number of at least 1");
      if (random === undefined) throw new Error("parallel analysis needs a stream of random numbers");
      const parallel = parallelEigenvalues(size, rule, random);
      const kept = leading(m, (j) => eigenvalues[j] > parallel[j]);
      const told = (j: number) => `${eigenvalues[j].toFixed(3)} against ${parallel[j].toFixed(3)}`;
      const name = `parallel analysis (${rule.replicates} replicates, quantile ${rule.quantile})`;
      return { kept, keptBecause: because(name, "eigenvalue", kept, m, told), parallel };
    }
    case "share": {
      check("share", rule.share, rule.share > 0 && rule.share <= 1, "a share above 0 and at most 1");
      let sum = 0;
      let kept = 0;
      // All of the variance must be reachable despite rounding.
      while (kept < m && sum < rule.share - 1e-12) sum += share[kept++];
      const keptBecause = `share: ${kept} of ${m} hold ${percent(sum)} of the variance, at least ${percent(rule.share)} asked for`;
      return { kept, keptBecause };
    }
    case "number": {
      check("number", rule.number, whole(rule.number), "a whole number of at least 1");
      const kept = Math.min(rule.number, m);
      const fewer = kept < rule.number ? `; ${rule.number} asked for, but only ${m} have variance` : "";
      return { kept, keptBecause: `number: ${kept} of ${m}, as asked for${fewer}` };
    }
  }
}

const whole = (value: number) => Number.isInteger(value) && value >= 1;

function leading(m: number, passes: (j: number) => boolean): number {
  let kept = 0;
  while (kept < m && passes(kept)) kept++;
  return kept;
}

/** `told(j)`: component j's value against what it has to exceed. */
function because(rule: string, what: string, kept: number, m: number, told: (j: number) => string): string {
  const value = (j: number) => `${what} of component ${j + 1}: ${told(j)}`;
  // The last that passes and the first that does not.
  const edge = [kept - 1, kept].filter((j) => j >= 0 && j < m).map(value);
  return `${rule}: ${kept} of ${m} kept; ${edge.join("; ")}`;
}

function percent(share: number): string {
  return `${(100 * share).toFixed(1)} %`;
}

function check(what: string, value: number, good: boolean, expected: string): void {
  if (good) return;
  throw new InputError({
    name: "components.keep-value",
    expected,
    found: String(value),
    where: { cell: `components.keep.${what}` },
    remedy: "correct the rule in the pipeline file",
  });
}
