import type { Progress } from "../effects/effects.ts";
import { openOutput } from "../publish/folder.ts";
import { nodeDisk, nodeEffects } from "./effects.ts";
import { recording } from "./inputs.ts";
import type { Loaded } from "./load.ts";
import { buildOutput, type Maker } from "./output.ts";
import { type RunResult, runStages, type Stage } from "./run.ts";

export interface ExecuteOptions {
  readonly workers: number;
  readonly progress: Progress;
  readonly signal: AbortSignal;
  /** The last stage to run. */
  readonly through: Stage;
  /** Where values of layers are kept between runs; nothing is kept without it. */
  readonly reuseFolder?: string;
}

export interface Executed extends RunResult {
  readonly folder: string;
  readonly seconds: number;
  readonly neutralised: number;
}

/** A whole run: take the output folder, go through the stages, publish everything or nothing. */
export async function execute(loaded: Loaded, maker: Maker, options: ExecuteOptions): Promise<Executed> {
  const world = nodeEffects({ ...options, dataFolder: loaded.dataFolder });
  const inputs = recording(world.files);
  const effects = { ...world, files: inputs.files };
  const began = world.clock.now();
  const output = openOutput(nodeDisk(), loaded.outputFolder);
  try {
    const run = await runStages(loaded, effects, options.through);
    const { files, neutralised } = await buildOutput(loaded, run, await inputs.identities(), effects, maker);
    output.publish(files, world.checkInterrupted);
    return { ...run, folder: loaded.outputFolder, seconds: (world.clock.now() - began) / 1000, neutralised };
  } finally {
    output.close();
  }
}
