import { statisticValue, windowValue, years } from "./schema-covariates.ts";
import { choice, flag, keys, number, oneOf, someOf, stated, text } from "./words.ts";

const alternative = keys("one other way to do the study", {
  name: text("the name of the alternative", "longer winter"),
  of: text("the covariate whose window, lag or statistic changes", "winter rain").optional(),
  window: windowValue.optional(),
  lag: number("how many years further back that covariate's window lies", 1, {
    min: 0,
    max: 50,
    whole: true,
  }).optional(),
  statistic: statisticValue.optional(),
  standardise: oneOf(
    "how columns are standardised: sample, none or { base: 1991 to 2020 }",
    [
      choice("a rule by name", ["sample", "none"]),
      keys("a fixed base period", { base: years("the base period, at least 20 years") }),
    ],
    "sample",
  ).optional(),
  detrend: choice("how trends are taken out", ["none", "linear", "difference"]).optional(),
  "choose by": choice("the criterion that chooses the penalty", [
    "BIC",
    "AICc",
    "extended BIC",
    "QBIC",
    "QAICc",
  ]).optional(),
  "sample size": choice("what the criterion counts as one observation", [
    "releases",
    "animals",
    "intervals",
  ]).optional(),
  recapture: choice("the recapture part", [
    "choose",
    "constant",
    "effort",
    "strata",
    "effort and strata",
    "each occasion",
    "each occasion and strata",
  ]).optional(),
  "year trend": flag(
    "whether a linear trend over the years is always in the model, true or false",
  ).optional(),
});

export const sensitivity = keys("other ways to do the study, run beside it", {
  permutations: stated(
    number("the permutations of years over the study and all alternatives together; 0 for none", 199, {
      min: 0,
      max: 100_000,
      whole: true,
    }),
    0,
  ),
  alternatives: someOf("the alternatives, each beside the study as it stands", alternative),
}).optional();
