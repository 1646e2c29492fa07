import type { Interval } from "../data/occasion.ts";
import type { FileIdentity, Progress } from "../effects/effects.ts";
import { InputError } from "../errors.ts";
import { nearestName } from "../math/nearest-name.ts";
import type { FileSet } from "../publish/disk.ts";
import { openOutput } from "../publish/folder.ts";
import { jsonBytes } from "../publish/json.ts";
import { redactPipeline } from "../publish/redact.ts";
import { withRecord } from "../publish/run-record.ts";
import { tableFiles } from "../publish/table-files.ts";
import { type Detection, detect } from "../simulate/detect.ts";
import {
  ownDirections,
  type ResidualEstimate,
  residualEstimable,
  residualEstimate,
} from "../simulate/residual.ts";
import { detectionSentences } from "../simulate/says.ts";
import { type StudyDesign, studyDesign } from "../simulate/study-design.ts";
import { detectionTable, simulatedDesignTable } from "../tables/detection-tables.ts";
import { stampAt } from "./effects/files.ts";
import { nodeDisk, nodeEffects } from "./effects.ts";
import { recording } from "./inputs.ts";
import type { Loaded } from "./load.ts";
import type { Maker } from "./output.ts";
import { runStages } from "./run.ts";
import { positionRule, shownInputs } from "./sensitive.ts";
import { goodnessStage, inflationOf } from "./stages.ts";
import { type Posed, poseScreen } from "./survival-problem.ts";

/** What is asked about a study. */
export interface SimulationRequest {
  /** Names of the covariates that are to act. */
  readonly covariates: readonly string[];
  /** Sizes of their effect, logit per sd. */
  readonly effects: readonly number[];
  /** sd between years that no covariate tells; estimated from the study if undefined. */
  readonly residual: number | undefined;
  readonly replicates: number;
}

export interface SimulateOptions {
  readonly workers: number;
  readonly progress: Progress;
  readonly signal: AbortSignal;
  /** Where the result is written; beside the pipeline's own output if undefined. */
  readonly folder: string | undefined;
}

export interface Simulated {
  readonly detection: Detection;
  readonly sentences: readonly string[];
  /** How the residual sd was estimated; undefined if the user gave it. */
  readonly estimated: ResidualEstimate | undefined;
  readonly design: StudyDesign;
  /** Animals newly marked in a drawn study. */
  readonly animals: number;
  readonly recapture: string;
  readonly intervals: readonly Interval[];
  /** Intervals between occasions: as many, or fewer where some are split into years. */
  readonly between: number;
  readonly folder: string;
  readonly seconds: number;
}

/**
 * What a study can detect: reads and prepares it as a run does, up to the screen as posed, then draws studies from its
 * design and publishes what the procedure made of them. Throws `simulate.no-captures`, `simulate.residual-unknown`,
 * `simulate.unknown-covariate`, `simulate.same-folder` and what the stages throw.
 */
export async function simulate(
  loaded: Loaded,
  request: SimulationRequest,
  maker: Maker,
  options: SimulateOptions,
): Promise<Simulated> {
  const disk = nodeDisk();
  const folder = options.folder ?? `${loaded.outputFolder}-simulated`;
  if (loaded.spec.captures === undefined) throw noCaptures(loaded);
  if (disk.resolve(folder) === disk.resolve(loaded.outputFolder)) throw sameFolder(folder);
  const world = nodeEffects({ ...options, dataFolder: loaded.dataFolder });
  const inputs = recording(world.files, stampAt);
  const effects = { ...world, files: inputs.files };
  const began = world.clock.now();
  const output = openOutput(disk, folder);
  try {
    const { spec } = loaded;
    const run = await runStages(loaded, effects, "aggregate");
    const { intervals } = run.study;
    const posed = poseScreen(spec, run.ingested, run.study.matrix);
    if (posed === undefined) throw noCaptures(loaded);
    const named = positionsOf(request.covariates, posed);
    if (request.residual === undefined && !residualEstimable(posed.problem)) throw noResidual(loaded);
    const estimated =
      request.residual === undefined
        ? residualEstimate(posed.problem, named, posed.recapture.intervalFit)
        : undefined;
    const asked = {
      named,
      directions: ownDirections(posed.problem, named),
      effects: request.effects,
      residual: request.residual ?? estimated?.sd ?? 0,
      replicates: request.replicates,
    };
    const design = studyDesign(posed.problem);
    const detection = await detect(
      design,
      asked,
      { ...spec.screen, ...inflationOf(spec, goodnessStage(run.ingested).goodness) },
      spec.seed,
      effects,
    );
    const simulated: Simulated = {
      detection,
      sentences: detectionSentences(detection),
      estimated,
      design,
      animals: design.strata.reduce((sum, one) => one.marked.reduce((total, m) => total + m, sum), 0),
      recapture: posed.recapture.chosen,
      intervals,
      between: run.ingested.occasions.length - 1,
      folder,
      seconds: (world.clock.now() - began) / 1000,
    };
    output.publish(
      await filesOf(loaded, simulated, await inputs.identities(), maker),
      world.checkInterrupted,
    );
    return simulated;
  } finally {
    output.close();
  }
}

function positionsOf(names: readonly string[], { problem }: Posed): readonly number[] {
  const known = problem.covariates.map((one) => one.name);
  return [...new Set(names)].map((name) => {
    const k = known.indexOf(name);
    if (k < 0) throw unknownCovariate(name, known);
    return k;
  });
}

async function filesOf(
  { spec, text }: Loaded,
  simulated: Simulated,
  inputs: readonly FileIdentity[],
  maker: Maker,
): Promise<FileSet> {
  const { detection, design, intervals, estimated, sentences } = simulated;
  const written = await tableFiles(
    [detectionTable(detection), simulatedDesignTable(design, intervals)],
    {
      package: {
        name: `${spec.study.title} simulated`,
        title: `${spec.study.title}: what it can detect`,
        description:
          "Studies drawn from this study's design and what the survival screen makes of them, by covey.",
      },
      parquet: [],
    },
    nodeDisk(),
  );
  const { detectionFigure } = await import("../report/figures/detection.ts");
  const { drawnAtWidths } = await import("../report/export.ts");
  const figure = detectionFigure(detection);
  const printed = await drawnAtWidths((size) => [detectionFigure(detection, size)], spec.figures);
  const asked = {
    covariates: detection.covariates.map((name, i) => ({
      name,
      direction: detection.directions[i] < 0 ? "lowers survival" : "raises survival",
    })),
    effects: [...new Set(detection.rows.map((one) => one.effect))],
    replicates: detection.replicates,
    residual: { sd: detection.residual, from: estimated ?? "given" },
    recapture: simulated.recapture,
    sentences,
  };
  const files = new Map(written.files);
  files.set("simulation.json", jsonBytes(asked));
  files.set(`figures/${figure.name}.svg`, new TextEncoder().encode(figure.svg));
  for (const { path, bytes } of printed) files.set(`figures/${path}`, bytes);
  const pipeline = spec.study.sensitive ? redactPipeline(text, positionRule(spec.study)) : text;
  const { version, nodeMajor } = maker;
  return withRecord({
    version,
    nodeMajor,
    seed: spec.seed,
    pipeline,
    inputs: shownInputs(inputs, spec),
    outputs: files,
  });
}

function noCaptures({ file }: Loaded): InputError {
  return new InputError({
    name: "simulate.no-captures",
    expected: "a study with captures, whose design can be simulated",
    found: "no captures in the pipeline",
    where: { file, cell: "captures" },
    remedy: "name the captures in the pipeline file",
  });
}

function noResidual({ file, spec, positions }: Loaded): InputError {
  const key = spec.survival.byStratum === undefined ? "split" : "covariates by stratum";
  return new InputError({
    name: "simulate.residual-unknown",
    expected: "the sd of what no covariate tells between years, which captures do not tell in this design",
    found: key,
    where: { file, ...(positions(["survival", key]) ?? {}), cell: `survival > ${key}` },
    remedy: "state it with --residual, for example 0, 0.3 and 0.5 in turn",
  });
}

function unknownCovariate(name: string, known: readonly string[]): InputError {
  const near = nearestName(name, known);
  return new InputError({
    name: "simulate.unknown-covariate",
    expected: "a candidate of the screen, neither dropped, forced nor left out",
    found: JSON.stringify(name),
    where: { cell: "--covariate" },
    remedy: near === undefined ? `name one of ${known.join(", ")}` : `did you mean ${JSON.stringify(near)}?`,
  });
}

function sameFolder(folder: string): InputError {
  return new InputError({
    name: "simulate.same-folder",
    expected: "another folder than the pipeline's own output, which would be replaced",
    found: folder,
    where: { cell: "--output" },
    remedy: "name another folder, or leave --output out",
  });
}
