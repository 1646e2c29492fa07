import { fUpper } from "../math/distributions.ts";

/** A fitted model, as far as the analysis of deviance needs it. */
export interface Deviance {
  readonly minus2LogL: number;
  /** Rank of the information matrix. */
  readonly parameters: number;
}

export interface AnalysisOfDeviance {
  /** NaN where no degrees of freedom are left. */
  readonly f: number;
  readonly df1: number;
  readonly df2: number;
  readonly p: number;
  /** R²_dev: the share of the deviance between years that the covariates account for. */
  readonly share: number;
  /** ĉ between years, (D_cov − D_t)/(r_t − r_cov); never to be confused with the one between animals. */
  readonly betweenYears: number;
}

/**
 * Analysis of deviance (Skalski 1996; Grosbois et al. 2008, Biol. Rev. 83):
 *
 *     F = [(D_const − D_cov)/(r_cov − r_const)] / [(D_cov − D_t)/(r_t − r_cov)],
 *     R²_dev = (D_const − D_cov)/(D_const − D_t),
 *
 * with D = −2 log L and r the ranks, for one survival, survival by covariates, and one survival per interval.
 */
export function analysisOfDeviance(
  constant: Deviance,
  covariate: Deviance,
  interval: Deviance,
): AnalysisOfDeviance {
  const df1 = covariate.parameters - constant.parameters;
  const df2 = interval.parameters - covariate.parameters;
  const explained = constant.minus2LogL - covariate.minus2LogL;
  const left = covariate.minus2LogL - interval.minus2LogL;
  const usable = df1 > 0 && df2 > 0;
  const betweenYears = df2 > 0 ? left / df2 : Number.NaN;
  const f = usable ? explained / df1 / betweenYears : Number.NaN;
  return {
    f,
    df1,
    df2,
    p: usable ? fUpper(f, df1, df2) : Number.NaN,
    share: explained / (constant.minus2LogL - interval.minus2LogL),
    betweenYears,
  };
}
