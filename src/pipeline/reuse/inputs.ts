import type { CovariateDefinition } from "../../aggregate/options.ts";
import type { Site } from "../../data/series.ts";
import type { Files } from "../../effects/effects.ts";
import type { Spec } from "../../spec/spec.ts";
import type { Ingredients } from "./steps.ts";

/** Station records: what the pipeline says of them and the content of every file. */
export async function ofRecords(
  spec: Spec,
  sites: readonly Site[] | undefined,
  files: Files,
): Promise<Ingredients> {
  const paths = new Set<string>();
  for (const { files: patterns } of spec.records)
    for (const path of await files.list(patterns)) paths.add(path);
  const contents: Record<string, string> = {};
  for (const path of paths) contents[`the file ${path}`] = (await files.identity(path)).sha256;
  return {
    "records:": spec.records,
    "the list of stations": sites,
    "the rule for repeats": spec.duplicates,
    ...contents,
  };
}

/** One covariate: what the pipeline says of it, and the series it is made from. */
export function ofDefinition(definition: CovariateDefinition | undefined): Ingredients {
  if (definition === undefined) return {};
  const { series, second, neighbours, secondNeighbours, ...said } = definition;
  const all = { series, second, neighbours, secondNeighbours };
  return { "its definition": said, "the series it is made from": all };
}
