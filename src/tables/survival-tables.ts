import type { Interval } from "../data/occasion.ts";
import type { ScreenResult } from "../screen/screen.ts";
import type { Fit } from "../survival/fit.ts";
import { number, text, truth, uniqueSlugs, whole } from "./columns.ts";
import type { Table } from "./table.ts";

export function recaptureTable(screened: ScreenResult): Table {
  return {
    name: "recapture-parts",
    title: "Recapture parts, under one survival per interval",
    description: `Compared before any covariate was looked at. In use: ${screened.recapture.chosen} (${screened.recapture.because}).`,
    columns: [
      text("recapture", "recapture", "the recapture part"),
      whole("parameters", "parameters", "1", "parameters the data determine"),
      number("minus_2_log_l", "−2 log L", "1", "without the multinomial constant"),
      number("aicc", "AICc", "1", "n = releases"),
      truth("in_use", "in use", "used in every model that follows"),
    ],
    rows: screened.recapture.rows.map((row) => [
      row.part,
      row.parameters,
      row.minus2LogL,
      row.aicc,
      row.part === screened.recapture.chosen,
    ]),
  };
}

export function pathTable(screened: ScreenResult): Table {
  const slugs = uniqueSlugs(screened.names);
  return {
    name: "lasso-path",
    title: "Adaptive-lasso path",
    description: `Weights by ${screened.weights.by}; criterion ${screened.options.chooseBy} at the ${screened.options.fit} solution, n = ${screened.sampleSize} ${screened.options.sampleSize}.`,
    columns: [
      whole("step", "step", "1", "1 for the largest penalty"),
      number("lambda", "λ", "1", "penalty on the total scale"),
      whole("selected", "selected", "1", "covariates that are not 0"),
      whole("parameters", "parameters", "1", "selected and unpenalised parameters"),
      number("minus_2_log_l", "−2 log L", "1", "at the shrunken solution"),
      number("minus_2_log_l_refit", "−2 log L, refit", "1", "of the same covariates without penalty"),
      number("bic", "BIC", "1", "criterion that counts animals"),
      number("aicc", "AICc", "1", "criterion that counts animals"),
      number("extended_bic", "extended BIC", "1", "BIC that charges for the number of candidates"),
      number("qbic", "QBIC", "1", "BIC with ĉ between animals; empty where it is not known"),
      number("qaicc", "QAICc", "1", "AICc with ĉ between animals; empty where it is not known"),
      truth("chosen", "chosen", "the λ the criterion chose"),
      truth("in_band", "in band", "within 2 units of the criterion's least value"),
      number("residual", "optimality residual", "λ_max", "largest violation of the optimality conditions"),
      text("stopped", "stopped", "why the solver stopped"),
      ...screened.names.map((name, k) =>
        number(`effect_${slugs[k]}`, name, "logit per sd", "shrunken coefficient"),
      ),
    ],
    rows: screened.path.steps.map((step, i) => {
      const row = screened.choice.rows[i];
      return [
        i + 1,
        step.lambda,
        row.active,
        row.parameters,
        row.minus2LogL,
        row.minus2LogLRefit,
        row.bic,
        row.aicc,
        row.extendedBic,
        row.qbic,
        row.qaicc,
        i === screened.choice.index,
        screened.choice.band.includes(i),
        step.residual,
        step.stopped,
        ...step.coefficients,
      ];
    }),
  };
}

export function selectionTable(screened: ScreenResult): Table {
  const estimate = (fit: Fit, name: string) => {
    const k = fit.names.indexOf(name);
    return k < 0 ? [undefined, undefined] : [fit.estimates[k], fit.se[k]];
  };
  const coefficients = screened.path.steps[screened.choice.index].coefficients;
  return {
    name: "selection",
    title: "What was selected, counting animals and counting years",
    description:
      "Effects on logit apparent annual survival per standard deviation. Standard errors of terms that these data chose are too small; no p value belongs to them.",
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      number("first_estimate", "first estimate", "logit per sd", "estimate that the weight comes from"),
      number("weight", "weight", "1", "weight of the penalty"),
      number("lasso", "lasso", "logit per sd", "shrunken coefficient at the chosen λ"),
      truth("chosen_by_animals", "chosen by animals", "by the criterion that counts animals"),
      number(
        "in_band",
        "in band",
        "1",
        "share of the λ within 2 units of the criterion's least value that have it",
      ),
      number("refit_animals", "refit (animals)", "logit per sd", "refit of that set without penalty"),
      number("refit_animals_se", "se", "logit per sd", "standard error of the refit"),
      truth("chosen_by_years", "chosen by years", "by the rule that counts years"),
      number("refit_years", "refit (years)", "logit per sd", "refit of that set without penalty"),
      number("refit_years_se", "se (years)", "logit per sd", "standard error of the refit"),
    ],
    rows: screened.names.map((name, k) => [
      name,
      screened.weights.first[k],
      screened.weights.weights[k],
      coefficients[k],
      screened.byAnimals.names.includes(name),
      screened.choice.band.filter((i) => screened.path.steps[i].coefficients[k] !== 0).length /
        screened.choice.band.length,
      ...estimate(screened.byAnimals.fit, name),
      screened.byYears.names.includes(name),
      ...estimate(screened.byYears.fit, name),
    ]),
  };
}

export function survivalTable(screened: ScreenResult, intervals: readonly Interval[]): Table {
  const models: readonly (readonly [string, Fit])[] = [
    ["each interval its own", screened.intervalFit],
    ["chosen by years", screened.byYears.fit],
    ["chosen by animals", screened.byAnimals.fit],
    ["constant", screened.constantFit],
  ];
  return {
    name: "apparent-survival",
    title: "Apparent annual survival",
    description:
      "Death and permanent emigration together. No standard error where an estimate is at its bound.",
    columns: [
      text("model", "survival model", "how survival was modelled"),
      text("stratum", "stratum", "stratum of animals"),
      text("interval", "interval", "name of the interval"),
      number("survival", "apparent annual survival", "per year", "estimate"),
      number("se", "se", "per year", "standard error"),
      number("low", "low", "per year", "lower end of the 95 % interval, on the logit scale"),
      number("high", "high", "per year", "upper end of the 95 % interval, on the logit scale"),
    ],
    rows: models.flatMap(([model, fit]) =>
      fit.survival.map((one) => [
        model,
        one.stratum,
        intervals[one.interval].name,
        one.value,
        one.se,
        one.low,
        one.high,
      ]),
    ),
  };
}

export function influenceTable(screened: ScreenResult, intervals: readonly Interval[]): Table {
  const same = (names: readonly string[]) =>
    names.length === screened.byYears.names.length &&
    names.every((name) => screened.byYears.names.includes(name));
  return {
    name: "influence",
    title: "The choices with one interval left out",
    description:
      "Each interval in turn is given a survival of its own, columns are standardised anew, and weights, paths and choices are made again.",
    columns: [
      text("left_out", "left out", "interval left out"),
      text("chosen_by_years", "chosen by years", "covariates chosen by years without it"),
      truth("same_by_years", "as before", "the choice by years is the same as with all intervals"),
      text("chosen_by_animals", "chosen by animals", "covariates chosen by animals without it"),
      number("gain", "gain", "1", "gain of the choice by years without it"),
    ],
    rows: screened.influence.map((one) => [
      intervals[one.interval].name,
      one.byYears.join("; ") || "nothing",
      same(one.byYears),
      one.byAnimals.join("; ") || "nothing",
      one.gain,
    ]),
  };
}

export function evidenceTable(screened: ScreenResult): Table {
  const { permutation, years, shifts } = screened;
  const rows: (readonly [string, number, string])[] = [
    ["gain of the choice by years", years.gain, "fall of −2 log marginal likelihood, less its price"],
    ["p each term had to pass", years.alpha, "min(.045, .1/K)"],
  ];
  if (permutation !== undefined)
    rows.push(
      ["permutations of years", permutation.replicates, "weights, paths and choices repeated in each"],
      ["family-wise p", permutation.p, "of the whole procedure that counts years"],
      ["share choosing something, by years", permutation.falseByYears, "with years permuted"],
      ["share choosing something, by animals", permutation.falseByAnimals, "with years permuted"],
      ["deviance explained, median by years", permutation.medianShareByYears, "with years permuted"],
      ["deviance explained, median by animals", permutation.medianShareByAnimals, "with years permuted"],
      ["deviance explained, 95 % by years", permutation.shareByYears95, "with years permuted"],
      ["deviance explained, 95 % by animals", permutation.shareByAnimals95, "with years permuted"],
    );
  if (shifts !== undefined)
    rows.push([
      "share of circular shifts that do as well",
      shifts,
      "keeps autocorrelation; the study counted in",
    ]);
  const { randomIntervals } = screened;
  if (randomIntervals !== undefined) {
    const { sigmaWithout, sigma, explained } = randomIntervals;
    rows.push(
      ["sd between years, no covariate", sigmaWithout, "random interval effects on the logit, by REML"],
      ["sd between years, chosen by years", sigma, "what is left beside the covariates chosen"],
      ["variance between years explained", explained, "1 − the ratio of the two variances"],
    );
  }
  return {
    name: "evidence",
    title: "Evidence counted in years",
    description: "The numbers the verdict is made of.",
    columns: [
      text("quantity", "quantity", "what was measured"),
      number("value", "value", "1", "its value"),
      text("note", "note", "what it means"),
    ],
    rows,
  };
}

export function randomIntervalTable(screened: ScreenResult): Table {
  const { randomIntervals } = screened;
  return {
    name: "random-interval-effects",
    title: "Effects with a random effect of each interval",
    description: `Covariates chosen by years, on logit apparent annual survival per standard deviation; the intervals allow for variation between years (REML, t), not for the choosing. As a second opinion ${screened.secondOpinion?.by ?? "no other rule"} chooses from the same candidates: ${screened.secondOpinion?.names.join("; ") || "nothing"}.`,
    columns: [
      text("covariate", "covariate", "name of the covariate"),
      number("effect", "effect", "logit per sd", "estimate"),
      number("se", "se", "logit per sd", "standard error"),
      number("low", "low", "logit per sd", "lower end of the 95 % interval"),
      number("high", "high", "logit per sd", "upper end of the 95 % interval"),
    ],
    rows: (randomIntervals?.effects ?? []).map((one) => [one.name, one.estimate, one.se, one.low, one.high]),
  };
}
