import { silentProgress } from "../effects/effects.ts";
import { CoveyError } from "../errors.ts";
import { surroundings } from "../pipeline/effects.ts";
import { errorLines } from "../terminal/error.ts";
import { type ProgressStream, terminalProgress } from "../terminal/progress.ts";
import { styleOf } from "../terminal/style.ts";
import type { Terminal } from "./io.ts";

export interface TerminalOptions {
  readonly out: ProgressStream;
  readonly progress: ProgressStream;
  readonly quiet: boolean;
  readonly signal: AbortSignal;
  readonly version: string;
}

const WIDTH = 80;

/** What a command gets to know of the terminal: colour only on one, progress only where it can be drawn. */
export function makeTerminal(options: TerminalOptions): Terminal {
  const around = surroundings();
  return {
    style: styleOf(around.colour && options.out.isTTY === true),
    width: Math.max(60, Math.min(120, options.out.columns ?? WIDTH)),
    progress: options.quiet ? silentProgress : terminalProgress(options.progress, around.ci),
    signal: options.signal,
    workers: around.workers,
    version: options.version,
    nodeMajor: around.nodeMajor,
  };
}

/** A user's mistake or a machine's failure as lines and its exit code; a bug as its stack and 1. */
export function errorText(
  error: unknown,
  out: ProgressStream,
): { readonly text: string; readonly exitCode: number } {
  if (error instanceof CoveyError) {
    const style = styleOf(surroundings().colour && out.isTTY === true);
    return { text: errorLines(error, style, out.columns ?? WIDTH).join("\n"), exitCode: error.exitCode };
  }
  const stack = error instanceof Error ? (error.stack ?? error.message) : String(error);
  return {
    text: `This is a bug in covey, not in your input. Please report it with this text:\n${stack}`,
    exitCode: 1,
  };
}
