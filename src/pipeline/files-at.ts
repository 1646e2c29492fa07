import type { Files } from "../effects/effects.ts";
import { filesBelow } from "./effects/files.ts";

/** Files of a folder for commands that look at one file without a pipeline. */
export function filesAt(folder: string): Files {
  return filesBelow(folder);
}
