import type { Comparison } from "../compare/compare.ts";
import { number, text, truth, whole } from "./columns.ts";
import type { Table } from "./table.ts";

export function comparisonTable(comparison: Comparison): Table {
  return {
    name: "comparison",
    title: "Selection and components on equal terms",
    description:
      "Same data, recapture part and sample size. F and p stand only beside survival models that were fixed before looking at survival.",
    columns: [
      text("candidate", "candidate", "how survival is modelled"),
      text("survival", "survival", "its terms in words"),
      truth("chosen_on_data", "chosen on these data", "its terms were chosen on these data"),
      number("parameters", "parameters", "1", "parameters the data determine; effective ones for ridge"),
      number("minus_2_log_l", "−2 log L", "1", "without the multinomial constant"),
      number("aicc", "AICc", "1", "counts animals"),
      number("bic", "BIC", "1", "counts animals"),
      number("deviance_explained", "deviance explained", "1", "share of the deviance between years"),
      number("between_years", "ĉ between years", "1", "deviance left per interval left"),
      number("f", "F", "1", "analysis of deviance; empty for terms chosen on these data"),
      whole("df_1", "df", "1", "degrees of freedom of the terms"),
      whole("df_2", "df left", "1", "intervals left"),
      number("p", "p", "1", "empty for terms chosen on these data"),
      number(
        "foretold",
        "foretold",
        "1",
        "share of what the constant model misses of left-out intervals that this one foretells",
      ),
      number(
        "log_score_gain",
        "log score gain",
        "1",
        "over the constant model, summed over left-out intervals",
      ),
      number("log_score_gain_se", "its standard error", "1", "root n times the sd over intervals"),
    ],
    rows: comparison.candidates.map((one) => {
      const left = comparison.prediction?.candidates.find((other) => other.key === one.key);
      const test = !one.chosenOnData && one.deviance.df1 > 0 && one.deviance.df2 > 0;
      return [
        one.key,
        one.words,
        one.chosenOnData,
        one.fit.parameters,
        one.fit.minus2LogL,
        one.aicc,
        one.bic,
        one.deviance.share,
        one.deviance.betweenYears,
        test ? one.deviance.f : undefined,
        test ? one.deviance.df1 : undefined,
        test ? one.deviance.df2 : undefined,
        test ? one.deviance.p : undefined,
        left?.share,
        left?.gain,
        left?.gainError,
      ];
    }),
  };
}

export function effectsTable(comparison: Comparison): Table {
  return {
    name: "effects-three-ways",
    title: "Effects by selection and by components",
    description: "Effect on logit apparent annual survival per standard deviation of the covariate.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      number("lasso", "lasso", "logit per sd", "shrunken coefficient"),
      number("refit", "refit", "logit per sd", "refit of the set chosen by animals; 0 where not chosen"),
      number(
        "components",
        "components, carried back",
        "logit per sd",
        "effects of the components kept, as effects of covariates",
      ),
      number("ridge", "ridge", "logit per sd", "all covariates at once, shrunken"),
    ],
    rows: comparison.agreement.effects.map((one) => [
      one.name,
      one.lasso,
      one.refit,
      one.components,
      one.ridge,
    ]),
  };
}

export function agreementTable(comparison: Comparison): Table {
  return {
    name: "agreement",
    title: "Agreement of fitted survivals",
    description:
      "Correlation over strata and intervals; empty where one of the two leaves survival constant.",
    columns: [
      text("first", "candidate", "first candidate"),
      text("second", "and", "second candidate"),
      number("r", "correlation", "1", "Pearson correlation of the fitted apparent annual survivals"),
    ],
    rows: comparison.agreement.survival.map((one) => [one.a, one.b, one.r]),
  };
}

/** Each left-out interval as each candidate foretold it; nothing where no interval was left out. */
export function foretoldTables(comparison: Comparison, intervals: readonly string[]): readonly Table[] {
  const { prediction } = comparison;
  if (prediction === undefined) return [];
  return [
    {
      name: "left-out-intervals",
      title: "Intervals left out one at a time",
      description:
        "Logit of apparent annual survival by the interval's own captures beside what each candidate, made again without that interval, foretold.",
      columns: [
        text("candidate", "candidate", "how survival is modelled"),
        text("interval", "interval left out", "name of the interval"),
        number("logit", "logit survival", "1", "from its own captures, first stratum"),
        number("logit_se", "its standard error", "1", "sampling only"),
        number("foretold", "foretold", "1", "prediction on the logit scale"),
        number("between_sd", "sd between years", "1", "unexplained, from the other intervals"),
        number("log_score", "log score", "1", "log density at the prediction"),
        text("terms", "terms", "what was chosen without this interval"),
      ],
      rows: prediction.candidates.flatMap((one) =>
        one.rows.map((row, i) => [
          one.key,
          intervals[row.interval],
          row.logit,
          Math.sqrt(row.variance),
          row.predicted,
          Math.sqrt(row.between),
          one.scores[i],
          row.terms.join(", "),
        ]),
      ),
    },
  ];
}
