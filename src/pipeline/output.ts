import { componentsJson } from "../components/recorded.ts";
import { preparationJson } from "../covariates/recorded.ts";
import type { Effects, FileIdentity, Progress } from "../effects/effects.ts";
import type { FileSet } from "../publish/disk.ts";
import { jsonBytes } from "../publish/json.ts";
import { redactPipeline } from "../publish/redact.ts";
import { withRecord } from "../publish/run-record.ts";
import { tableFiles } from "../publish/table-files.ts";
import type { ReportInput } from "../report/input.ts";
import type { FigureOptions } from "../spec/spec.ts";
import { allTables } from "../tables/all-tables.ts";
import { nodeDisk } from "./effects.ts";
import type { Loaded } from "./load.ts";
import { COMPONENTS_FILE, RECIPES_FILE } from "./recorded.ts";
import type { Steps } from "./reuse/steps.ts";
import type { RunResult } from "./run.ts";
import { positionRule, shownInputs, shownPlaces } from "./sensitive.ts";
import { mapLayer, monthlyPicture } from "./shown.ts";

/** Who made it, for the record. */
export interface Maker {
  readonly version: string;
  readonly nodeMajor: number;
}

/** The page's name within an output folder. */
export const PAGE_FILE = "report.html";

export interface Output {
  readonly files: FileSet;
  /** Text cells that were given an apostrophe so that a spreadsheet does not run them. */
  readonly neutralised: number;
}

/** Every file of a run: tables, data package, page, figures, and the record that holds them together. */
export async function buildOutput(
  loaded: Loaded,
  run: RunResult,
  inputs: readonly FileIdentity[],
  effects: Pick<Effects, "files" | "progress"> & { readonly steps: Steps },
  maker: Maker,
): Promise<Output> {
  const { spec } = loaded;
  const tables = allTables(run.study);
  const written = await tableFiles(
    tables,
    {
      package: {
        name: spec.study.title,
        title: spec.study.title,
        description: "Interval covariates, their diagnosis and the survival screen, made by covey.",
      },
      parquet: ["covariates", "covariates-standardised"],
    },
    nodeDisk(),
  );
  const pipeline = spec.study.sensitive ? redactPipeline(loaded.text, positionRule(spec.study)) : loaded.text;
  const facts = {
    version: maker.version,
    nodeMajor: maker.nodeMajor,
    seed: spec.seed,
    pipeline,
    inputs: shownInputs(inputs, spec),
  };
  const input: ReportInput = {
    ...run.study,
    title: spec.study.title,
    version: maker.version,
    sensitive: spec.study.sensitive,
    coarsenedKm: spec.study.sensitive ? spec.study.coarsenKm : 0,
    animals: run.ingested.captures?.animals ?? Number.NaN,
    shown: run.study.covariates.flatMap(
      (one) => monthlyPicture(one.name, run.set.sources.get(one.name) ?? []) ?? [],
    ),
    places: shownPlaces(run.ingested.places.values(), spec.study),
    stations: run.ingested.sites,
    readAt: spec.covariates.flatMap((one) =>
      one.source === "layer" ? [{ covariate: one.name, place: one.place }] : [],
    ),
    map: await mapLayer(spec, effects.files),
    warn: spec.collinearity.warn,
    cut: spec.collinearity.cluster,
    tables,
    record: JSON.stringify({ ...facts, outputs: undefined }, null, 2),
  };
  const files = new Map(written.files);
  const draw = () => drawPage(input, spec.figures, effects.progress);
  const from = () => ({ "what it shows": input, "kinds of files": spec.figures });
  const { page, figures } = await effects.steps.once("page and figures", from, draw);
  files.set(PAGE_FILE, new TextEncoder().encode(page));
  for (const { path, bytes } of figures) files.set(`figures/${path}`, bytes);
  if (run.study.components !== undefined)
    files.set(COMPONENTS_FILE, jsonBytes(componentsJson(run.study.components)));
  files.set(RECIPES_FILE, jsonBytes(preparationJson(run.study.matrix, run.study.intervals)));
  return { files: withRecord({ ...facts, outputs: files }), neutralised: written.neutralised };
}

/** The page and its figures draw with heavy libraries, which are loaded only where something is drawn. */
async function drawPage(input: ReportInput, kinds: FigureOptions, progress: Progress) {
  const { renderPage } = await import("../report/page.ts");
  const { figureFiles } = await import("../report/export.ts");
  const step = progress.start("drawing the page", 2);
  const page = await renderPage(input);
  step.tick();
  const figures = await figureFiles(input, kinds);
  step.tick();
  step.done();
  return { page, figures };
}
