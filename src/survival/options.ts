export type RecapturePart = "constant" | "each occasion" | "effort";
/** `choose` compares the parts under one survival per interval and takes the least AICc. */
export type RecaptureChoice = RecapturePart | "choose";

export interface SurvivalOptions {
  /** Columns of the captures that split animals; each level adds to survival on the logit scale. */
  readonly strata: readonly string[];
  /** Covariates always in the model, unpenalised. */
  readonly forced: readonly string[];
}
