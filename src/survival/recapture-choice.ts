import { InputError } from "../errors.ts";
import { aicc } from "./criteria.ts";
import {
  closedYears,
  constantRecapture,
  covariateRecapture,
  type Design,
  effortRecapture,
  type Frame,
  intervalSurvival,
  occasionRecapture,
  type Part,
  recaptureContrasts,
  withStrata,
} from "./design.ts";
import { type Fit, fitModel, totalReleases } from "./fit.ts";
import type { RecaptureChoice, RecapturePart } from "./options.ts";
import type { SufficientStatistics } from "./statistics.ts";

export interface RecaptureRow {
  readonly part: RecapturePart;
  readonly minus2LogL: number;
  readonly parameters: number;
  readonly aicc: number;
}

export interface RecaptureComparison {
  readonly rows: readonly RecaptureRow[];
  readonly chosen: RecapturePart;
  /** The user named it, or it had the least AICc. */
  readonly because: string;
  /** One survival per interval with the chosen recapture part. */
  readonly intervalFit: Fit;
}

/** The parts that a frame has what it takes for, simpler ones first. */
function availableParts(frame: Frame): readonly RecapturePart[] {
  const effort = frame.effort !== undefined;
  const strata = recaptureContrasts(frame) > 0;
  const parts: readonly (readonly [RecapturePart, boolean])[] = [
    ["constant", true],
    ["effort", effort],
    ["covariates", (frame.recaptureCovariates?.length ?? 0) > 0],
    ["strata", strata],
    ["effort and strata", effort && strata],
    ["each occasion", true],
    ["each occasion and strata", strata],
  ];
  return parts.flatMap(([part, has]) => (has ? [part] : []));
}

/** Builds the design matrix part of a recapture choice; constant where the frame lacks what the choice needs. */
export function recapturePart(frame: Frame, part: RecapturePart): Part {
  if (part === "covariates") return covariateRecapture(frame, frame.recaptureCovariates ?? []);
  const base = part.startsWith("each occasion")
    ? occasionRecapture(frame)
    : part.startsWith("effort") && frame.effort !== undefined
      ? effortRecapture(frame, frame.effort)
      : constantRecapture(frame);
  return part.endsWith("strata") ? withStrata(frame, base) : base;
}

/** A design of the frame's shape. */
export function designOf(frame: Frame, survival: Part, recapture: Part | { readonly known: number }): Design {
  const closed = closedYears(frame);
  return {
    strata: frame.strata.length,
    intervals: frame.intervals,
    lengths: frame.lengths,
    survival,
    recapture,
    ...(closed === undefined ? {} : { closed }),
  };
}

/**
 * Compares the recapture parts under one survival per interval, before any covariate is looked at: a weather effect on
 * being seen passes for an effect on surviving where recapture is wrongly held constant. AICc with n = releases.
 * Throws `survival.nobody-met-again` where no count holds an animal met again, `survival.no-effort` and
 * `survival.no-recapture-part` if a part is asked for that the frame has nothing for.
 */
export function compareRecapture(
  data: readonly SufficientStatistics[],
  frame: Frame,
  choice: RecaptureChoice,
): RecaptureComparison {
  const releases = totalReleases(data);
  if (data.every(({ seen }) => seen.every((number) => number === 0))) throw nobodyMetAgain(releases);
  const parts = availableParts(frame);
  const survival = intervalSurvival(frame);
  const fits = parts.map((part) => fitModel(data, designOf(frame, survival, recapturePart(frame, part))));
  const rows = parts.map((part, i) => ({
    part,
    minus2LogL: fits[i].minus2LogL,
    parameters: fits[i].parameters,
    aicc: aicc(fits[i].minus2LogL, fits[i].parameters, releases),
  }));
  // ties and undefined values go to the simpler part, which stands first
  const best = rows.reduce((least, row, i) => (row.aicc < rows[least].aicc ? i : least), 0);
  const index = choice === "choose" ? best : parts.indexOf(choice);
  if (index < 0) throw notAvailable(choice);
  return {
    rows,
    chosen: parts[index],
    because:
      choice === "choose" ? "least AICc under one survival per interval" : "named in the pipeline file",
    intervalFit: fits[index],
  };
}

function notAvailable(choice: RecaptureChoice): InputError {
  if (choice.startsWith("effort"))
    return new InputError({
      name: "survival.no-effort",
      expected: "an effort for every occasion where recapture goes by effort",
      found: "no effort in the occasions",
      where: { cell: "recapture" },
      remedy: "name the effort column under occasions, or choose another recapture part",
    });
  return new InputError({
    name: "survival.no-recapture-part",
    expected:
      choice === "covariates" ? "covariates that recapture goes by" : "two strata or more to tell apart",
    found: choice === "covariates" ? "none in the matrix" : "one stratum",
    where: { cell: "recapture" },
    remedy: "choose another recapture part",
  });
}

function nobodyMetAgain(releases: number): InputError {
  return new InputError({
    name: "survival.nobody-met-again",
    expected: "at least one animal that was met again after its release",
    found: `${releases} releases and no animal met again`,
    where: { cell: "captures" },
    remedy: "check the marks and the dates of occasions: without recaptures nothing can be said of survival",
  });
}
