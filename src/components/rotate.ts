import { type Matrix, zeros } from "../data/matrix.ts";
import { signOf } from "./components.ts";
import type { Components, RotatedComponents } from "./result.ts";

/** Sweeps over all pairs of components; a handful is the rule. */
const SWEEPS = 200;
/** Angles below this (radians) no longer change a digit that is shown. */
const STILL = 1e-12;

/** A correlation of at least this makes a covariate one that a component is named after (convention, no source). */
const NAMING = 0.6;

/**
 * Varimax (Kaiser 1958, Psychometrika 23:187–200): the rotation T of K × k correlations A that makes
 * Σ_j [Σ_i b⁴_ij − (Σ_i b²_ij)²/K], B = A T, largest, pair by pair with the angle of Kaiser's equation for tan 4φ. Rows are
 * first divided by the root of their communality and multiplied back (Kaiser's normalisation).
 */
export function varimax(correlations: Matrix): { readonly rotated: Matrix; readonly rotation: Matrix } {
  const { rows: K, columns: k } = correlations;
  const B = { rows: K, columns: k, data: Float64Array.from(correlations.data) };
  const T = zeros(k, k);
  for (let j = 0; j < k; j++) T.data[j * k + j] = 1;
  const length = Float64Array.from({ length: K }, (_, i) =>
    Math.sqrt(B.data.subarray(i * k, (i + 1) * k).reduce((sum, value) => sum + value * value, 0)),
  );
  const weigh = (by: (length: number) => number) => {
    B.data.forEach((value, at) => {
      B.data[at] = value * by(length[Math.floor(at / k)]);
    });
  };
  weigh((one) => (one > 0 ? 1 / one : 0));
  for (let sweep = 0, largest = 1; sweep < SWEEPS && largest > STILL; sweep++) {
    largest = 0;
    for (let a = 0; a < k; a++)
      for (let b = a + 1; b < k; b++) {
        const angle = varimaxAngle(B, a, b);
        largest = Math.max(largest, Math.abs(angle));
        turn(B, a, b, angle);
        turn(T, a, b, angle);
      }
  }
  weigh((one) => one);
  return { rotated: B, rotation: T };
}

/** Kaiser's angle for columns a and b: tan 4φ = (D − 2AB/K)/(C − (A² − B²)/K), u = x² − y², v = 2xy. */
function varimaxAngle({ rows, columns, data }: Matrix, a: number, b: number): number {
  let [A, B, C, D] = [0, 0, 0, 0];
  for (let i = 0; i < rows; i++) {
    const [x, y] = [data[i * columns + a], data[i * columns + b]];
    const [u, v] = [x * x - y * y, 2 * x * y];
    A += u;
    B += v;
    C += u * u - v * v;
    D += 2 * u * v;
  }
  return Math.atan2(D - (2 * A * B) / rows, C - (A * A - B * B) / rows) / 4;
}

function turn({ rows, columns, data }: Matrix, a: number, b: number, angle: number): void {
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  for (let i = 0; i < rows; i++) {
    const [x, y] = [data[i * columns + a], data[i * columns + b]];
    data[i * columns + a] = x * cos + y * sin;
    data[i * columns + b] = y * cos - x * sin;
  }
}

/**
 * The kept components (or the first `count`) turned by varimax so that each can be named after few covariates. Scores
 * are the standardised scores turned the same way: uncorrelated, variance 1. Together they span what the unrotated
 * ones span, so a model on all of them fits the same. Ordered by share of variance, signs as for components.
 */
export function rotateComponents(components: Components, count = components.kept): RotatedComponents {
  const { names, sd } = components;
  const K = names.length;
  const k = Math.min(count, sd.length);
  const first = firstColumns(components.correlations, k);
  const { rotated, rotation } = varimax(first);
  const shares = Array.from({ length: k }, (_, j) => {
    let sum = 0;
    for (let i = 0; i < K; i++) sum += rotated.data[i * k + j] ** 2;
    return sum / K;
  });
  const order = shares.map((_, j) => j).sort((a, b) => shares[b] - shares[a] || a - b);
  const signs = order.map((j) => signOf(rotated, j, names));
  const arrange = (matrix: Matrix): Matrix => {
    const out = zeros(matrix.rows, k);
    for (let i = 0; i < matrix.rows; i++)
      for (let j = 0; j < k; j++) out.data[i * k + j] = signs[j] * matrix.data[i * k + order[j]];
    return out;
  };
  const correlations = arrange(rotated);
  const turned = arrange(rotation);
  return {
    names,
    labels: order.map((_, j) => `rotated ${j + 1}`),
    correlations,
    rotation: turned,
    share: order.map((j) => shares[j]),
    scores: standardisedTimes(firstColumns(components.scores, k), sd, turned),
    ledBy: order.map((_, j) => leaders(correlations, j, names)),
  };
}

/** Covariates that correlate with column j at |r| ≥ 0.6, strongest first, with their sign. */
function leaders(correlations: Matrix, j: number, names: readonly string[]): { name: string; r: number }[] {
  return names
    .map((name, i) => ({ name, r: correlations.data[i * correlations.columns + j] }))
    .filter(({ r }) => Math.abs(r) >= NAMING)
    .sort((a, b) => Math.abs(b.r) - Math.abs(a.r) || (a.name < b.name ? -1 : 1));
}

function firstColumns(matrix: Matrix, k: number): Matrix {
  const out = zeros(matrix.rows, k);
  for (let i = 0; i < matrix.rows; i++)
    out.data.set(matrix.data.subarray(i * matrix.columns, i * matrix.columns + k), i * k);
  return out;
}

function standardisedTimes(scores: Matrix, sd: readonly number[], rotation: Matrix): Matrix {
  const k = rotation.columns;
  const out = zeros(scores.rows, k);
  for (let i = 0; i < scores.rows; i++)
    for (let a = 0; a < k; a++)
      for (let b = 0; b < k; b++)
        out.data[i * k + b] += (scores.data[i * k + a] / sd[a]) * rotation.data[a * k + b];
  return out;
}
