import type { FindingKind, Severity } from "../data/finding.ts";
import { byKind } from "./given.ts";

/** What would make the result wrong stops; what a person should know warns; what is ordinary is only counted. */
const STATED: Readonly<Partial<Record<FindingKind, Severity>>> = {
  duplicate: "stop",
  "bad-value": "stop",
  "bad-date": "stop",
  unit: "stop",
  "unknown-station": "stop",
  "capture-repeat": "accept",
  "capture-after-loss": "stop",
  "strata-conflict": "stop",
  "never-recaptured": "accept",
  "layer-overlap": "stop",
  "place-outside": "stop",
  "constant-column": "stop",
  "definition-differs": "stop",
  moved: "stop",
};

/** The severity of each kind of finding where the pipeline file says nothing; `warn` unless stated above. */
export const DEFAULT_SEVERITY = byKind((kind): Severity => STATED[kind] ?? "warn");
