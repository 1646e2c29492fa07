import { readFileSync } from "node:fs";
import { dirname, resolve } from "node:path";
import { utf8Text } from "../data/utf8.ts";
import { InputError } from "../errors.ts";
import { type ReadPipeline, readPipeline } from "../spec/parse.ts";
import { codeOf, machineError } from "./effects/machine.ts";

/** A pipeline file that was read, with its folders as absolute paths. */
export interface Loaded extends ReadPipeline {
  /** As the user wrote it. */
  readonly file: string;
  readonly text: string;
  readonly dataFolder: string;
  readonly outputFolder: string;
}

/** Reads and checks a pipeline file. `data:` and `output:` are relative to the folder the file stands in. */
export function loadPipeline(file: string): Loaded {
  let bytes: Uint8Array;
  try {
    bytes = readFileSync(file);
  } catch (error) {
    if (codeOf(error) === "ENOENT" || codeOf(error) === "EISDIR")
      throw new InputError({
        name: "pipeline.not-found",
        expected: "a pipeline file",
        found: codeOf(error) === "EISDIR" ? "a folder" : "nothing there",
        where: { file },
        remedy: "give the path of a pipeline file, e.g. pipelines/roost.yaml",
      });
    throw machineError(error, "reading the pipeline file", file);
  }
  const text = utf8Text(bytes, file);
  const read = readPipeline(text, file);
  const base = dirname(resolve(file));
  return {
    ...read,
    file,
    text,
    dataFolder: resolve(base, read.spec.data),
    outputFolder: resolve(base, read.spec.output),
  };
}
