/** Parts that recapture can have, in plain words; each is linear on the logit scale. */
export type RecapturePart =
  | "constant"
  | "effort"
  /** By covariates of the interval that the occasion closes. */
  | "covariates"
  | "strata"
  | "effort and strata"
  | "each occasion"
  | "each occasion and strata";
/** `choose` compares the parts under one survival per interval and takes the least AICc. */
export type RecaptureChoice = RecapturePart | "choose";

export interface SurvivalOptions {
  /** Columns of the captures that split animals; each level adds to survival on the logit scale. */
  readonly strata: readonly string[];
  /** Covariates always in the model, unpenalised. */
  readonly forced: readonly string[];
  /** A linear trend over the years always in the model, unpenalised. */
  readonly yearTrend?: boolean;
  /** `first interval apart`: survival differs in the interval after an animal was marked (time since marking). */
  readonly sinceMarking?: "ignored" | "first interval apart";
  /** With time since marking: whether covariates act on the first interval too. */
  readonly covariatesActOn?: "all intervals" | "later intervals";
  /** `years`: intervals of several years are cut into years, each with a survival and covariates of its own. */
  readonly split?: "none" | "years";
}
