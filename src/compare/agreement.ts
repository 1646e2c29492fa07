import type { Components } from "../components/result.ts";
import { column } from "../data/matrix.ts";
import { mean, sampleSd } from "../math/quantile.ts";
import type { ScreenProblem } from "../screen/problem.ts";
import type { ScreenResult } from "../screen/screen.ts";
import { fixedSurvivalColumns } from "../survival/design.ts";
import type { Candidate, CandidateKey } from "./candidates.ts";

/** Correlation of the apparent annual survivals two candidates fit, over strata and intervals; NaN if one is flat. */
export interface SurvivalAgreement {
  readonly a: CandidateKey;
  readonly b: CandidateKey;
  readonly r: number;
}

/** Effects on logit survival per sd of one covariate, by selection, by components and by ridge. */
export interface CarriedEffect {
  readonly name: string;
  /** Shrunken lasso solution at the chosen λ. */
  readonly lasso: number;
  /** Refit of the set chosen by animals; 0 where not chosen. */
  readonly refit: number;
  /** Components kept, carried back: β = V γ. */
  readonly components: number;
  /** All covariates at once, shrunken by ridge. */
  readonly ridge: number;
}

export interface Agreement {
  readonly survival: readonly SurvivalAgreement[];
  readonly effects: readonly CarriedEffect[];
  /** Of the covariates the lasso chose, how many have the same sign by components. */
  readonly sameSign: number;
  readonly chosen: number;
}

const COMPARED: readonly CandidateKey[] = [
  "chosen by animals",
  "chosen by years",
  "components kept",
  "components screened",
  "ridge",
];

/** Whether lasso and components tell the same story: fitted survivals, and effects carried back to covariates. */
export function agreement(
  problem: ScreenProblem,
  screened: ScreenResult,
  candidates: readonly Candidate[],
  components: Components | undefined,
): Agreement {
  const compared = candidates.filter((one) => COMPARED.includes(one.key));
  const survival = compared.flatMap((a, i) =>
    compared.slice(i + 1).map((b) => ({ a: a.key, b: b.key, r: correlation(rates(a), rates(b)) })),
  );
  const carried = carriedBack(problem, candidates, components);
  const fixed = fixedSurvivalColumns(problem.frame);
  const ridge = candidates.find((one) => one.key === "ridge");
  const { byAnimals, path, choice } = screened;
  const effects = problem.covariates.map((one, k) => {
    const at = byAnimals.names.indexOf(one.name);
    return {
      name: one.name,
      lasso: path.steps[choice.index].coefficients[k],
      refit: at < 0 ? 0 : byAnimals.fit.estimates[fixed + at],
      components: carried === undefined ? Number.NaN : carried[k],
      ridge: ridge === undefined ? Number.NaN : ridge.fit.estimates[fixed + k],
    };
  });
  const chosen = effects.filter((one) => one.lasso !== 0);
  return {
    survival,
    effects,
    sameSign: chosen.filter((one) => Math.sign(one.lasso) === Math.sign(one.components)).length,
    chosen: chosen.length,
  };
}

function rates(candidate: Candidate): number[] {
  return candidate.fit.survival.map((one) => one.value);
}

function correlation(a: readonly number[], b: readonly number[]): number {
  const [ma, mb, sa, sb] = [mean(a), mean(b), sampleSd(a), sampleSd(b)];
  // rates that are equal but for rounding have no correlation
  if (sa < 1e-12 || sb < 1e-12) return Number.NaN;
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += (a[i] - ma) * (b[i] - mb);
  return sum / (a.length - 1) / sa / sb;
}

/**
 * β_k = Σ_j V_kj γ_j / sd_j over the components kept: scores are z_j = x V_j / sd_j of the standardised covariates x, so
 * Σ_j γ_j z_j = Σ_k β_k x_k.
 */
function carriedBack(
  problem: ScreenProblem,
  candidates: readonly Candidate[],
  components: Components | undefined,
): Float64Array | undefined {
  const kept = candidates.find((one) => one.key === "components kept");
  if (components === undefined || kept === undefined) return undefined;
  const first = fixedSurvivalColumns(problem.frame);
  const beta = new Float64Array(problem.covariates.length);
  for (let j = 0; j < components.kept; j++) {
    const sd = sampleSd(column(components.scores, j));
    const gamma = kept.fit.estimates[first + j];
    for (let k = 0; k < beta.length; k++)
      beta[k] += (components.loadings.data[k * components.loadings.columns + j] * gamma) / sd;
  }
  return beta;
}
