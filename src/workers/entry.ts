import { runTask } from "./tasks.ts";

/** What a worker thread runs: one call of a named task. */
export default runTask;
