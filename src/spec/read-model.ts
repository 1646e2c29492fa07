import type { CollinearityOptions } from "../collinearity/options.ts";
import type { KeepRule } from "../components/options.ts";
import type { Standardise } from "../covariates/options.ts";
import type { FindingKind, Severity } from "../data/finding.ts";
import type { ScreenOptions } from "../screen/options.ts";
import type { DuplicateRule } from "../stations/options.ts";
import type { SurvivalOptions } from "../survival/options.ts";
import { byKind, given } from "./given.ts";
import type { RawPipeline } from "./schema.ts";
import { PARALLEL } from "./schema-model.ts";
import type { FindingPolicy, Spec } from "./spec.ts";
import { readYears } from "./windows.ts";

export function readStandardise(raw: RawPipeline["prepare"]["standardise"]): Standardise {
  return typeof raw === "string" ? { type: raw } : { type: "base", ...readYears(raw.base) };
}

export function readCollinearity(raw: RawPipeline["collinearity"]): CollinearityOptions {
  return given({ ...raw, decisions: raw.decisions.map((decision) => given(decision)) });
}

export function readKeep(raw: RawPipeline["components"]["keep"]): KeepRule {
  if (raw === "parallel") return { type: "parallel", ...PARALLEL };
  if (typeof raw === "string") return { type: raw };
  if ("parallel" in raw) return { type: "parallel", ...raw.parallel };
  if ("share" in raw) return { type: "share", share: raw.share };
  return { type: "number", number: raw.number };
}

/** Strata that are left out are all those of the captures. */
export function readSurvival(raw: RawPipeline["survival"], ofCaptures: readonly string[]): SurvivalOptions {
  const byStratum = Object.entries(raw["covariates by stratum"]).map(([name, { by, values }]) => ({
    name,
    by,
    values: new Map(Object.entries(values)),
  }));
  return {
    strata: raw.strata ?? ofCaptures,
    ...(byStratum.length === 0 ? {} : { byStratum }),
    forced: raw.forced,
    yearTrend: raw["year trend"],
    sinceMarking: raw["time since marking"],
    covariatesActOn: raw["covariates act on"],
    split: raw.split,
  };
}

/** The part, and the covariates it goes by. */
export function readRecapture(
  raw: RawPipeline["recapture"],
): Pick<Spec, "recapture" | "recaptureCovariates"> {
  if (typeof raw === "string") return { recapture: raw };
  return { recapture: "covariates", recaptureCovariates: raw.covariates };
}

export function readScreen(raw: RawPipeline["screen"]): ScreenOptions {
  return {
    steps: raw.steps,
    downTo: raw["down to"],
    gamma: raw.gamma,
    chooseBy: raw["choose by"],
    sampleSize: raw["sample size"],
    fit: raw.fit,
    permutations: raw.permutations,
    resamples: raw.resamples,
  };
}

/** An entry of `findings` after the schema; `keep` belongs to duplicates alone. */
interface RawPolicy {
  readonly do: Severity;
  readonly keep?: DuplicateRule["keep"];
  readonly except: readonly {
    readonly file?: string;
    readonly subject?: string;
    readonly do?: Severity;
    readonly keep?: DuplicateRule["keep"];
    readonly note: string;
  }[];
}

function policyOf(raw: RawPipeline["findings"], kind: FindingKind): RawPolicy {
  // The schema has one entry per kind, built in a loop, which its inferred type cannot tell apart.
  const entry = raw[kind] as Severity | RawPolicy;
  return typeof entry === "string" ? { do: entry, except: [] } : entry;
}

export function readFindings(raw: RawPipeline["findings"]): Record<FindingKind, FindingPolicy> {
  return byKind((kind) => {
    const policy = policyOf(raw, kind);
    const except = policy.except.map(({ file, subject, do: action = "accept", note }) =>
      given({ file, subject, do: action, note }),
    );
    return { do: policy.do, except };
  });
}

/** Contradicting rows: none stands unless the file says which. */
export function readDuplicates(raw: RawPipeline["findings"]): DuplicateRule {
  const { keep = "none", except } = policyOf(raw, "duplicate");
  return {
    keep,
    except: except.map((one) => ({ file: one.file ?? "", keep: one.keep ?? keep, note: one.note })),
  };
}
