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

/** A covariate with values of its own in each stratum: rows are stratum × interval. */
export interface ByStratum {
  readonly name: string;
  /** The column of the captures' strata that tells which values are an animal's. */
  readonly by: string;
  /** By level of that column, the covariate that gives its values. */
  readonly values: ReadonlyMap<string, string>;
}

export interface SurvivalOptions {
  /**
   * Columns of the captures' strata whose levels (combinations of levels) add to survival on the logit scale. The others split
   * animals for goodness of fit and recapture only.
   */
  readonly strata: readonly string[];
  /** Covariates put together from others, one for each stratum. */
  readonly byStratum?: readonly ByStratum[];
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
