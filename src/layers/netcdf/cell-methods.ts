import type { RawFinding } from "../../data/finding.ts";
import type { ValueKind } from "../../data/series.ts";

/**
 * The methods that a variable's values were formed by over time, first to last (CF-1.11 §7.3): of "time: maximum within
 * days time: mean over days" maximum and mean. Comments in brackets and methods over other dimensions are left out.
 */
export function methodsOverTime(cellMethods: string, time: string): readonly string[] {
  const plain = cellMethods.replace(/\([^)]*\)/g, " ");
  const out: string[] = [];
  for (const [, names, method] of plain.matchAll(/((?:[\w/.-]+:\s+)+)([a-z_]+)/gi))
    if (names.split(/:\s+/).some((name) => name === time || name === "time")) out.push(method.toLowerCase());
  return out;
}

/** What a file says its values are. */
export interface CellMethods {
  readonly path: string;
  readonly text: string;
  /** Name of the time dimension. */
  readonly time: string;
}

/** What each method makes of a value; others (point, variance, …) make neither. */
const KINDS: Readonly<Record<string, ValueKind>> = {
  sum: "total",
  mean: "mean",
  maximum: "maximum",
  minimum: "minimum",
};

/** The kind of value that the methods tell: that of the last one, which was formed over the whole period. */
export function kindByMethods(methods: readonly string[]): ValueKind | undefined {
  return KINDS[methods[methods.length - 1] ?? ""];
}

/**
 * A finding where the pipeline file takes a variable for another kind than its methods tell. The mean over days of daily
 * extremes may be called by either word.
 */
export function kindFinding(
  layer: string,
  path: string,
  cellMethods: string | undefined,
  time: string,
  kind: ValueKind,
): RawFinding | undefined {
  const methods = methodsOverTime(cellMethods ?? "", time);
  const told = methods.map((one) => KINDS[one]);
  if (methods.length === 0 || told.includes(kind) || told[told.length - 1] === undefined) return undefined;
  return {
    kind: "layer-methods",
    subject: layer,
    message: `the file says of its values ${JSON.stringify(cellMethods)}, the pipeline file says kind: ${kind}`,
    where: { file: path },
    value: cellMethods ?? "",
    remedy: `write kind: ${told[told.length - 1]}, or accept it if the file's cell_methods are wrong`,
  };
}

/** Statistics that contradict what values stand for, by their kind. */
const CONTRADICTED: Readonly<Record<ValueKind, readonly string[]>> = {
  total: ["minimum", "maximum"],
  mean: ["sum"],
  minimum: ["sum", "maximum"],
  maximum: ["sum", "minimum"],
};

/** A finding where a covariate asks a statistic of values that were formed otherwise, e.g. a sum of means. */
export function statisticFinding(
  covariate: string,
  statistic: string,
  layer: string,
  { path, text, time }: CellMethods,
): RawFinding | undefined {
  const methods = methodsOverTime(text, time);
  const told = kindByMethods(methods);
  const extremes = methods.includes("maximum") || methods.includes("minimum");
  if (
    told === undefined ||
    !CONTRADICTED[told].includes(statistic) ||
    (extremes && methods.includes(statistic))
  )
    return undefined;
  return {
    kind: "layer-methods",
    subject: covariate,
    message: `${statistic} is asked of ${layer}, whose values the file calls ${JSON.stringify(text)}`,
    where: { file: path },
    value: statistic,
    remedy: "choose a statistic that the values allow, or another variable",
  };
}
