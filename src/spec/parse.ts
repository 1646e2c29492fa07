import { type ErrorFacts, InputError } from "../errors.ts";
import { crossProblems } from "./cross-checks.ts";
import { given, mapValues } from "./given.ts";
import { schemaProblems } from "./issues.ts";
import type { KeyPath } from "./path.ts";
import { pathProblems } from "./path-checks.ts";
import { orderedFacts, type Problem, placeOf, refuseProblems } from "./problems.ts";
import { covariateUnit, readCovariates, readDerived, sourcesOf } from "./read-covariates.ts";
import { readCaptures, readLayer, readPlaces, readReadyMade, readRecords, readStudy } from "./read-inputs.ts";
import {
  readCollinearity,
  readDuplicates,
  readFindings,
  readKeep,
  readRecapture,
  readScreen,
  readStandardise,
  readSurvival,
} from "./read-model.ts";
import { readSensitivity } from "./read-sensitivity.ts";
import { pipelineSchema, type RawPipeline, SCHEMA_NUMBER } from "./schema.ts";
import type { Spec } from "./spec.ts";
import { type Position, readYaml, type YamlText } from "./yaml.ts";

/** A pipeline with what later stages need to point into its file. */
export interface ReadPipeline {
  readonly spec: Spec;
  /**
   * Where the value at a key path of the file (its own keys, list entries from 0) stands; for a path that is not
   * written, the nearest enclosing key. Undefined if not even the first key is written.
   */
  readonly positions: (path: KeyPath) => Position | undefined;
}

function refuseSchemaNumber(yaml: YamlText, found: unknown): void {
  if (typeof found !== "number" || found === SCHEMA_NUMBER) return;
  const newer = found > SCHEMA_NUMBER;
  throw new InputError({
    name: "spec.schema-number",
    expected: `schema number ${SCHEMA_NUMBER} of the pipeline file`,
    found: `${found}, which ${newer ? "is newer than this covey" : "no covey has used"}`,
    where: placeOf(yaml, ["covey"]),
    remedy: newer ? "use a newer covey" : `write covey: ${SCHEMA_NUMBER}`,
  });
}

function toSpec(raw: RawPipeline, yaml: YamlText, problems: Problem[]): Spec {
  const sources = sourcesOf(raw);
  const covariates = readCovariates(raw.covariates, sources, problems);
  const units = new Map(covariates.map((one) => [one.name, covariateUnit(one, sources)]));
  const derive = raw.derive.map((one, i) => readDerived(one, units, ["derive", i], problems));
  return given({
    schema: raw.covey,
    study: readStudy(raw.study),
    data: raw.data,
    output: raw.output,
    seed: raw.seed,
    occasions: raw.occasions === undefined ? undefined : given(raw.occasions),
    captures: raw.captures === undefined ? undefined : readCaptures(raw.captures),
    places: readPlaces(raw.places),
    stations: raw.stations === undefined ? undefined : given(raw.stations),
    records: raw.records.map((one, i) => readRecords(one, yaml, ["records", i], problems)),
    layers: mapValues(raw.layers, readLayer),
    readyMade: readReadyMade(raw["ready-made"]),
    covariates,
    prepare: {
      derive,
      transform: raw.prepare.transform,
      detrend: raw.prepare.detrend,
      incomplete: raw.prepare.incomplete,
      standardise: readStandardise(raw.prepare.standardise),
    },
    collinearity: readCollinearity(raw.collinearity),
    components: { ...raw.components, keep: readKeep(raw.components.keep) },
    survival: readSurvival(raw.survival, raw.captures?.strata ?? []),
    ...readRecapture(raw.recapture),
    screen: readScreen(raw.screen),
    sensitivity: readSensitivity(raw.sensitivity, problems),
    figures: raw.figures,
    findings: readFindings(raw.findings),
    duplicates: readDuplicates(raw.findings),
  });
}

/** The pipeline, or everything that is wrong with it. */
function examine(yaml: YamlText): Spec | readonly Problem[] {
  const { value } = yaml;
  if (typeof value === "object" && value !== null && Object.hasOwn(value, "covey"))
    refuseSchemaNumber(yaml, (value as { readonly covey: unknown }).covey);
  const parsed = pipelineSchema.safeParse(value);
  if (!parsed.success) return schemaProblems(parsed.error.issues, pipelineSchema, yaml);
  const problems: Problem[] = [];
  const spec = toSpec(parsed.data, yaml, problems);
  problems.push(...pathProblems(parsed.data), ...crossProblems(spec));
  return problems.length === 0 ? spec : problems;
}

function isSpec(result: Spec | readonly Problem[]): result is Spec {
  return !Array.isArray(result);
}

/**
 * Reads a pipeline file: YAML, then the schema, then the references within it. `file` is the name that errors show.
 *
 * Throws an InputError, the first in the order of the file, with line, column and key path. Its name is one of those
 * of `readYaml`, or `spec.unknown-key`, `.missing-key`, `.wrong-type`, `.not-a-choice`, `.out-of-range`, `.format`,
 * `.unquoted`, `.key`, `.schema-number`, `.path`, `.unknown-name`, `.repeated-name`, `.conflict`, `.needs`,
 * `.empty-window`.
 */
export function readPipeline(text: string, file: string): ReadPipeline {
  const yaml = readYaml(text, file);
  const result = examine(yaml);
  if (!isSpec(result)) {
    refuseProblems(yaml, result);
    throw new Error("a pipeline was refused without a reason");
  }
  const positions = (path: KeyPath): Position | undefined => {
    const { line, column } = placeOf(yaml, path);
    return line === undefined || column === undefined ? undefined : { line, column };
  };
  return { spec: result, positions };
}

/** The pipeline alone. Throws as `readPipeline` does. */
export function parsePipeline(text: string, file: string): Spec {
  return readPipeline(text, file).spec;
}

/** Every problem of a pipeline file in the order of the file; empty for a good one. YAML slips come alone. */
export function pipelineProblems(text: string, file: string): readonly ErrorFacts[] {
  try {
    const yaml = readYaml(text, file);
    const result = examine(yaml);
    return isSpec(result) ? [] : orderedFacts(yaml, result);
  } catch (error) {
    if (error instanceof InputError) return [error.facts];
    throw error;
  }
}
