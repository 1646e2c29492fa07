import { type Matrix, zeros } from "../data/matrix.ts";
import { InputError } from "../errors.ts";
import { scoreRows } from "./components.ts";
import type { Components } from "./result.ts";

/** The number of the layout of recorded components. */
const LAYOUT = 1;

/** What it takes to put new rows on the components of an earlier run. */
export interface RecordedComponents {
  /** Covariates, K, in the order of the loadings' rows. */
  readonly names: readonly string[];
  readonly labels: readonly string[];
  readonly kept: number;
  readonly centre: readonly number[];
  readonly scale: readonly number[];
  /** K × m. */
  readonly loadings: Matrix;
}

/** Components as plain JSON. `readComponents` is its inverse. */
export function componentsJson(components: Components): unknown {
  const { names, labels, kept, centre, scale, loadings } = components;
  return {
    layout: LAYOUT,
    names,
    labels,
    kept,
    centre: centre ?? names.map(() => 0),
    scale: scale ?? names.map(() => 1),
    loadings: names.map((_, k) =>
      Array.from(loadings.data.subarray(k * loadings.columns, (k + 1) * loadings.columns)),
    ),
  };
}

/** Reads components back. Throws `components.recorded-unreadable`. */
export function readComponents(value: unknown, file: string): RecordedComponents {
  const refuse = (): never => {
    throw new InputError({
      name: "components.recorded-unreadable",
      expected: `recorded components of layout ${LAYOUT}`,
      found: "other contents",
      where: { file },
      remedy: "run the earlier pipeline again with this version, so that it records its components",
    });
  };
  if (typeof value !== "object" || value === null) return refuse();
  const { layout, names, labels, kept, centre, scale, loadings } = value as Readonly<Record<string, unknown>>;
  if (layout !== LAYOUT || !isTexts(names) || !isTexts(labels) || !isNumbers(centre) || !isNumbers(scale))
    return refuse();
  const [K, m] = [names.length, labels.length];
  const whole = typeof kept === "number" && Number.isInteger(kept) && kept >= 0 && kept <= m;
  if (!whole || centre.length !== K || scale.length !== K || !scale.every((one) => one > 0)) return refuse();
  if (!Array.isArray(loadings) || loadings.length !== K) return refuse();
  const out = zeros(K, m);
  loadings.forEach((row: unknown, k) => {
    if (!isNumbers(row) || row.length !== m) return refuse();
    out.data.set(row, k * m);
    return undefined;
  });
  return { names, labels, kept, centre, scale, loadings: out };
}

/**
 * Scores of new rows by the recorded loadings, r × m. `standard` holds the new rows prepared by the recorded recipes, its
 * columns named; a missing cell leaves the scores that need it missing. Throws `components.columns-differ` where a covariate
 * of the components is not there.
 */
export function recordedScores(
  recorded: RecordedComponents,
  standard: Matrix,
  columns: readonly string[],
): Matrix {
  const at = recorded.names.map((name) => columns.indexOf(name));
  const lost = recorded.names.filter((_, k) => at[k] < 0);
  if (lost.length > 0)
    throw new InputError({
      name: "components.columns-differ",
      expected: `the covariates the components were made from (${recorded.names.join(", ")})`,
      found: `none named ${lost.join(", ")}`,
      where: { cell: "covariates" },
      remedy: "prepare the new rows by the same pipeline",
    });
  const rows = zeros(standard.rows, at.length);
  for (let i = 0; i < standard.rows; i++)
    at.forEach((from, k) => {
      rows.data[i * at.length + k] = standard.data[i * standard.columns + from];
    });
  return scoreRows(recorded, rows);
}

function isTexts(value: unknown): value is readonly string[] {
  return Array.isArray(value) && value.every((one) => typeof one === "string");
}

function isNumbers(value: unknown): value is readonly number[] {
  return Array.isArray(value) && value.every((one) => typeof one === "number" && Number.isFinite(one));
}
