import type { Progress } from "../effects/effects.ts";
import { openOutput } from "../publish/folder.ts";
import { stampAt } from "./effects/files.ts";
import { programDigest } from "./effects/program.ts";
import { requireReuseFolder } from "./effects/reuse.ts";
import { nodeDisk, nodeEffects } from "./effects.ts";
import { recording } from "./inputs.ts";
import type { Loaded } from "./load.ts";
import { buildOutput, type Maker } from "./output.ts";
import { type StepNote, stepsIn, withoutReuse } from "./reuse/steps.ts";
import { type RunResult, runStages, type Stage } from "./run.ts";

export interface ExecuteOptions {
  readonly workers: number;
  readonly progress: Progress;
  readonly signal: AbortSignal;
  /** The last stage to run. */
  readonly through: Stage;
  /** Where results of stages and values of layers are kept between runs; nothing is kept without it. */
  readonly reuseFolder?: string;
}

export interface Executed extends RunResult {
  readonly folder: string;
  readonly seconds: number;
  readonly neutralised: number;
  /** What ran, what was reused, and why. */
  readonly steps: readonly StepNote[];
}

/** A whole run: take the output folder, go through the stages, publish everything or nothing. */
export async function execute(loaded: Loaded, maker: Maker, options: ExecuteOptions): Promise<Executed> {
  if (options.reuseFolder !== undefined) requireReuseFolder(options.reuseFolder, loaded.outputFolder);
  const world = nodeEffects({ ...options, dataFolder: loaded.dataFolder });
  const inputs = recording(world.files, stampAt);
  const effects = { ...world, files: inputs.files };
  const steps =
    options.reuseFolder === undefined
      ? withoutReuse()
      : stepsIn(world.reuse, programDigest(), loaded.outputFolder);
  const began = world.clock.now();
  const output = openOutput(nodeDisk(), loaded.outputFolder);
  try {
    const run = await runStages(loaded, effects, options.through, steps);
    const identities = await inputs.identities();
    const { files, neutralised } = await buildOutput(loaded, run, identities, { ...effects, steps }, maker);
    output.publish(files, world.checkInterrupted);
    const seconds = (world.clock.now() - began) / 1000;
    return { ...run, folder: loaded.outputFolder, seconds, neutralised, steps: steps.notes };
  } finally {
    output.close();
  }
}
