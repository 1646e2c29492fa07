import type { Place } from "../errors.ts";

/** What the pipeline file says of a kind of finding. */
export type Severity = "accept" | "warn" | "stop";

/** Every kind of finding there is; the names are part of the pipeline file. */
export const FINDING_KINDS = [
  "gap",
  "duplicate",
  "bad-value",
  "bad-date",
  "sentinel",
  "unit",
  "unknown-station",
  "capture-outside",
  "capture-repeat",
  "capture-after-loss",
  "strata-conflict",
  "never-recaptured",
  "layer-gap",
  "layer-overlap",
  "layer-valid-area",
  "place-outside",
  "window-empty",
  "window-leak",
  "incomplete",
  "changing-stations",
  "constant-column",
  "incomplete-column",
  "correlated",
  "inflated",
  "ill-conditioned",
  "exact-dependency",
  "at-bound",
  "not-separable",
  "recapture-varies",
  "infilled",
  "excepted",
  "layer-small-place",
  "flagged",
  "flat-run",
  "spike",
  "transience",
  "trap-dependence",
  "out-of-range",
  "definition-differs",
  "layer-bounds",
  "layer-methods",
  "layer-quality",
  "few-fixes",
  "accumulated",
  "part-day",
  "moved",
] as const;

export type FindingKind = (typeof FINDING_KINDS)[number];

/** One record of something a person should know, used by every room, the terminal, the page and the tables. */
export interface Finding {
  readonly kind: FindingKind;
  readonly severity: Severity;
  /** What it is about: a station, covariate, animal, layer. */
  readonly subject: string;
  /** A sentence with the numbers in it. */
  readonly message: string;
  readonly where?: Place;
  /** The offending value as it was written. */
  readonly value?: string;
  /** How many rows, days or pixels it stands for; 1 if not said. */
  readonly count?: number;
  readonly remedy: string;
}

/** A finding before the pipeline's policy has set its severity. */
export type RawFinding = Omit<Finding, "severity">;
