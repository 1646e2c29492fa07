import { fromColumns } from "../data/matrix.ts";
import { leastSquares } from "./regression.ts";
import type { Dependency } from "./result.ts";

interface Solved {
  readonly response: number;
  readonly others: readonly number[];
  readonly coefficients: readonly number[];
  readonly intercept: number;
}

/**
 * Tells a dependency among columns in words: one of them as a combination of the others. The one that is a plain sum
 * is told as such, then a sum with minus signs, else the last column is written in terms of the others.
 */
export function relationOf(
  names: readonly string[],
  columns: readonly Float64Array[],
): Required<Pick<Dependency, "kind" | "relation">> {
  const rows = columns[0].length;
  const largest = Math.max(...columns.map((one) => one.reduce((max, x) => Math.max(max, Math.abs(x)), 0)));
  const solved = columns.map((y, response): Solved => {
    const others = columns.map((_, k) => k).filter((k) => k !== response);
    const fit = leastSquares(
      fromColumns(
        others.map((k) => columns[k]),
        rows,
      ),
      y,
    );
    // A constant within rounding of the data is none.
    const intercept = Math.abs(fit.intercept) <= 1e-8 * largest ? 0 : fit.intercept;
    return { response, others, coefficients: Array.from(fit.coefficients, nearWhole), intercept };
  });
  const sum = solved.find(({ coefficients }) => coefficients.every((b) => b === 1));
  const signed = solved.find(({ coefficients }) => coefficients.every((b) => Math.abs(b) === 1));
  const pair = columns.length === 2;
  const last = solved[solved.length - 1];
  const told = pair ? last : (sum ?? signed ?? last);
  const relation = `${names[told.response]} = ${right(told, names)}`;
  if (pair)
    return { kind: told.coefficients[0] === 1 && told.intercept === 0 ? "copy" : "rescaled", relation };
  return { kind: sum === undefined && signed === undefined ? "combination" : "sum", relation };
}

/** Rounding is taken off coefficients that are whole numbers but for it. */
function nearWhole(value: number): number {
  const whole = Math.round(value);
  return whole !== 0 && Math.abs(value - whole) <= 1e-6 ? whole : value;
}

function right({ others, coefficients, intercept }: Solved, names: readonly string[]): string {
  const terms = others.map((k, at) => ({ size: coefficients[at], name: names[k] }));
  if (intercept !== 0) terms.push({ size: intercept, name: "" });
  // A positive term leads, so that the text does not begin with a minus sign.
  terms.sort((a, b) => Number(b.size > 0) - Number(a.size > 0));
  return terms
    .map(({ size, name }, at) => {
      const sign = at === 0 ? (size < 0 ? "−" : "") : size < 0 ? " − " : " + ";
      const amount = Number(Math.abs(size).toPrecision(4));
      if (name === "") return `${sign}${amount}`;
      return amount === 1 ? `${sign}${name}` : `${sign}${amount} × ${name}`;
    })
    .join("");
}
