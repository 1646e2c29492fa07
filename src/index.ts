/** The library: the stages and what they give, for programs that want covey without its command line. */
export { nodeEffects } from "./pipeline/effects.ts";
export { execute } from "./pipeline/execute.ts";
export { loadPipeline } from "./pipeline/load.ts";
export { planRun } from "./pipeline/plan.ts";
export { runStages, STAGES } from "./pipeline/run.ts";
export { parsePipeline } from "./spec/parse.ts";
export type { Spec } from "./spec/spec.ts";
