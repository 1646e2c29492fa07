import { Matrix as Dense, EigenvalueDecomposition } from "ml-matrix";
import type { Matrix } from "../data/matrix.ts";
import { choleskyInPlace, choleskySolve } from "../math/cholesky.ts";
import { noPenalty } from "../solve/penalty.ts";
import { proximalNewton } from "../solve/proximal-newton.ts";
import type { Smooth } from "../solve/smooth.ts";
import { covariateSurvival, intervalSurvival } from "./design.ts";
import type { RandomIntervalProblem } from "./effects-design.ts";
import { gradientTolerance } from "./fit.ts";
import { cjsLikelihood } from "./likelihood.ts";
import { designOf } from "./recapture-choice.ts";

/** Standard deviation of the prior on a logit whose estimate runs away; wide against any real spread of survival. */
const WIDE = 3;
/** A logit this far from the common one has run to a bound (a survival above .999 or below .001 of its odds). */
const AWAY = 7;
/** Directions with less than this share of the largest information count as unknown. */
const UNKNOWN = 1e-8;

/** The likelihood of the interval logits as a Gaussian: the first of two steps. */
export interface TwoStep {
  /** Logit of annual survival by interval, n: where the Gaussian has its top, pulled nowhere. */
  readonly logits: Float64Array;
  /** n × n; unknown directions are left out (pseudo-inverse of the information). */
  readonly covariance: Matrix;
  /** Information on the logits with recapture and contrasts between strata profiled out, n × n. */
  readonly information: Matrix;
  /** Intervals whose survival ran to 0 or 1, expanded under a wide prior that was then removed. */
  readonly atBound: readonly number[];
  /**
   * Coordinates in which logits + N(0, σ²D) have independent errors: with D^½ Q D^½ = U Λ Uᵀ, row i of `rotation`
   * is the i-th column of U times D^−½; its variance is 1/λ_i + σ². Only directions with λ_i > 0.
   */
  readonly rotation: readonly Float64Array[];
  readonly eigenvalues: Float64Array;
  /** The rotated logits. */
  readonly rotated: Float64Array;
}

/**
 * Per-interval logits with their covariance. One survival per interval is fitted; intervals that run to a bound get a
 * normal prior (sd 3 around the common logit), the mode is taken again, and the prior is removed from the quadratic
 * expansion there: with f = −log L, Q the profiled curvature and g the profiled gradient of f alone at the mode η*,
 *
 *     −log L(η) ≈ ½ (η − y)ᵀ Q (η − y),    Q y = Q η* − g.
 */
export function twoStep(problem: RandomIntervalProblem): TwoStep {
  const { data, frame, recapture } = problem;
  const n = frame.intervals;
  const strata = frame.strata.length;
  const f = cjsLikelihood(data, designOf(frame, intervalSurvival(frame), recapture));
  const d = f.dimension;
  const options = { tolerance: gradientTolerance(data), iterations: 100 };
  const bare = { ...frame, forced: [] };
  const common = proximalNewton(
    cjsLikelihood(data, designOf(frame, covariateSurvival(bare, []), recapture)),
    noPenalty,
    new Float64Array(strata + d - n - strata + 1),
    options,
  ).x;
  const start = new Float64Array(d).fill(common[0], 0, n);
  start.set(common.subarray(1), n);
  let x = proximalNewton(f, noPenalty, start, options).x;
  const away = (eta: number) => !(Math.abs(eta - common[0]) <= AWAY);
  const bound = new Set<number>();
  // a bound that gives way can lay bare another one (recapture moves along), hence the loop
  for (let round = 0; round < 3; round++) {
    const found = Array.from({ length: n }, (_, t) => t).filter((t) => !bound.has(t) && away(x[t]));
    if (found.length === 0) break;
    for (const t of found) bound.add(t);
    x = proximalNewton(withPrior(f, bound, common[0]), noPenalty, start, options).x;
  }
  const gradient = new Float64Array(d);
  const curvature = new Float64Array(d * d);
  f.evaluate(x, gradient);
  f.curvature(
    Int32Array.from({ length: d }, (_, k) => k),
    curvature,
  );
  const { information, slope } = profile(curvature, gradient, d, n);
  const naturals = slope.map((g, t) => {
    let sum = -g;
    for (let u = 0; u < n; u++) sum += information[t * n + u] * x[u];
    return sum;
  });
  return rotate(
    information,
    naturals,
    frame.lengths,
    [...bound].sort((a, b) => a - b),
  );
}

/** f plus the normal prior on the logits of the intervals in `bound`. */
function withPrior(f: Smooth, bound: ReadonlySet<number>, centre: number): Smooth {
  const weight = 1 / WIDE ** 2;
  return {
    dimension: f.dimension,
    evaluate: (x, gradient) => {
      let value = f.evaluate(x, gradient);
      for (const t of bound) {
        value += 0.5 * weight * (x[t] - centre) ** 2;
        gradient[t] += weight * (x[t] - centre);
      }
      return value;
    },
    curvature: (which, out) => {
      f.curvature(which, out);
      which.forEach((k, i) => {
        if (bound.has(k)) out[i * which.length + i] += weight;
      });
    },
  };
}

/** Curvature and gradient of the profile over the coordinates from n on (Schur complement). */
function profile(curvature: Float64Array, gradient: Float64Array, d: number, n: number) {
  const m = d - n;
  const information = new Float64Array(n * n);
  const slope = gradient.slice(0, n);
  const l = new Float64Array(m * m);
  let most = 0;
  for (let i = 0; i < m; i++) most = Math.max(most, Math.abs(curvature[(n + i) * d + n + i]));
  // a nuisance coefficient that runs to its own bound (recapture 1) has no curvature left: a hair keeps it in place
  for (let i = 0; i < m; i++)
    for (let j = 0; j < m; j++)
      l[i * m + j] = curvature[(n + i) * d + n + j] + (i === j ? 1e-10 * (most || 1) : 0);
  const regular = choleskyInPlace(l, m);
  const column = new Float64Array(m);
  for (let t = 0; t < n; t++) {
    for (let i = 0; i < m; i++) column[i] = curvature[t * d + n + i];
    if (regular) choleskySolve(l, m, column);
    else column.fill(0);
    for (let i = 0; i < m; i++) slope[t] -= column[i] * gradient[n + i];
    for (let u = 0; u < n; u++) {
      let sum = curvature[t * d + u];
      for (let i = 0; i < m; i++) sum -= column[i] * curvature[u * d + n + i];
      information[t * n + u] = sum;
    }
  }
  return { information, slope };
}

function rotate(
  information: Float64Array,
  naturals: Float64Array,
  lengths: Float64Array,
  atBound: readonly number[],
): TwoStep {
  const n = lengths.length;
  const root = Float64Array.from(lengths, (length) => 1 / Math.sqrt(length)); // D^½
  const scaled = new Float64Array(n * n);
  for (let i = 0; i < n; i++)
    for (let j = 0; j < n; j++)
      scaled[i * n + j] = 0.5 * (information[i * n + j] + information[j * n + i]) * root[i] * root[j];
  const eigen = new EigenvalueDecomposition(Dense.from1DArray(n, n, scaled), { assumeSymmetric: true });
  const largest = Math.max(...eigen.realEigenvalues);
  const kept = eigen.realEigenvalues.flatMap((value, i) => (value > UNKNOWN * largest ? [i] : []));
  const eigenvalues = Float64Array.from(kept, (i) => eigen.realEigenvalues[i]);
  const vectors = kept.map((i) => Float64Array.from(eigen.eigenvectorMatrix.getColumn(i)));
  const rotated = Float64Array.from(kept, (_, i) => {
    let sum = 0;
    for (let t = 0; t < n; t++) sum += vectors[i][t] * root[t] * naturals[t];
    return sum / eigenvalues[i];
  });
  const logits = new Float64Array(n);
  const covariance = new Float64Array(n * n);
  for (let i = 0; i < kept.length; i++)
    for (let t = 0; t < n; t++) {
      logits[t] += root[t] * vectors[i][t] * rotated[i];
      for (let u = 0; u < n; u++)
        covariance[t * n + u] += (root[t] * vectors[i][t] * root[u] * vectors[i][u]) / eigenvalues[i];
    }
  return {
    logits,
    covariance: { rows: n, columns: n, data: covariance },
    information: { rows: n, columns: n, data: information },
    atBound,
    rotation: vectors.map((vector) => vector.map((value, t) => value / root[t])),
    eigenvalues,
    rotated,
  };
}
