import { InputError } from "../errors.ts";
import { aicc, bic, extendedBic, qaicc, qbic } from "../survival/criteria.ts";
import type { Criterion } from "./options.ts";

/** What a criterion needs of one model. */
export interface Judged {
  readonly minus2LogL: number;
  /** Non-zero β + unpenalised parameters. */
  readonly parameters: number;
  /** Covariates in it. */
  readonly active: number;
}

/** What all models of a screen share. */
export interface CriterionSetting {
  /** n. */
  readonly sampleSize: number;
  /** K, the candidates. */
  readonly covariates: number;
  /** ĉ between animals; NaN where no captures could be tested. */
  readonly betweenAnimals: number;
}

/** Every criterion of one model; NaN where it is not defined. */
export interface Criteria {
  readonly bic: number;
  readonly aicc: number;
  readonly extendedBic: number;
  readonly qbic: number;
  readonly qaicc: number;
}

export function criteriaOf(model: Judged, setting: CriterionSetting): Criteria {
  const { minus2LogL, parameters, active } = model;
  const { sampleSize, covariates, betweenAnimals } = setting;
  return {
    bic: bic(minus2LogL, parameters, sampleSize),
    aicc: aicc(minus2LogL, parameters, sampleSize),
    extendedBic: extendedBic(minus2LogL, parameters, sampleSize, covariates, active),
    qbic: qbic(minus2LogL, parameters, sampleSize, betweenAnimals),
    qaicc: qaicc(minus2LogL, parameters, sampleSize, betweenAnimals),
  };
}

const KEYS: Readonly<Record<Criterion, keyof Criteria>> = {
  BIC: "bic",
  AICc: "aicc",
  "extended BIC": "extendedBic",
  QBIC: "qbic",
  QAICc: "qaicc",
};

/** The criterion asked for; NaN where n − k − 1 ≤ 0, since with as many parameters as observations none ranks anything. */
export function criterionValue(
  by: Criterion,
  criteria: Criteria,
  parameters: number,
  sampleSize: number,
): number {
  return sampleSize - parameters - 1 <= 0 ? Number.NaN : criteria[KEYS[by]];
}

/** Throws `screen.no-inflation` where a Q criterion is asked for and ĉ between animals is not known. */
export function checkInflation(by: Criterion, betweenAnimals: number): void {
  if ((by !== "QBIC" && by !== "QAICc") || betweenAnimals >= 1) return;
  throw new InputError({
    name: "screen.no-inflation",
    expected: `captures that a variance inflation between animals can be had from, which ${by} divides by`,
    found: "no table of the goodness of fit with enough animals",
    where: { cell: "screen > choose by" },
    remedy: "choose by BIC, extended BIC or AICc",
  });
}
