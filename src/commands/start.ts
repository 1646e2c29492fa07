import { basename, dirname, relative, resolve } from "node:path";
import { InputError } from "../errors.ts";
import { startPipeline } from "../inspect/start.ts";
import { filesBelow } from "../pipeline/effects/files.ts";
import { nodeDisk } from "../pipeline/effects.ts";
import { readPipeline } from "../spec/parse.ts";
import { plain } from "../terminal/style.ts";
import type { Lines, Terminal } from "./io.ts";

export interface StartCommandOptions {
  /** The pipeline file to write; it must not be there yet. */
  readonly to: string;
}

/** `covey start FOLDER`: a first pipeline file from a folder of data files. */
export async function startCommand(
  folder: string,
  { to }: StartCommandOptions,
  { style, progress }: Pick<Terminal, "style" | "progress">,
): Promise<Lines> {
  // Before the work, not only after it; `create` below holds whatever happens in between.
  if (nodeDisk().kind(resolve(to)) !== undefined) throw exists(to);
  if (nodeDisk().kind(resolve(folder)) === undefined) throw noFolder(folder);
  const base = dirname(resolve(to));
  const below = relative(base, resolve(folder)).replaceAll("\\", "/");
  const title = basename(resolve(folder));
  const options = { title, data: below === "" ? "." : below, output: `covey-output/${title}` };
  const start = await startPipeline(filesBelow(folder), options, progress);
  if (!nodeDisk().create(resolve(to), new TextEncoder().encode(start.text))) throw exists(to);
  const files = (paths: readonly string[]) =>
    plain(paths.length === 1 ? paths[0] : `${paths[0]} and ${paths.length - 1} more`);
  return [
    style.strong(`wrote ${plain(to)}`),
    ...start.recognised.map(({ paths, as }) => `  ${as.padEnd(11)} ${files(paths)}`),
    ...start.left.map(({ paths, as }) => style.faint(`  left out    ${files(paths)}: ${plain(as)}`)),
    ...stateLines(start.text, to),
  ];
}

/** Whether the file can be run as it stands, and if not, what must be written first. */
function stateLines(text: string, to: string): Lines {
  try {
    readPipeline(text, basename(to));
    return [`next: read it, then  covey check ${plain(to)}`];
  } catch (error) {
    if (!(error instanceof InputError)) throw error;
    return [`to be completed first: ${plain(error.message)}`];
  }
}

function noFolder(folder: string): InputError {
  return new InputError({
    name: "start.not-found",
    expected: "a folder of data files",
    found: "nothing there",
    where: { file: folder },
    remedy: "give the path of a folder, e.g. sample-data",
  });
}

function exists(to: string): InputError {
  return new InputError({
    name: "start.file-exists",
    expected: "a name for a new pipeline file",
    found: "a file of that name, which is left as it is",
    where: { file: to },
    remedy: "choose another name with --to",
  });
}
