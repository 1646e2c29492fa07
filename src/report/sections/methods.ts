import type { Html } from "../html.ts";
import { html } from "../html.ts";
import type { ReportInput } from "../input.ts";
import { brief, counted } from "../numbers.ts";
import type { Section } from "../parts.ts";

/** Cited works, in order of the alphabet, with where they are needed. */
const WORKS = {
  bartlett:
    "Bartlett, M. S. (1935) Some aspects of the time-correlation problem in regard to tests of significance. Journal of the Royal Statistical Society 98: 536–543.",
  belsley: "Belsley, D. A., Kuh, E. & Welsch, R. E. (1980) Regression Diagnostics. Wiley.",
  burnham:
    "Burnham, K. P., Anderson, D. R., White, G. C., Brownie, C. & Pollock, K. H. (1987) Design and analysis methods for fish survival experiments based on release–recapture. American Fisheries Society Monograph 5.",
  dormann:
    "Dormann, C. F. et al. (2013) Collinearity: a review of methods to deal with it. Ecography 36: 27–46.",
  grosbois:
    "Grosbois, V. et al. (2008) Assessing the impact of climate variation on survival in vertebrate populations. Biological Reviews 83: 357–399.",
  harville:
    "Harville, D. A. (1974) Bayesian inference for variance components using only error contrasts. Biometrika 61: 383–385.",
  hastie: "Hastie, T., Tibshirani, R. & Wainwright, M. (2015) Statistical Learning with Sparsity. CRC Press.",
  horn: "Horn, J. L. (1965) A rationale and test for the number of factors in factor analysis. Psychometrika 30: 179–185.",
  jackson: "Jackson, D. A. (1993) Stopping rules in principal components analysis. Ecology 74: 2204–2214.",
  lebreton:
    "Lebreton, J.-D., Burnham, K. P., Clobert, J. & Anderson, D. R. (1992) Modeling survival and testing biological hypotheses using marked animals. Ecological Monographs 62: 67–118.",
  schwarz: "Schwarz, G. (1978) Estimating the dimension of a model. Annals of Statistics 6: 461–464.",
  hurvich:
    "Hurvich, C. M. & Tsai, C.-L. (1989) Regression and time series model selection in small samples. Biometrika 76: 297–307.",
  skalski:
    "Skalski, J. R. (1996) Regression of abundance estimates from mark–recapture surveys against environmental covariates. Canadian Journal of Fisheries and Aquatic Sciences 53: 196–204.",
  tierney:
    "Tierney, L. & Kadane, J. B. (1986) Accurate approximations for posterior moments and marginal densities. Journal of the American Statistical Association 81: 82–86.",
  wmo: "World Meteorological Organization (2017) Guidelines on the Calculation of Climate Normals. WMO-No. 1203.",
  zou: "Zou, H. (2006) The adaptive lasso and its oracle properties. Journal of the American Statistical Association 101: 1418–1429.",
} as const;

type Work = keyof typeof WORKS;

/** The methods in words, as they would stand in a supplement; only what this run did. */
export function methodsSection(input: ReportInput): Section {
  const { diagnosis, components, screened } = input;
  const used = new Set<Work>(["wmo"]);
  const cite = (...works: Work[]) => {
    for (const one of works) used.add(one);
  };
  const parts: Html[] = [
    html`<p><b>Time and covariates.</b> Intervals run from the middle of one occasion to the middle of the next. Each covariate gives every interval one value: a statistic of the observed series over that interval's window. Days of a window that were not observed count against the rule of completeness (by default that of the World Meteorological Organization, 2017); a window that fails it has no value. ${standardising(input)}</p>`,
  ];
  if (diagnosis !== undefined) {
    cite("belsley", "dormann");
    parts.push(
      html`<p><b>Collinearity.</b> Pearson and Spearman correlations, variance inflation factors from the inverse of the correlation matrix, and condition indices with variance-decomposition proportions of the columns scaled to unit length with the intercept (Belsley et al. 1980). Clusters come from average linkage on 1 − |r|. The limits (|r| ${brief(input.warn.correlation)}, inflation ${brief(input.warn.inflation)}, condition index ${brief(input.warn.condition)}) are conventions (Dormann et al. 2013).</p>`,
    );
  }
  if (components !== undefined) {
    cite("jackson");
    if (components.parallel !== undefined) cite("horn");
    parts.push(
      html`<p><b>Components.</b> Principal components of the correlation matrix; in each, the loading of largest magnitude is positive. Kept: ${components.keptBecause}${components.parallel === undefined ? " (Jackson 1993)" : " (Horn 1965)"}.</p>`,
    );
  }
  if (screened !== undefined) {
    cite("lebreton", "burnham", "zou", "hastie", "skalski", "grosbois");
    cite("schwarz", "hurvich", "tierney", "bartlett", "harville");
    const { options } = screened;
    parts.push(
      html`<p><b>Survival.</b> The Cormack–Jolly–Seber likelihood of releases and recaptures (Burnham et al. 1987; Lebreton et al. 1992), with apparent annual survival and recapture each linear on the logit scale; over an interval of Δ years survival is annual survival to the power Δ. Recapture: ${screened.constantFit.recaptureWords}. Estimates at a bound are reported without a standard error; 95 % intervals are made on the logit scale.</p>`,
      html`<p><b>Screen.</b> Adaptive lasso (Zou 2006; Hastie et al. 2015): −log L + λ Σ w|β| is minimised, with weights 1/|β̃|${options.gamma === 1 ? "" : html`<sup>${brief(options.gamma)}</sup>`} from the ${screened.weights.by} fit, covariates at unit standard deviation, everything else unpenalised, over ${counted(options.steps, "penalty", "penalties")}. The choice by animals takes the least ${options.chooseBy} (n = ${screened.sampleSize} ${options.sampleSize}) at the ${options.fit === "refit" ? "refit without penalty" : "shrunken solution"} (Schwarz 1978; Hurvich & Tsai 1989). The choice by years weighs the sets of the path, and of a second path with weights from a ridge fit, by the marginal likelihood of a model with a random effect of each interval, N(0, σ²/Δ) on the logit (Laplace's approximation; Tierney & Kadane 1986), so that variation between years which no covariate tells raises the bar. Terms whose p on the years left, by F = ν[exp(ΔD/n) − 1], is not below ${brief(screened.years.alpha)} are pruned and each further term is charged a price. Where covariate and residual both run on from year to year the n intervals count as n(1 − rr′)/(1 + rr′) (Bartlett 1935). Standard deviations between years are by restricted maximum likelihood (Harville 1974); the second opinion is an analysis of deviance (Skalski 1996; Grosbois et al. 2008) on the same sets. A chosen covariate that another, related one could replace at next to no cost is named together with it; where an unrelated one would do as well it is let go.${screened.permutation !== undefined && ` The family-wise p is that of the whole procedure over ${screened.permutation.replicates} permutations of years.`}</p>`,
      html`<p><b>Comparison.</b> All candidates share the captures and the recapture part. The share of deviance is (D<sub>constant</sub> − D<sub>model</sub>)/(D<sub>constant</sub> − D<sub>interval</sub>), D = −2 log L; F tests the model against one survival per interval and is given only where its terms were fixed before looking. ĉ between years is the deviance left per degree of freedom; it is not a measure of fit between animals. Components are carried back to covariates by their loadings.</p>`,
    );
  }
  const list = Object.keys(WORKS)
    .map((key) => key as Work) // the keys of WORKS and no others
    .filter((key) => used.has(key))
    .map((key) => WORKS[key])
    .sort((a, b) => (a < b ? -1 : 1));
  return {
    id: "methods",
    title: "Methods",
    body: html`${parts}<h3>Works cited</h3><ul>${list.map((one) => html`<li>${one}</li>`)}</ul>`,
  };
}

function standardising({ matrix }: ReportInput): string {
  const changed = matrix.recipes
    .filter((one) => one.transform !== undefined)
    .map((one) => `${one.name} (${one.transform})`);
  const detrended = matrix.recipes.filter((one) => one.detrend !== "none").length;
  return [
    changed.length > 0 ? `Transformed first: ${changed.join(", ")}.` : "",
    detrended > 0 ? `${counted(detrended, "covariate")} ${detrended === 1 ? "was" : "were"} detrended.` : "",
    "Columns were then centred and divided by a standard deviation (divisor n − 1); the constants stand in the tables.",
  ]
    .filter((text) => text !== "")
    .join(" ");
}
