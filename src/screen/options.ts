export type Criterion = "BIC" | "AICc" | "extended BIC" | "QBIC" | "QAICc";
export type SampleSize = "releases" | "animals" | "intervals";

export interface ScreenOptions {
  /** Number of λ from λ_max downwards, log-equal. */
  readonly steps: number;
  /** λ_min / λ_max. */
  readonly downTo: number;
  readonly gamma: number;
  readonly chooseBy: Criterion;
  readonly sampleSize: SampleSize;
  /** Where −2 log L of the criterion is taken: at the shrunken solution or at the refit. */
  readonly fit: "shrunken" | "refit";
  /** ĉ between animals from the goodness of fit, for QBIC and QAICc; not known if not said. */
  readonly betweenAnimals?: number;
  /** Permutations of years over the whole procedure. */
  readonly permutations: number;
  /** Resamples of the study from each of its worlds; none if not said. */
  readonly resamples?: number;
}
