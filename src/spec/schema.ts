import { z } from "zod";
import { covariates, derive } from "./schema-covariates.ts";
import { collinearity, components, findings, prepare, screen } from "./schema-model.ts";
import { layer, readyMade, records, stationList } from "./schema-records.ts";
import { sensitivity } from "./schema-sensitivity.ts";
import { captures, figures, occasions, place, recapture, study, survival } from "./schema-study.ts";
import { keys, list, named, number, stated, text } from "./words.ts";

/** The number of the schema that this version of covey reads and writes. */
export const SCHEMA_NUMBER = 1;

/** Everything a pipeline file may say. */
export const pipelineSchema = keys("a pipeline file", {
  covey: z.literal(SCHEMA_NUMBER).meta({
    description: "the number of this file's schema",
    examples: [SCHEMA_NUMBER],
  }),
  study,
  data: stated(text("the folder that holds every input, relative to this file", "../sample-data"), "."),
  output: stated(text("the folder for results, relative to this file", "../out/roost"), "covey-output"),
  seed: stated(number("the seed of everything random", 1, { min: 0, max: 4_294_967_295, whole: true }), 1),
  occasions: occasions.optional(),
  captures: captures.optional(),
  places: stated(named("the places, by name", "the name of a place", place), {}),
  stations: stationList.optional(),
  records: stated(list("the station records", records), []),
  layers: stated(named("the layers, by name", "the name of a layer", layer), {}),
  "ready-made": stated(named("tables of ready-made values, by name", "the name of a table", readyMade), {}),
  covariates,
  derive,
  prepare,
  collinearity,
  components,
  survival,
  recapture,
  screen,
  sensitivity,
  figures,
  findings,
});

/** A pipeline file that fits the schema, its defaults filled in. */
export type RawPipeline = z.output<typeof pipelineSchema>;

/** The JSON Schema (draft-07) of pipeline files, as editors use it. */
export function pipelineJsonSchema(): Record<string, unknown> {
  const { $schema, ...rest } = z.toJSONSchema(pipelineSchema, { io: "input", target: "draft-7" });
  return { $schema, title: "covey pipeline", ...rest };
}

/** The text of `pipelines/schema.json`. */
export function schemaText(): string {
  return `${JSON.stringify(pipelineJsonSchema(), null, 2)}\n`;
}
