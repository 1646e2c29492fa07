import type { ScreenOptions } from "../screen/options.ts";
import { REPLICATES_TASK, type Replicate, type ReplicateChunk, type Scenario } from "./replicate.ts";
import { type Helpers, shareOut } from "./share-out.ts";
import { perSd, type StudyDesign } from "./study-design.ts";
import { type Tally, tally } from "./tally.ts";

export const RULES = ["counting years", "counting animals"] as const;
export type Rule = (typeof RULES)[number];

/** What is asked of a design. */
export interface DetectionRequest {
  /** Positions of the covariates that are to act, all by the same size. */
  readonly named: readonly number[];
  /** Which way each of them acts. */
  readonly directions: readonly (1 | -1)[];
  /** Sizes of the effect, logit per sd, 0 or above. */
  readonly effects: readonly number[];
  /** sd of what no covariate tells between years, on the logit. */
  readonly residual: number;
  readonly replicates: number;
}

export interface DetectionRow extends Tally {
  readonly effect: number;
  readonly rule: Rule;
}

/** What each rule finds, effect by effect. */
export interface Detection {
  readonly covariates: readonly string[];
  readonly directions: readonly (1 | -1)[];
  readonly residual: number;
  readonly replicates: number;
  /** By effect, ascending, and rule. */
  readonly rows: readonly DetectionRow[];
}

/**
 * How often each rule finds the named covariates, and what it chooses wrongly, over a grid of effect sizes. Every size
 * has random streams of its own, named after it, so its shares are independent of the others and of the grid.
 */
export async function detect(
  design: StudyDesign,
  request: DetectionRequest,
  options: ScreenOptions,
  seed: number,
  helpers: Helpers,
): Promise<Detection> {
  const { named, directions, residual, replicates } = request;
  const effects = [...new Set(request.effects)].sort((a, b) => a - b);
  const runs = effects.map((effect): Omit<ReplicateChunk, "from" | "to"> => {
    const acting = named.map((covariate, i) => ({ covariate, perSd: directions[i] * effect }));
    const scenario: Scenario = { effects: effect === 0 ? [] : acting, residual };
    return { design, scenario, options, seed, stream: `what the study can detect, ${effect} per sd` };
  });
  const drawn = await shareOut<(typeof runs)[number], Replicate>(
    helpers,
    { label: "drawing studies", task: REPLICATES_TASK, replicates },
    runs,
  );
  const correlation = correlationOf(design);
  const rows = effects.flatMap((effect, e): DetectionRow[] => {
    return RULES.map((rule) => ({
      effect,
      rule,
      ...tally(
        drawn[e].map((one) => choiceBy(rule, one)),
        named,
        effect !== 0,
        correlation,
      ),
    }));
  });
  const covariates = named.map((k) => design.covariates[k].name);
  return { covariates, directions, residual, replicates, rows };
}

function choiceBy(rule: Rule, { byYears, byAnimals, rivals }: Replicate) {
  return rule === "counting years" ? { chosen: byYears, rivals } : { chosen: byAnimals, rivals: [] };
}

/** Pearson's r of two covariates over the intervals: Σ z_a z_b/(n − 1). */
function correlationOf({ covariates }: StudyDesign): (a: number, b: number) => number {
  const standard = covariates.map((one) => perSd(one.values));
  return (a, b) => standard[a].reduce((sum, z, t) => sum + z * standard[b][t], 0) / (standard[a].length - 1);
}
