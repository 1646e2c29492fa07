import { decompose, unitColumns } from "../collinearity/decomposition.ts";
import { type Matrix, zeros } from "../data/matrix.ts";
import { InputError } from "../errors.ts";
import type { Random } from "../math/random.ts";
import { brokenStick, chooseKept } from "./keep.ts";
import type { KeepRule } from "./options.ts";
import type { Components } from "./result.ts";

/** Components whose sd is below this share of the first one's are rounding. */
const NEGLIGIBLE = 1e-8;

/** Loadings closer than this in magnitude are equal when the sign is chosen. */
const TIE = 1e-9;

/**
 * Principal components of the correlation matrix of n intervals × K covariates: Z (centred, divided by the sample sd)
 * = U D V'; sd_j = d_j/√(n − 1), loadings V, scores Z V. Sign: the loading of largest magnitude in a component is
 * positive (between equals the one whose covariate comes first by name). `random` is needed for parallel analysis.
 *
 * Throws `components.missing-cell`, `components.too-few-rows` and `components.constant-column`.
 */
export function principalComponents(
  standard: Matrix,
  names: readonly string[],
  keep: KeepRule,
  random?: Random,
): Components {
  checkUsable(standard, names);
  const { rows, columns: K } = standard;
  const { unit, centre, length } = unitColumns(standard);
  checkVaries(length, names, rows);
  const { values, vectors, rank } = decompose(unit, NEGLIGIBLE);
  const m = Math.min(rows - 1, rank);
  const freedom = Math.sqrt(rows - 1);
  // Unit columns are z/√(n − 1): their singular values are the components' sd as they stand.
  const sd = Array.from(values.subarray(0, m));
  const loadings = zeros(K, m);
  for (let j = 0; j < m; j++) {
    const sign = signOf(vectors, j, names);
    for (let k = 0; k < K; k++) loadings.data[k * m + j] = sign * vectors.data[k * K + j];
  }
  const share = sd.map((value) => value ** 2 / K);
  let sum = 0;
  const facts = {
    names,
    labels: sd.map((_, j) => `component ${j + 1}`),
    sd,
    share,
    cumulative: share.map((value) => {
      sum += value;
      return sum;
    }),
    loadings,
    correlations: scaleColumns(loadings, sd),
    brokenStick: brokenStick(m),
    centre: Array.from(centre),
    scale: Array.from(length, (value) => value / freedom),
  };
  const scores = scoreRows(facts, standard);
  return { ...facts, scores, ...chooseKept(keep, sd, { rows, columns: K }, random) };
}

/**
 * Scores of rows (r × K, in the units of the matrix the components were made from) by the recorded means, standard
 * deviations and loadings: r × m. Rows given to `principalComponents` get back their own scores.
 */
export function scoreRows(
  components: Pick<Components, "loadings" | "centre" | "scale" | "names">,
  rows: Matrix,
): Matrix {
  const { loadings, centre, scale, names } = components;
  const [K, m] = [loadings.rows, loadings.columns];
  if (rows.columns !== K)
    throw new InputError({
      name: "components.columns-differ",
      expected: `the ${K} covariates the components were made from (${names.join(", ")})`,
      found: `rows of ${rows.columns} values`,
      remedy: "prepare the new rows by the same pipeline",
    });
  const out = zeros(rows.rows, m);
  for (let i = 0; i < rows.rows; i++)
    for (let k = 0; k < K; k++) {
      const z = (rows.data[i * K + k] - (centre?.[k] ?? 0)) / (scale?.[k] ?? 1);
      for (let j = 0; j < m; j++) out.data[i * m + j] += z * loadings.data[k * m + j];
    }
  return out;
}

/** 1, or −1 if column j's largest loading is negative. */
export function signOf(vectors: Matrix, j: number, names: readonly string[]): 1 | -1 {
  const at = (k: number) => vectors.data[k * vectors.columns + j];
  let best = 0;
  for (let k = 1; k < vectors.rows; k++) {
    const gap = Math.abs(at(k)) - Math.abs(at(best));
    if (gap > TIE || (gap > -TIE && names[k] < names[best])) best = k;
  }
  return at(best) < 0 ? -1 : 1;
}

function scaleColumns(matrix: Matrix, by: readonly number[]): Matrix {
  const data = matrix.data.map((value, at) => value * by[at % matrix.columns]);
  return { ...matrix, data };
}

function checkUsable(matrix: Matrix, names: readonly string[]): void {
  if (matrix.rows < 3 || matrix.columns === 0)
    throw new InputError({
      name: "components.too-few-rows",
      expected: "at least 3 intervals and 1 covariate",
      found: `${matrix.rows} intervals, ${matrix.columns} covariates`,
      where: { cell: "components" },
      remedy: "lengthen the study, or leave components out",
    });
  const missing = matrix.data.findIndex((value) => !Number.isFinite(value));
  if (missing < 0) return;
  const row = Math.floor(missing / matrix.columns);
  throw new InputError({
    name: "components.missing-cell",
    expected: "a value in every interval",
    found: `${matrix.data[missing]} in row ${row + 1}`,
    where: { cell: names[missing % matrix.columns] },
    remedy: "let prepare leave the covariate out or fill in its mean",
  });
}

function checkVaries(length: Float64Array, names: readonly string[], rows: number): void {
  const constant = length.indexOf(0);
  if (constant < 0) return;
  throw new InputError({
    name: "components.constant-column",
    expected: "covariates that vary between intervals",
    found: `one value in all ${rows} intervals`,
    where: { cell: names[constant] },
    remedy: "drop the covariate, or define it so that it varies",
  });
}
