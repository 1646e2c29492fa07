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

/** A class, since the solver's inner loops call it some 10⁶ times a screen: one shape, which the engine can inline. */
class WeightedL1 implements Penalty {
  /** λ w_k. */
  private readonly bends: Float64Array;
  private readonly weights: Float64Array;

  constructor(lambda: number, weights: Float64Array) {
    this.weights = weights;
    this.bends = new Float64Array(weights.length);
    for (let k = 0; k < weights.length; k++) if (weights[k] !== 0) this.bends[k] = lambda * weights[k];
  }

  value(x: Float64Array): number {
    let sum = 0;
    for (let k = 0; k < x.length; k++) if (x[k] !== 0) sum += this.bends[k] * Math.abs(x[k]);
    return sum;
  }

  distance(k: number, x: number, gradient: number): number {
    const bend = this.bends[k];
    return x === 0
      ? Math.max(0, Math.abs(gradient) - bend)
      : Math.abs(x > 0 ? gradient + bend : gradient - bend);
  }

  slope(k: number, sign: number): number {
    return this.bends[k] * sign;
  }

  penalised(k: number): boolean {
    return this.weights[k] !== 0;
  }
}

/**
 * λ Σ_k w_k |x_k| (Tibshirani 1996; with data-driven weights the adaptive lasso of Zou 2006). Weight 0 leaves a
 * coordinate unpenalised; an infinite weight keeps it at 0.
 */
export function weightedL1(lambda: number, weights: Float64Array): Penalty {
  return new WeightedL1(lambda, weights);
}

export const noPenalty: Penalty = {
  value: () => 0,
  distance: (_k, _x, gradient) => Math.abs(gradient),
  slope: () => 0,
  penalised: () => false,
};
