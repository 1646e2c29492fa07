import type { Progress } from "../effects/effects.ts";
import type { Style } from "../terminal/style.ts";

/** What the command line knows of its surroundings, handed to each command. */
export interface Terminal {
  readonly style: Style;
  readonly width: number;
  readonly progress: Progress;
  readonly signal: AbortSignal;
  readonly workers: number;
  readonly version: string;
  readonly nodeMajor: number;
}

/** What a command has to say: lines for standard output. */
export type Lines = readonly string[];
