/** A separable penalty Σ_k g_k(x_k), as a solver needs to know it. */
export interface Penalty {
  value(x: Float64Array): number;
  /**
   * How far −∇f is from the penalty's subdifferential in coordinate k (0 at an optimum): the violation of the
   * Karush–Kuhn–Tucker conditions.
   */
  distance(k: number, x: number, gradient: number): number;
  /** Slope of g_k on the side of x that `sign` names, where g_k is linear there; 0 for unpenalised coordinates. */
  slope(k: number, sign: number): number;
  /** False where g_k is 0 everywhere. */
  penalised(k: number): boolean;
}

/**
 * λ Σ_k w_k |x_k| (Tibshirani 1996; with data-driven weights the adaptive lasso of Zou 2006). Weight 0 leaves a
 * coordinate unpenalised; an infinite weight keeps it at 0.
 */
export function weightedL1(lambda: number, weights: Float64Array): Penalty {
  const bend = (k: number) => (weights[k] === 0 ? 0 : lambda * weights[k]);
  return {
    value: (x) => {
      let sum = 0;
      for (let k = 0; k < x.length; k++) if (x[k] !== 0) sum += bend(k) * Math.abs(x[k]);
      return sum;
    },
    distance: (k, x, gradient) =>
      x === 0 ? Math.max(0, Math.abs(gradient) - bend(k)) : Math.abs(gradient + bend(k) * Math.sign(x)),
    slope: (k, sign) => bend(k) * sign,
    penalised: (k) => weights[k] !== 0,
  };
}

export const noPenalty: Penalty = {
  value: () => 0,
  distance: (_k, _x, gradient) => Math.abs(gradient),
  slope: () => 0,
  penalised: () => false,
};
