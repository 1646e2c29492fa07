/**
 * A smooth function to be minimised over x in R^d. The solver calls `evaluate` first and may then ask for the
 * curvature at that same point, so that an implementation can keep what it has already worked out.
 */
export interface Smooth {
  readonly dimension: number;
  /** f(x); writes ∇f(x) (d) into `gradient`. +Infinity where f is not defined. */
  evaluate(x: Float64Array, gradient: Float64Array): number;
  /**
   * Second derivatives at the point last evaluated, for the coordinates `which` (m): writes the m × m symmetric
   * matrix, row-major, into `out`.
   */
  curvature(which: Int32Array, out: Float64Array): void;
}

/** Why a solver stopped. Only `optimum` is a success. */
export type StopReason =
  /** The optimality conditions hold to the tolerance asked for. */
  | "optimum"
  /** No step along a descent direction lowers the objective at machine precision. */
  | "no lower point"
  | "too many iterations"
  /** The objective is not finite at the start. */
  | "start outside the domain";
